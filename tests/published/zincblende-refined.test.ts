// zincblende-refined.test.ts: plane-wave data cut to 30 of 118 bands, free-electron second derivative: are holes right where a plain sum is lost?
//
// Empirical pseudopotential GaAs, form factors of M. L. Cohen and T. K. Bergstresser, Phys. Rev. 141, 789 (1966). The truth was integrated ray
// by ray in NumPy, apart from this program: tests/oracle/zincblende.py, reference/zincblende.json; its rows scatter by 2% among each other.
import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { answer, expectWithin, sampled } from "./runs.js";

interface Reference {
  readonly level_eV: readonly number[];
  readonly temperature_K: readonly number[];
  readonly spin_hall: readonly { readonly value: readonly (readonly number[])[] }[];
}

const reference = JSON.parse(readFileSync(new URL("reference/zincblende.json", import.meta.url), "utf8")) as Reference;

describe("holes half an eV below the valence top of GaAs, from 10^3 points off every symmetric line", () => {
  it("the plain sum is off by half, the refined value is right within its bars, and those are a fraction of it", async () => {
    const grid = await sampled("zincblende", { mesh: [10, 10, 10], offset: [0.31, 0.12, 0.73] });
    const at = ["--from", -0.5, "--to", -0.5, "--points", 1, "--temperature", 300, "--workers", 1];
    const asked = ["--response", "spin:hall", "--samples", 60_000];
    const { responses } = (await answer(["sweep", grid, ...asked, ...at])) as CurvesResult;
    const { value, error, points, unit } = responses[0];
    expect(unit).toBe("(hbar/e) S/cm");
    const [level, warm] = [reference.level_eV.indexOf(-0.5), reference.temperature_K.indexOf(300)];
    const rows = reference.spin_hall.map((row) => row.value[warm][level]);
    const truth = rows.reduce((sum, x) => sum + x, 0) / rows.length;
    expect(Math.abs(points[0][0] - truth)).toBeGreaterThan(25); // measured 103
    expectWithin(value[0][0], truth, 2 * error[0][0], "bars"); // measured 77 with a bar of 7
    expect(error[0][0]).toBeLessThan(truth / 2);
  });
});
