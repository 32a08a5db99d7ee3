// live.test.ts: does a result, read at a temperature it was not asked for, tell what a sweep asked for it tells?
import { expect, it } from "vitest";
import { liveCurves } from "../../src/curves/live.js";
import type { CurvesResult } from "../../src/curves/result.js";
import { packWeights, unpackWeights } from "../../src/curves/spectrum-block.js";
import { answer, sampled } from "../published/runs.js";

const window = ["--from", -0.5, "--to", 0.5, "--points", 101, "--workers", 1];

/** Largest difference of two rows over the largest value. */
const apart = (a: readonly number[], b: readonly number[]): number =>
  Math.max(...a.map((value, i) => Math.abs(value - b[i]))) / Math.max(...b.map(Math.abs));

it.each(["points", "cells", "refine"])(
  "at 350 K, %s: the sweep that was asked for it, on the same nodes",
  async (method) => {
    const grid = await sampled("random", { mesh: [6, 6], set: { periodic: 2, bands: 6 } });
    const swept = async (...kelvins: number[]): Promise<CurvesResult> => {
      const words = ["--response", "charge:xy", "spin:hall", "--method", method, "--temperature", ...kelvins];
      return (await answer(["sweep", grid, ...words, ...window])) as CurvesResult;
    };
    const [cold, warm] = [await swept(0, 400), await swept(0, 350, 400)];
    expect(cold.spectrum?.step_eV).toBe(warm.spectrum?.step_eV);
    const read = liveCurves(cold)!.at(350);
    for (const [r, response] of warm.responses.entries()) {
      expect(apart(read.value[r], response.value[1])).toBeLessThan(1e-9);
      if (method !== "points") expect(apart(read.points![r], response.points[1])).toBeLessThan(1e-9);
      // The larger bar of the neighbouring computed temperatures.
      const bars = cold.responses[r].error;
      expect(read.error[r]).toEqual(bars[0].map((bar, level) => Math.max(bar, bars[1][level])));
    }
    expect(apart(read.electrons, warm.electrons_per_cell[1])).toBeLessThan(1e-12);
    expect(apart(read.states, warm.states_per_eV[1])).toBeLessThan(1e-9);
    expect(liveCurves(cold)!.at(400).value[0]).toEqual(cold.responses[0].value[1]);
  },
);

it("packs every double unchanged, and refuses a text of another length", () => {
  const [base, nodes] = [Float64Array.of(1 / 3, -0), Float64Array.of(Number.MIN_VALUE, -1e300, 5e-17, 7)];
  const shape = { count: 2, columns: ["charge:xy", "states"] };
  expect(unpackWeights(packWeights(base, nodes), shape)).toEqual({ base, nodes });
  expect(unpackWeights(packWeights(base, nodes), { ...shape, count: 3 })).toBeUndefined();
});
