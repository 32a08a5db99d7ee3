// refine.test.ts: does a refined sweep keep the invariants that hold for any crystal, and say what it spent and lacks?
import { beforeAll, describe, expect, it } from "vitest";
import { planResponses } from "../../src/bands/responses.js";
import type { CurvesResult, Table } from "../../src/curves/result.js";
import { columnCount, fillColumns, mixColumns } from "../../src/engine/columns.js";
import { openGrid } from "../../src/grid/open.js";
import { type SweepOptions, sweep, sweepOptions } from "../../src/studies/sweep.js";
import { createRandom } from "../kernel/hermitian.js";
import { buildOnce } from "../tooling/build-once.js";
import { type Draft, randomDraft, regauged, sampleDraft, shifted, written } from "./grids.js";
import { refined, sampled } from "./refined.js";

const run = (draft: Draft, options: Partial<SweepOptions> = {}): Promise<CurvesResult> =>
  refined(written(draft), { from: -1, to: 1, points: 21, ...options });

const largest = (table: Table): number => Math.max(...table.flat().map(Math.abs));

function differenceOf(a: Table, b: Table): number {
  expect(a.map((row) => row.length)).toEqual(b.map((row) => row.length));
  return Math.max(...a.flatMap((row, t) => row.map((value, i) => Math.abs(value - b[t][i]))));
}

/** Largest difference of values and of bars, in parts of each response's largest value. */
function parts(a: CurvesResult, b: CurvesResult): { value: number; error: number } {
  const worst = { value: 0, error: 0 };
  for (const [i, response] of a.responses.entries())
    for (const table of ["value", "error"] as const) {
      const part = differenceOf(response[table], b.responses[i][table]) / largest(response.value);
      worst[table] = Math.max(worst[table], part);
    }
  return worst;
}

describe("columns", () => {
  it("from sums of currents equal the same sums of separate products", () => {
    const { facts } = openGrid(written(randomDraft({ divisions: [2, 2, 2], bands: 3, seed: 1 })));
    const plan = planResponses(
      ["charge:xy", "charge:hall", "spin:hall", "spin:xy:z", "spin:yy:x", "valley:hall"],
      facts,
    );
    const mixed = mixColumns(plan);
    expect(mixed.columns.length).toBe(plan.columns.length);
    expect(mixed.products.length).toBeLessThan(plan.products.length);
    // A product is linear in its current: of a mixed one take the same sum of separate ones, whatever they are.
    const random = createRandom(5);
    const { bands } = facts;
    const separate = Float64Array.from({ length: plan.products.length * bands }, random);
    const sums = new Float64Array(mixed.products.length * bands);
    for (const [m, { current, field }] of mixed.products.entries())
      for (const { moment, flow, weight } of current) {
        const p = plan.products.findIndex((one) => one.moment === moment && one.flow === flow && one.field === field);
        expect(p).toBeGreaterThanOrEqual(0);
        for (let band = 0; band < bands; band++) sums[m * bands + band] += weight * separate[p * bands + band];
      }
    const squares = Float64Array.from({ length: 3 * bands }, random);
    const [expected, found] = [new Float64Array(columnCount(plan)), new Float64Array(columnCount(plan))];
    for (let band = 0; band < bands; band++) {
      fillColumns(plan, { products: separate, squares, bands }, band, expected);
      fillColumns(mixed, { products: sums, squares, bands }, band, found);
      for (const [c, value] of expected.entries()) expect(found[c]).toBeCloseTo(value, 13);
      expect(found[columnCount(plan) - 1]).toBe(1);
    }
  });
});

