// dope-sp-square.test.ts: does `dope` find the orbital Hall peaks of the s, p layer where dense plain sums have them?
//
// After D. Go, D. Jo, C. Kim, H.-W. Lee, Phys. Rev. Lett. 121, 086602 (2018); published rows at k_B T = 0.05 eV in sp-square.test.ts. Truth: plain sums
// over 96^2 and 192^2 points, extrapolated in 1/n^2, which reaches those rows to 6e-5 (checked below).
import { describe, expect, it } from "vitest";
import { linearAt } from "../../src/curves/interpolate.js";
import { findPeaks } from "../../src/curves/peaks.js";
import type { CurvesResult } from "../../src/curves/result.js";
import type { DopeResult } from "../../src/studies/dope-result.js";
import { answer, expectWithin, kelvinOf, sampled } from "./runs.js";

const window = ["--response", "orbital:xy:z", "--from", -1.6, "--to", 3.2, "--points", 241];
const kelvin = kelvinOf(0.05);

async function dense(mesh: number): Promise<CurvesResult> {
  const grid = await sampled("sp-square", { mesh: [mesh, mesh] });
  return (await answer(["sweep", grid, ...window, "--method", "points", "--temperature", kelvin])) as CurvesResult;
}

describe("peaks of the square layer, refined from 32^2", () => {
  it("stand within 10 meV, their heights within 2 bars, their dopings within 1%", async () => {
    const [coarse, fine] = [await dense(96), await dense(192)];
    const level = fine.level_eV;
    const far = (a: number[], b: number[]): number[] => b.map((value, i) => (4 * value - a[i]) / 3);
    const truth = far(coarse.responses[0].value[0], fine.responses[0].value[0]);
    const filled = far(coarse.electrons_per_cell[0], fine.electrons_per_cell[0]);
    for (const [mu, exact] of [
      [-1, 1.262926363],
      [-0.5, 0.856834379],
      [0, 0.767910557],
      [1, -0.028243056],
      [3, 0.044943936],
    ])
      expectWithin(truth[level.findIndex((each) => Math.abs(each - mu) < 1e-9)], exact, 6e-5, `truth at ${mu}`);
    // The definition of a peak is tested on closed forms (tests/curves/peaks.test.ts); places and heights here are those of the dense curve.
    const resolution = { temperatureK: kelvin, meshEv: 0, barFactor: 1, leastProminence: 0.02 };
    const summits = findPeaks({ levelsEv: level, value: truth, error: level.map(() => 1e-4) }, resolution);
    expect(summits).toHaveLength(3);

    const grid = await sampled("sp-square", { mesh: [32, 32] });
    const result = (await answer(["dope", grid, ...window, "--temperature", kelvin, "--workers", 1])) as DopeResult;
    const { peaks } = result.responses[0];
    // Measured: levels off by 0.1 meV, heights by 0.2 bars, dopings by 0.02%.
    for (const { levelEv, value } of summits) {
      const peak = peaks.reduce((best, each) =>
        Math.abs(each.level_eV - levelEv) < Math.abs(best.level_eV - levelEv) ? each : best,
      );
      expectWithin(peak.level_eV, levelEv, 0.01, `level of the peak at ${levelEv}`);
      expectWithin(peak.value, value, 2 * peak.error, `height of the peak at ${levelEv}`);
      const doping = linearAt({ x: level, y: filled }, levelEv) - result.electrons_per_cell;
      expectWithin(peak.doping.per_cell, doping, 0.01 * Math.abs(doping), `doping of the peak at ${levelEv}`);
    }
  });
});
