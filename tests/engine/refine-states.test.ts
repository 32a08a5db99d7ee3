// refine-states.test.ts: are the states per eV of a refined sweep the slope of its electrons, warm and cold?
//
// At T > 0 the mean of dN/dmu over two level steps is Simpson's sum of the states, to (step / kT)^4 / 180. At 0 K states are
// resolved by a hat of one level step: then sums of states weigh energies near the ends of a window by a ramp where differences of
// electrons cut sharply, which moves the mean over two steps by no more than a quarter of what the states vary by around there.
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { refined, sampled } from "./refined.js";

const stepEv = 0.01;
const kelvin = [0, 600, 2000];

/** Asserts it at every inner level; returns how much the electrons' slope varies along the cold curve. */
function expectSlope({ electrons_per_cell, states_per_eV }: CurvesResult): number {
  const slopes: number[] = [];
  for (const [t, electrons] of electrons_per_cell.entries()) {
    const states = states_per_eV[t];
    const most = Math.max(...states);
    for (let i = 2; i + 2 < states.length; i++) {
      const slope = (electrons[i + 1] - electrons[i - 1]) / (2 * stepEv);
      const [left, here, right] = states.slice(i - 1, i + 2);
      const around = states.slice(i - 2, i + 3);
      if (t > 0) expect(Math.abs(slope - (left + 4 * here + right) / 6)).toBeLessThan(1e-5 * most);
      else {
        slopes.push(slope);
        const varies = Math.max(...around) - Math.min(...around);
        expect(Math.abs(slope - (left + 2 * here + right) / 4)).toBeLessThan(varies / 4 + 1e-9 * most);
      }
    }
  }
  return Math.max(...slopes) - Math.min(...slopes);
}

describe("states per eV", () => {
  const window = { response: ["charge:xy"], temperature: kelvin, accuracy: 0.3, samples: 2000 };

  it("of a layer: the slope of its electrons", async () => {
    const directory = sampled("haldane", {}, [8, 8, 1]);
    const result = await refined(directory, { ...window, from: -2, to: 2, points: 401 });
    expect(expectSlope(result)).toBeGreaterThan(0.1);
  });

  it("of a crystal: the slope of its electrons", async () => {
    const directory = sampled("random", { seed: "11", bands: "4" }, [4, 4, 4]);
    const result = await refined(directory, { ...window, from: -1, to: 1, points: 201 });
    expect(expectSlope(result)).toBeGreaterThan(0.01);
  });
});