describe("invariants", () => {
  const response = ["charge:xy", "spin:hall", "spin:xy:z"];
  const few = { response, accuracy: 0.3, samples: 3000 };

  it("gauge: phases of single bands change nothing", async () => {
    const draft = sampleDraft("random", { seed: "3", bands: "4", symmetry: "none" }, [4, 4, 4]);
    const { value, error } = parts(await run(draft, few), await run(regauged(draft, 1), few));
    expect(value).toBeLessThan(1e-9);
    expect(error).toBeLessThan(1e-9);
  });

  it("gauge: mixing of Kramers pairs changes nothing", async () => {
    const draft = sampleDraft("random", { seed: "4", bands: "6", symmetry: "both" }, [4, 4, 4]);
    const asked = { response: ["spin:hall", "spin:xy:z", "orbital:hall"], accuracy: 0.3, samples: 3000 };
    const { value, error } = parts(await run(draft, asked), await run(regauged(draft, 2), asked));
    expect(value).toBeLessThan(1e-9);
    expect(error).toBeLessThan(1e-9);
  });

  it("gauge: mixing within degenerate sets of any velocity changes nothing", async () => {
    for (const together of [2, 3]) {
      const draft = randomDraft({ divisions: [4, 4, 2], bands: 6, seed: 12, together });
      const { value, error } = parts(await run(draft, few), await run(regauged(draft, 3), few));
      expect(value).toBeLessThan(1e-6);
      expect(error).toBeLessThan(1e-6);
    }
  });

  it("the mesh may be counted from any of its points: the same within the bars", async () => {
    const draft = sampleDraft("random", { seed: "5", bands: "4", symmetry: "none" }, [6, 6, 6]);
    const asked = { response, accuracy: 0.3, samples: 5000 };
    const [a, b] = [await run(draft, asked), await run(shifted(draft, [1, 3, 2]), asked)];
    for (const [r, { value, error_sampling }] of a.responses.entries())
      for (const [t, row] of value.entries())
        for (const [i, x] of row.entries()) {
          const bar = Math.hypot(error_sampling[t][i], b.responses[r].error_sampling[t][i]);
          expect(Math.abs(x - b.responses[r].value[t][i])).toBeLessThan(2 * bar);
        }
  });

  it("time reversal: no charge Hall effect", async () => {
    const draft = sampleDraft("random", { seed: "6", bands: "4", symmetry: "time-reversal" }, [6, 6, 6]);
    const { responses } = await run(draft, { response: ["charge:xy", "charge:hall"], accuracy: 0.3, samples: 5000 });
    for (const { value, error } of responses) {
      for (const [t, row] of value.entries())
        for (const [i, x] of row.entries()) expect(Math.abs(x)).toBeLessThanOrEqual(error[t][i] + 1e-9);
    }
  });

  it("counts electrons: none below all bands, all above; in between as cells do", async () => {
    const draft = sampleDraft("random", { seed: "7", bands: "4", symmetry: "none" }, [6, 6, 6]);
    const wide = { from: -25, to: 25, points: 101, response: ["charge:xy"], accuracy: 0.3, samples: 5000 };
    const [fine, cells] = [await run(draft, wide), await run(draft, { ...wide, method: "cells" })];
    for (const row of fine.electrons_per_cell) {
      expect(Math.abs(row[0])).toBeLessThan(1e-9);
      expect(row[100]).toBeCloseTo(4, 9);
      for (const [i, n] of row.entries()) if (i > 0) expect(n).toBeGreaterThan(row[i - 1] - 2e-2);
    }
    expect(differenceOf(fine.electrons_per_cell, cells.electrons_per_cell)).toBeLessThan(0.05);
    for (const { value } of fine.responses)
      for (const row of value) expect(Math.abs(row[100])).toBeLessThan(1e-9 * largest(value));
  });
});

describe("one and several workers", () => {
  let built: typeof sweep;

  beforeAll(async () => {
    buildOnce();
    const path = new URL("../../dist/studies/sweep.js", import.meta.url).href;
    built = ((await import(path)) as { sweep: typeof sweep }).sweep;
  }, 240_000);

  it("give the same bytes", async () => {
    const directory = sampled("random", { seed: "8", bands: "4" }, [6, 6, 4]);
    const options = sweepOptions.parse({
      response: ["charge:xy", "spin:hall"],
      points: 21,
      accuracy: 0.3,
      samples: 3000,
    });
    const one = JSON.stringify(await built(directory, options, { workers: 1 }));
    expect(JSON.stringify(await built(directory, options, { workers: 2 }))).toBe(one);
    expect(JSON.stringify(await sweep(directory, options, { workers: 1 }))).toBe(one);
  });
});

describe("what it spends and says", () => {
  it("spends more for more accuracy, and the bar falls", async () => {
    const directory = sampled("random", { seed: "9", bands: "4" }, [6, 6, 6]);
    const window = { response: ["spin:xy:z"], from: -1, to: 1, points: 21 };
    const [rough, sharp] = [
      await refined(directory, { ...window, accuracy: 0.5 }),
      await refined(directory, { ...window, accuracy: 0.2 }),
    ];
    expect(sharp.sampling.samples).toBeGreaterThan(rough.sampling.samples);
    const bar = ({ responses }: CurvesResult): number => largest(responses[0].error_sampling);
    expect(bar(sharp)).toBeLessThan(bar(rough));
  });

  it("without second derivatives says so, and the bar is wider", async () => {
    const window = {
      response: ["spin:xy:z"],
      from: -1,
      to: 1,
      points: 21,
      temperature: [300],
      accuracy: 0.3,
      samples: 5000,
    };
    const set = { seed: "9", bands: "4" };
    const full = await refined(sampled("random", set, [8, 8, 8]), window);
    const poor = await refined(sampled("random", set, [8, 8, 8], [0, 0, 0], false), window);
    expect(full.notes.join()).not.toContain("second derivatives");
    expect(poor.notes.join()).toContain("no second derivatives are stored");
    const meanBar = ({ responses }: CurvesResult): number =>
      responses[0].error_model[0].reduce((sum, bar) => sum + bar, 0) / 21;
    expect(meanBar(poor)).toBeGreaterThan(2 * meanBar(full));
  });
});
