// locate.test.ts: do contributions of cells and pairs sum to the sweep's value, and do they point where the closed forms say?
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { diracModel } from "../../src/samples/dirac.js";
import { haldaneModel } from "../../src/samples/haldane.js";
import { kaneMeleModel } from "../../src/samples/kane-mele.js";
import type { SampleModel } from "../../src/samples/model.js";
import { writePatch } from "../../src/samples/patch.js";
import { writeSample } from "../../src/samples/write.js";
import { type LocateOptions, locate, locateOptions } from "../../src/studies/locate.js";
import { overlaps } from "../../src/studies/locate-parts.js";
import type { LocatedResponse, LocateResult } from "../../src/studies/locate-result.js";
import { sweep, sweepOptions } from "../../src/studies/sweep.js";
import { cartesianK } from "../../src/zone/mesh.js";
import { scratchDirectory } from "../grid/make.js";

const run = { workers: 1 };

interface Patch {
  readonly divisions: Triple;
  readonly cells: readonly number[];
}

function writtenGrid(model: SampleModel, divisions: Triple, offset: Triple, patches: readonly Patch[] = []): string {
  const directory = join(scratchDirectory(), "grid");
  writeSample(model, { directory, divisions, offset });
  for (const [i, { divisions: parts, cells }] of patches.entries())
    writePatch(model, join(directory, `patch-${i}`), { divisions: parts, cells: Int32Array.from(cells) });
  return directory;
}

const located = (directory: string, options: Partial<LocateOptions> = {}): Promise<LocateResult> =>
  locate(directory, locateOptions.parse({ mapPoints: 3, cells: 100_000, ...options }), run);

const sizes = (values: readonly number[]): number => values.reduce((sum, value) => sum + Math.abs(value), 0);

/** Everything that must sum to the value, and the sum of magnitudes that round-off goes with. */
function checkSums(result: LocateResult, response: LocatedResponse, value: number): void {
  const { cells, pairs, by_set, projection, positive, negative, correction } = response;
  const size =
    sizes(cells.map(({ contribution }) => contribution)) +
    sizes(cells.map((cell) => cell.correction)) +
    sizes(pairs.map(({ contribution }) => contribution)) +
    sizes(by_set);
  const rows = projection.flat();
  const sums = {
    sweep: response.value,
    cells: response.cells_sum,
    listed: cells[cells.length - 1].cumulated,
    pairs: response.pairs_sum,
    rankedPairs: pairs[pairs.length - 1].cumulated,
    sets: by_set.reduce((sum, each) => sum + each, 0),
    projection: rows.reduce((sum, each) => sum + each, 0) / rows.length,
    boxes: positive + negative + correction,
  };
  for (const [what, sum] of Object.entries(sums))
    expect(Math.abs(sum - value) / size, `${response.name} ${what}: ${sum}, ${value}`).toBeLessThan(1e-12);
  expect(cells.length).toBe(result.grid.points);
  expect(response.cells_left.count).toBe(0);
}

const random = (dimension: 2 | 3): SampleModel =>
  buildSample("random", { seed: "5", bands: "4", periodic: String(dimension), symmetry: "none" });

const cases: readonly (readonly [string, () => string, Partial<LocateOptions>])[] = [
  ["a layer", () => writtenGrid(random(2), [8, 8, 1], [0, 0, 0]), { method: "refine" }],
  ["a layer at 0 K", () => writtenGrid(random(2), [8, 8, 1], [0.2, 0, 0]), { method: "refine", temperature: [0] }],
  ["a layer, cells", () => writtenGrid(random(2), [8, 8, 1], [0, 0, 0]), { method: "cells", temperature: [0] }],
  ["a layer, points", () => writtenGrid(random(2), [8, 8, 1], [0, 0, 0]), { method: "points" }],
  [
    "a layer, points at 0 K",
    () => writtenGrid(random(2), [8, 8, 1], [0, 0, 0]),
    { method: "points", temperature: [0] },
  ],
  [
    "a layer with neighbouring and single patches",
    () => {
      const patches: Patch[] = [
        { divisions: [2, 2, 1], cells: [27, 28, 35, 0] },
        { divisions: [2, 2, 1], cells: [36] },
        { divisions: [3, 1, 1], cells: [20] },
      ];
      return writtenGrid(random(2), [8, 8, 1], [0, 0, 0], patches);
    },
    { method: "refine" },
  ],
  ["a crystal", () => writtenGrid(random(3), [4, 4, 4], [0, 0, 0]), { method: "refine" }],
  ["a crystal, cells", () => writtenGrid(random(3), [4, 4, 4], [0, 0, 0]), { method: "cells" }],
  [
    "a crystal with a patch, points",
    () => writtenGrid(random(3), [4, 4, 4], [0, 0, 0], [{ divisions: [2, 2, 2], cells: [1, 21, 22] }]),
    { method: "points", temperature: [0] },
  ],
  [
    "a crystal with a patch",
    () => writtenGrid(random(3), [4, 4, 4], [0.5, 0, 0], [{ divisions: [2, 2, 2], cells: [1, 21, 22] }]),
    { method: "refine" },
  ],
];

