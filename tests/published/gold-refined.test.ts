// gold-refined.test.ts: does a refined sweep of gold on 12^3 points give the converged spin and orbital Hall conductivities?
//
// Published two-centre gold (gold.test.ts): 257.7 and 1047.8 (hbar/e) S/cm at its level and 300 K; recomputed on dense meshes by
// tests/oracle/gold_curve.py: tests/published/reference/gold.json. By cubic symmetry xy:z equals the rotational mean.
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { answer, expectWithin, sampled } from "./runs.js";

const published = { "spin:xy:z": 257.7, "orbital:xy:z": 1047.8 };

describe("gold, refined from 12^3", () => {
  it("is within 0.3% of the published values, and within 2 bars", async () => {
    const grid = await sampled("metal", { mesh: [12, 12, 12] });
    const window = ["--from", 0, "--to", 0, "--points", 1, "--temperature", 300, "--workers", 1];
    const result = (await answer(["sweep", grid, "--response", ...Object.keys(published), ...window])) as CurvesResult;
    for (const [i, [name, exact]] of Object.entries(published).entries()) {
      const { value, error, unit } = result.responses[i];
      expect(unit).toBe("(hbar/e) S/cm");
      expectWithin(value[0][0], exact, 0.003 * exact, name); // measured 258.33 and 1049.6
      expectWithin(value[0][0], exact, 2 * error[0][0], `${name}, bars`); // bars 1.2 and 11
    }
  });
});
