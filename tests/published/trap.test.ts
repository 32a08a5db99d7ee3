// trap.test.ts: does a refined sweep stay out of the trap of points on which bands split by a hair?
//
// Gold's two-centre crystal with a spin-orbit strength of 0.1 meV. On lines and planes of symmetry bands then split by about that, and one
// stored point there stands for curvatures of 1 / (0.1 meV)^2; but at 300 K the spin Hall effect is of first order in the strength: of the
// order 1 (hbar/e) S/cm. Independent plain sums of tests/oracle/gold.py's crystal over 16^3 points at random offsets, ten of them, off every
// symmetric line: between -0.5 and 0.2 at -3.2 eV, between 0.5 and 1.1 at -2.4 eV.
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { answer, expectWithin, sampled } from "./runs.js";

describe("gold with a spin-orbit strength of 0.1 meV, 6^3", () => {
  it("the plain sum is off by thousands and more; the refined value is nothing within 2 bars, and below 10", async () => {
    const grid = await sampled("metal", { mesh: [6, 6, 6], set: { xi: 0.0001 } });
    for (const level of [-3.2]) {
      const at = ["--from", level, "--to", level, "--points", 1, "--temperature", 300, "--workers", 1];
      const asked = ["--response", "spin:hall", "--samples", 10_000];
      const { responses } = (await answer(["sweep", grid, ...asked, ...at])) as CurvesResult;
      const { value, error, points, unit } = responses[0];
      expect(unit).toBe("(hbar/e) S/cm");
      expect(Math.abs(points[0][0])).toBeGreaterThan(1000); // measured -7.4e6
      expectWithin(value[0][0], 0, 10, `${level} eV`); // measured 3.4
      expectWithin(value[0][0], 0, 2 * error[0][0], `${level} eV, bars`); // bar 5.9
    }
  });
});