describe("contributions sum to the sweep's value", () => {
  for (const [name, written, options] of cases)
    it(`of ${name}`, async () => {
      const directory = written();
      const response = ["spin:xy:z", "orbital:yx:z"];
      const level = 0.13;
      // Sums hold at any accuracy.
      const rough = { accuracy: 0.3, samples: 2000, ...options };
      const result = await located(directory, { response, level, ...rough });
      const temperature = options.temperature ?? [300];
      const same = { ...rough, response, temperature, from: level, to: level, points: 1 };
      const curves = await sweep(directory, sweepOptions.parse(same), run);
      for (const [r, each] of result.responses.entries()) checkSums(result, each, curves.responses[r].value[0][0]);
    });

  it("and nothing is made of a level below all bands", async () => {
    const directory = writtenGrid(haldaneModel(), [4, 4, 1], [0, 0, 0]);
    const { responses } = await located(directory, { level: -20 });
    const { value, cells_sum, pairs_sum, positive, negative, concentration } = responses[0];
    for (const sum of [value, cells_sum, pairs_sum, positive, negative]) expect(Math.abs(sum)).toBe(0);
    expect(concentration.every(({ zone, net }) => zone === 0 && Math.abs(net) === 0)).toBe(true);
  });
});

describe("closed forms", () => {
  const mass = 0.1;
  const box = 1.5;

  it("a massive Dirac point is where its curvature is, with its gap", async () => {
    // H = kx sx + ky sy + D sz: E = +- sqrt(k^2 + D^2), curvature of the lower band D / 2 E^3
    // (Xiao, Chang and Niu, Rev. Mod. Phys. 82, 1959 (2010)).
    const directory = writtenGrid(diracModel({ mass, box }), [9, 9, 1], [0, 0, 0]);
    const result = await located(directory, { temperature: [0], path: "-0.4 0.1 / 0 0 / 0.3 0.3", pathPoints: 40 });
    const [{ cells, concentration, path }] = result.responses;
    const [b1, b2, b3] = result.grid.reciprocal;
    const at = (k: Triple): number => Math.hypot(...cartesianK(k, [b1, b2, b3]));
    const energy = (k: Triple): number => Math.hypot(at(k), mass);
    const zone = (2 * box) ** 2;
    const density = (k: Triple): number => (-zone / (2 * Math.PI)) * (mass / (2 * energy(k) ** 3));
    expect(cells[0].k).toEqual([0, 0, 0]);
    expect(at(cells[0].hottest.k)).toBeLessThan(0.04);
    expect(cells[0].hottest.gap_eV).toBeCloseTo(2 * energy(cells[0].hottest.k), 12);
    expect(cells[0].closest?.gap_eV).toBeCloseTo(2 * energy(cells[0].closest?.k ?? [9, 9, 0]), 12);
    expect(cells[0].pair).toMatchObject({ lower: 0, upper: 1 });
    for (const [i, k] of (result.path?.k ?? []).entries()) {
      expect((path ?? [])[i] / density(k)).toBeCloseTo(1, 9);
      expect(result.path?.energies_eV[i][1]).toBeCloseTo(energy(k), 12);
    }
    // Half of the flux of an infinite plane lies within k = sqrt(3) D; on the box a little less is outside.
    const half = concentration.find(({ share }) => share === 0.5);
    const inside = (share: number): number => {
      const whole = (2 / Math.PI) * Math.atan((box * box) / (mass * Math.sqrt(2 * box * box + mass * mass)));
      return (Math.PI * mass * mass * (1 / (1 - share * whole) ** 2 - 1)) / zone;
    };
    expect((half?.zone ?? 0) / inside(0.5)).toBeGreaterThan(0.85);
    expect((half?.zone ?? 9) / inside(0.5)).toBeLessThan(1.15);
  });

  it("Haldane's layer is hottest at the valley of the smaller gap, 2 |3 sqrt(3) t2 sin(phi) - M|", async () => {
    const [t2, M] = [0.1, 0.42];
    const directory = writtenGrid(haldaneModel({ t2, M }), [12, 12, 1], [0, 0, 0]);
    const { responses } = await located(directory, { temperature: [0] });
    const [{ cells }] = responses;
    const valley = cells[0].k.map((x) => Math.round(3 * x));
    expect([
      [1, 2, 0],
      [2, 1, 0],
    ]).toContainEqual(valley);
    const gap = 2 * Math.abs(3 * Math.sqrt(3) * t2 - M);
    expect(cells[0].closest?.gap_eV).toBeGreaterThan(gap - 1e-12);
    expect(cells[0].closest?.gap_eV).toBeLessThan(1.02 * gap);
  });

  it("Kramers pairs of an inversion-symmetric layer are sets, and their common response is told by sets", async () => {
    const directory = writtenGrid(kaneMeleModel({ r: 0, v: 0 }), [6, 6, 1], [0, 0, 0]);
    const { sets, responses } = await located(directory, { response: ["spin:xy:z"] });
    expect(sets).toEqual([
      [0, 1],
      [2, 3],
    ]);
    // Within a set nothing but round-off: of the neighbour defect, whose regularised denominators skip no pair.
    const [{ pairs, value }] = responses;
    expect(pairs[0]).toMatchObject({ lower: 0, upper: 1 });
    expect(pairs[0].contribution).toBeCloseTo(value, 12);
    for (const { contribution } of pairs.slice(1)) expect(Math.abs(contribution)).toBeLessThan(1e-12);
  });
});

