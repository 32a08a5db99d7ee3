// two-centre-response.test.ts: does gold, sampled and summed by hand, give the responses and filling known for its parameters?
import { describe, expect, it } from "vitest";
import { rydbergEv } from "../../src/base/constants.js";
import { twoCentreModel } from "../../src/samples/two-centre.js";
import { readTwoCentreFile } from "../../src/samples/two-centre-file.js";
import { plainSum } from "./two-centre-sum.js";

const gold = readTwoCentreFile("data/metals/gold.json");

describe("gold on a plain 12^3 mesh", () => {
  // Brute force in NumPy with an independent program (orbital frames by rotation, complex S^(-1/2), batched eigh):
  // spin:hall 271.137, orbital:hall 1052.193 at 300 K; converged values 257.7 and 1047.8. Same sign and size as published for gold.
  const sums = plainSum(twoCentreModel(gold, { secondDerivatives: false }), 12, 300);
  const fermiEv = 0.290343 * rydbergEv;

  it("gives the spin and the orbital Hall conductivity", () => {
    expect(sums.spin(fermiEv)).toBeCloseTo(271.137, 2);
    expect(sums.orbital(fermiEv)).toBeCloseTo(1052.193, 2);
  });

  it("holds eleven electrons, to the accuracy of the mesh", () => {
    expect(Math.abs(sums.electrons(fermiEv) - 11)).toBeLessThan(0.03);
  });
});
