// reduced.test.ts: does a symmetry-reduced grid give the curves of the full mesh, every tensor component of every kind of moment?
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import type { Triple } from "../../src/grid/grid.js";
import { buildSample } from "../../src/samples/catalogue.js";
import type { SampleModel } from "../../src/samples/model.js";
import { writePatch } from "../../src/samples/patch.js";
import { reducedPoints } from "../../src/samples/symmetry.js";
import { writeSample } from "../../src/samples/write.js";
import { converge, convergeOptions } from "../../src/studies/converge.js";
import { type SweepOptions, sweep, sweepOptions } from "../../src/studies/sweep.js";
import { scratchDirectory } from "../grid/make.js";
import { buildOnce } from "../tooling/build-once.js";
import { bothWays, type CrystalChoice, crystal, lattices } from "./crystals.js";

const response = ["charge", "spin", "orbital", "dipole", "toroidal", "vortex", "coupling"].map((name) => `${name}:all`);

const run = (directory: string, options: Partial<SweepOptions>): Promise<CurvesResult> =>
  sweep(directory, sweepOptions.parse({ from: -2, to: 2, points: 21, temperature: [0, 300], response, ...options }), {
    workers: 1,
  });

const largestOf = (tables: readonly (readonly (readonly number[])[])[]): number =>
  tables.flat(2).reduce((largest, x) => Math.max(largest, Number.isNaN(x) ? 0 : Math.abs(x)), 0);

/** Largest difference of two results over the largest value of any component of the same moment. */
function differenceOf(
  a: CurvesResult,
  b: CurvesResult,
): { readonly of: Map<string, number>; readonly largest: Map<string, number> } {
  expect(a.responses.map(({ name }) => name)).toEqual(b.responses.map(({ name }) => name));
  const largest = new Map<string, number>();
  const of = new Map<string, number>();
  const momentOf = (name: string): string => name.split(":")[0];
  for (const { name, value, points } of b.responses)
    largest.set(momentOf(name), Math.max(largest.get(momentOf(name)) ?? 0, largestOf([value, points])));
  const scale = Math.max(...largest.values());
  for (const [i, { name, ...tables }] of a.responses.entries())
    for (const table of ["value", "points", "error"] as const)
      for (const [t, row] of tables[table].entries())
        for (const [l, x] of row.entries()) {
          const y = b.responses[i][table][t][l];
          expect(Number.isNaN(x)).toBe(Number.isNaN(y));
          // A response that symmetry forbids is a sum that cancels: its terms are as large as those of the others.
          const own = largest.get(momentOf(name)) ?? 0;
          const part = Number.isNaN(x) ? 0 : Math.abs(x - y) / (own > 1e-6 * scale ? own : scale);
          of.set(momentOf(name), Math.max(of.get(momentOf(name)) ?? 0, part));
        }
  for (const name of ["electrons_per_cell", "states_per_eV"] as const) {
    const scaleOf = largestOf([b[name]]);
    const parts = a[name].flatMap((row, t) => row.map((x, l) => Math.abs(x - b[name][t][l]) / scaleOf));
    of.set(name, Math.max(...parts));
  }
  return { of, largest };
}

const cubic: Triple = [4, 4, 4];
const layered: Triple = [4, 4, 2];
const centred: Triple = [0, 0, 0];

interface Case {
  readonly choice: CrystalChoice;
  readonly divisions: Triple;
  readonly offset?: Triple;
  /** Operations: rotations that are left, twice where time reversal is among them. */
  readonly order: number;
  readonly charge: boolean;
}