describe("overlap", () => {
  it("is whole for two responses that differ by a factor only, and does not depend on what else is asked", async () => {
    // In Haldane's layer the antisymmetric part of charge:xy is charge:xy itself once the lower band is full: xy = -yx pair by pair.
    const directory = writtenGrid(haldaneModel(), [6, 6, 1], [0, 0, 0]);
    const method = "points" as const;
    const { overlap, responses } = await located(directory, { method, response: ["charge:xy", "charge:hall"] });
    const [alone] = (await located(directory, { method, response: ["charge:xy"] })).responses;
    expect(alone.cells.map(({ cell }) => cell).sort()).toEqual(responses[0].cells.map(({ cell }) => cell).sort());
    expect(alone.value).toBeCloseTo(responses[0].value, 12);
    expect(overlap).toHaveLength(1);
    for (const part of [
      overlap[0].cells_common,
      overlap[0].pairs_common,
      overlap[0].cells_cosine,
      overlap[0].pairs_cosine,
    ])
      expect(part).toBeCloseTo(1, 9);
  });

  it("is nothing for contributions of different cells or pairs, and a half for one of two", () => {
    const parts = (name: string, cells: number[], pairs: number[]) => ({ name, cells, pairs });
    const [each] = overlaps([parts("a", [1, 0, 0], [2, 2]), parts("b", [0, -3, 0], [-5, 0])]);
    expect(each).toMatchObject({ cells_common: 0, cells_cosine: 0, pairs_common: 0.5 });
    expect(each.pairs_cosine).toBeCloseTo(-Math.SQRT1_2, 12);
    const [none] = overlaps([parts("a", [0], [0]), parts("b", [1], [1])]);
    expect(none).toMatchObject({ cells_common: 0, cells_cosine: 0, pairs_common: 0, pairs_cosine: 0 });
  });
});