// Exchange along z leaves 4/mm'm' of a cubic or tetragonal crystal and 6/mm'm' of a hexagonal one: as many operations as 4/mmm, 6/mmm.
// No bands of these meshes lie closer than 5 meV without being one set: round-off grows as 1 over their distance.
const cases: Record<string, Case> = {
  fcc: { choice: { lattice: "fcc" }, divisions: cubic, order: 96, charge: false },
  bcc: { choice: { lattice: "bcc" }, divisions: cubic, order: 96, charge: false },
  hexagonal: { choice: { lattice: "hexagonal" }, divisions: layered, order: 48, charge: false },
  tetragonal: { choice: { lattice: "tetragonal" }, divisions: layered, order: 32, charge: false },
  "tetragonal, moved mesh": {
    choice: { lattice: "tetragonal" },
    divisions: layered,
    offset: [0.5, 0.5, 0.5],
    order: 32,
    charge: false,
  },
  "hexagonal, moved along c": {
    choice: { lattice: "hexagonal" },
    divisions: [4, 4, 3],
    offset: [0, 0, 0.5],
    order: 48,
    charge: false,
  },
  "bcc magnet": { choice: { lattice: "bcc", exchangeEv: 0.7 }, divisions: cubic, order: 16, charge: true },
  "hexagonal magnet": {
    choice: { lattice: "hexagonal", exchangeEv: 0.6 },
    divisions: layered,
    order: 24,
    charge: true,
  },
  "polar hexagonal": { choice: { lattice: "hexagonal", polarEv: 0.5 }, divisions: layered, order: 24, charge: false },
  "polar tetragonal magnet": {
    choice: { lattice: "tetragonal", polarEv: 0.5, exchangeEv: 0.7 },
    divisions: layered,
    order: 8,
    charge: true,
  },
};

describe("points and cells: every component equals the full mesh's to round-off", () => {
  for (const [name, { choice, divisions, offset = centred, order, charge }] of Object.entries(cases))
    it(`${name}: ${order} operations`, async () => {
      const both = bothWays(crystal(choice), divisions, offset);
      expect(both.order).toBe(order);
      expect(both.order).toBeLessThanOrEqual(2 * lattices[choice.lattice].rotations);
      for (const method of ["points", "cells"] as const) {
        const { of, largest } = differenceOf(await run(both.reduced, { method }), await run(both.full, { method }));
        for (const [what, part] of of) expect(part, what).toBeLessThan(1e-10);
        const spin = largest.get("spin") ?? 0;
        expect(spin).toBeGreaterThan(1);
        if (charge) expect(largest.get("charge")).toBeGreaterThan(1e-3 * spin);
        else expect(largest.get("charge")).toBeLessThan(1e-9 * spin);
      }
    });
});

/** A sample of the catalogue, all points and one of every star. */
function sampledBothWays(model: SampleModel, divisions: Triple, offset: Triple = centred) {
  const root = scratchDirectory();
  const reduced = reducedPoints(model, { ...model, divisions, offset });
  const [full, part] = [join(root, "full"), join(root, "reduced")];
  writeSample(model, { directory: full, divisions, offset });
  writeSample(model, { directory: part, divisions, offset, reduced });
  return { full, reduced: part };
}

/** The same structure, words and, to 1e-9 of themselves or of 1, numbers. */
function expectClose(a: unknown, b: unknown): void {
  if (typeof a === "number" && typeof b === "number" && !Number.isNaN(a))
    expect(Math.abs(a - b)).toBeLessThanOrEqual(1e-9 * Math.max(1, Math.abs(b)));
  else if (typeof a === "object" && typeof b === "object" && a !== null && b !== null) {
    expect(Object.keys(a)).toEqual(Object.keys(b));
    for (const [i, each] of Object.values(a).entries()) expectClose(each, Object.values(b)[i]);
  } else expect(a).toEqual(b);
}

/** Differences of the curves are within the bars of both. */
function expectWithinBars(a: CurvesResult, b: CurvesResult): void {
  for (const [i, { value, error }] of a.responses.entries())
    for (const [t, row] of value.entries())
      for (const [l, x] of row.entries()) {
        const other = b.responses[i];
        expect(error[t][l]).toBeGreaterThan(0);
        expect(Math.abs(x - other.value[t][l])).toBeLessThan(error[t][l] + other.error[t][l]);
      }
}

describe("refine: within the bars of the full mesh's result", () => {
  it("a layer without inversion (Kane and Mele's)", async () => {
    const both = sampledBothWays(buildSample("kane-mele", {}), [12, 12, 1]);
    const ask = { method: "refine" as const, from: -0.5, to: 0.5, response: ["spin:xy:z", "spin:hall"] };
    expectWithinBars(await run(both.reduced, ask), await run(both.full, ask));
  });

  it("a layer that breaks time reversal (Haldane's)", async () => {
    const both = sampledBothWays(buildSample("haldane", {}), [12, 12, 1]);
    const ask = { method: "refine" as const, from: -1, to: 1, response: ["charge:xy"] };
    expectWithinBars(await run(both.reduced, ask), await run(both.full, ask));
  });

  it("a magnetic crystal, second derivatives turned with the rest", async () => {
    const both = bothWays(crystal({ lattice: "tetragonal", exchangeEv: 0.7 }), [6, 6, 4], centred, "array");
    const ask = { method: "refine", accuracy: 0.1, samples: 20_000, points: 5 } as const;
    const asked = { ...ask, temperature: [1000], response: ["charge:xy", "spin:xy:z"] };
    expectWithinBars(await run(both.reduced, asked), await run(both.full, asked));
  });
});

describe("what else reads a grid", () => {
  const model = buildSample("kane-mele", {});
  const ask = { from: -0.5, to: 0.5, response: ["charge:xy", "spin:xy:z", "spin:yx:z", "spin:xx:y"] };

  it("patches replace cells of a reduced parent as of the full one", async () => {
    const both = sampledBothWays(model, [8, 8, 1]);
    for (const directory of [both.full, both.reduced]) {
      writePatch(model, join(directory, "fine"), { divisions: [3, 3, 1], cells: Int32Array.of(20, 21, 43, 44) });
      writePatch(model, join(directory, "finer"), { divisions: [4, 4, 1], cells: Int32Array.of(22) });
    }
    for (const method of ["points", "cells"] as const) {
      const { of } = differenceOf(
        await run(both.reduced, { ...ask, method }),
        await run(both.full, { ...ask, method }),
      );
      for (const [what, part] of of) expect(part, what).toBeLessThan(1e-10);
    }
    const refine = { ...ask, method: "refine" as const, response: ["spin:xy:z"] };
    expectWithinBars(await run(both.reduced, refine), await run(both.full, refine));
  });

  it("sub-meshes, shifted or not, are those of the full mesh", async () => {
    const both = sampledBothWays(model, [12, 12, 1]);
    for (const shift of [centred, [1, 0, 0], [2, 1, 0]] as const) {
      const options = sweepOptions.parse({ ...ask, points: 11, method: "cells" });
      const view = { stride: 3, shift };
      const [a, b] = [both.reduced, both.full].map((directory) => sweep(directory, options, { workers: 1 }, { view }));
      const { of } = differenceOf(await a, await b);
      for (const [what, part] of of) expect(part, what).toBeLessThan(1e-10);
    }
  });

  it("converge finds the same meshes, values and errors", async () => {
    const both = sampledBothWays(model, [12, 12, 1]);
    const options = convergeOptions.parse({
      from: -0.5,
      to: 0.5,
      points: 11,
      method: "points",
      response: ["spin:xy:z"],
    });
    const [a, b] = [
      await converge([both.reduced], options, { workers: 1 }),
      await converge([both.full], options, { workers: 1 }),
    ];
    expect(a.meshes).toEqual(b.meshes);
    expectClose(a.responses, b.responses);
  });

  it("gives the same bytes with one worker and with three", async () => {
    buildOnce();
    const path = new URL("../../dist/studies/sweep.js", import.meta.url).href;
    const built = (await import(path)) as { sweep: typeof sweep };
    const both = bothWays(crystal({ lattice: "bcc", exchangeEv: 0.7 }), cubic, centred);
    for (const method of ["points", "cells"] as const) {
      const options = sweepOptions.parse({ method, response: ["charge:xy", "spin:hall", "dipole:xy:z"], points: 21 });
      const results = await Promise.all([1, 3].map((workers) => built.sweep(both.reduced, options, { workers })));
      expect(JSON.stringify(results[1])).toBe(JSON.stringify(results[0]));
    }
  });
});
