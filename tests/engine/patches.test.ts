// patches.test.ts: does a patch count for what it stands for? Closed against the doubled mesh, and against a dense truth.
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { allLinks } from "../../src/engine/links.js";
import { listPatch } from "../../src/grid/list-patch.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { writePatch } from "../../src/samples/patch.js";
import { writeSample } from "../../src/samples/write.js";
import { sweep, sweepOptions } from "../../src/studies/sweep.js";
import { scratchDirectory } from "../grid/make.js";
import { buildOnce } from "../tooling/build-once.js";

buildOnce();

const layer = buildSample("kane-mele", {});
const crystal = buildSample("random", { seed: "5", bands: "4" });
const ask = { from: -0.5, to: 0.5, points: 11, temperature: [0, 300] };
const responses = (periodic: 2 | 3): string[] =>
  periodic === 2 ? ["charge:xy", "spin:xy:z"] : ["charge:xy", "spin:xy:z", "orbital:hall"];

const run = (directory: string, method: string, periodic: 2 | 3): Promise<CurvesResult> =>
  sweep(directory, sweepOptions.parse({ ...ask, response: responses(periodic), method }), { workers: 1 });

/** A parent whose every cell is replaced, in two patches; and the mesh that this is. */
function doubled(periodic: 2 | 3, n: number): readonly [patched: string, mesh: string] {
  const model = periodic === 2 ? layer : crystal;
  const along = (x: number, third: number) => [x, x, periodic === 3 ? x : third] as const;
  const root = scratchDirectory();
  const [patched, mesh] = [join(root, "patched"), join(root, "mesh")];
  // 2 * 0.25 + 1/2 - 1 = 0: the points of the patches are those of the unshifted doubled mesh.
  writeSample(model, { directory: patched, divisions: along(n, 1), offset: along(0.25, 0) });
  const cells = Array.from({ length: n ** periodic }, (_, cell) => cell);
  for (const part of [0, 1]) {
    const own = Int32Array.from(cells.filter((cell) => cell % 2 === part).reverse());
    writePatch(model, join(patched, `part-${part}`), { divisions: along(2, 1), cells: own });
  }
  writeSample(model, { directory: mesh, divisions: along(2 * n, 1) });
  return [patched, mesh];
}

describe("patches that cover every cell equal the doubled mesh", () => {
  for (const periodic of [2, 3] as const)
    for (const method of ["points", "cells"])
      it(`${periodic}D, ${method}: to round-off`, async () => {
        const [patched, mesh] = doubled(periodic, periodic === 2 ? 6 : 3);
        const [a, b] = [await run(patched, method, periodic), await run(mesh, method, periodic)];
        for (const [i, { value }] of a.responses.entries()) {
          const other = b.responses[i].value;
          const scale = Math.max(...other.flat().map(Math.abs), 1e-3);
          for (const [t, row] of value.entries())
            for (const [l, found] of row.entries()) expect(Math.abs(found - other[t][l]) / scale).toBeLessThan(1e-11);
        }
        for (const name of ["electrons_per_cell", "states_per_eV"] as const)
          for (const [t, row] of a[name].entries())
            for (const [l, found] of row.entries()) expect(found).toBeCloseTo(b[name][t][l], 10);
      });

  it("2D, refine: within the bars, neighbours found across cells and patches", async () => {
    const [patched, mesh] = doubled(2, 6);
    const [a, b] = [await run(patched, "refine", 2), await run(mesh, "refine", 2)];
    const [spin, other] = [a.responses[1], b.responses[1]];
    for (const [l, found] of spin.value[1].entries()) {
      // One bar of the mesh itself: both rest on the same stored points, but plan their refinement apart.
      expect(Math.abs(found - other.value[1][l])).toBeLessThan(2 * other.error[1][l]);
      expect(spin.error[1][l]).toBeGreaterThan(0);
    }
  });
});

describe("a patch on some cells", () => {
  it("gives the same bytes with one worker and with two", async () => {
    const grid = join(scratchDirectory(), "grid");
    writeSample(layer, { directory: grid, divisions: [8, 8, 1] });
    writePatch(layer, join(grid, "p"), { divisions: [2, 2, 1], cells: Int32Array.of(20, 21, 40) });
    const path = new URL("../../dist/studies/sweep.js", import.meta.url).href;
    const built = (await import(path)) as { sweep: typeof sweep };
    const options = sweepOptions.parse({ ...ask, response: responses(2) });
    const one = await built.sweep(grid, options, { workers: 1 });
    const two = await built.sweep(grid, options, { workers: 2 });
    expect(JSON.stringify(two)).toBe(JSON.stringify(one));
  });
});

describe("what a patched sweep says of itself", () => {
  it("names the patched cells, and counts split patch cells as the parts of the zone that they are", async () => {
    const [patched] = doubled(2, 6);
    const { notes, sampling } = await run(patched, "refine", 2);
    expect(notes.join("\n")).toContain("patches hold finer data for 36 of the mesh's 36 cells");
    expect(sampling.zone_refined).toBeGreaterThan(0);
    expect(sampling.zone_refined).toBeLessThanOrEqual(1);
    expect(sampling.zone_refined).toBeCloseTo(Number(sampling.cells_split) / (4 * 36), 12);
  });
});

describe("links", () => {
  it("inside one mesh every neighbour counts once", () => {
    expect(allLinks(3)).toEqual({ models: new Float64Array(6).fill(1), truth: 6 });
  });
});

describe("a patch listed twice", () => {
  it("is entered once", () => {
    const grid = join(scratchDirectory(), "grid");
    writeSample(layer, { directory: grid, divisions: [4, 4, 1] });
    writePatch(layer, join(grid, "p"), { divisions: [2, 2, 1], cells: Int32Array.of(1) });
    listPatch(grid, "p");
    listPatch(grid, "p");
    expect(() => listPatch(grid, "q")).toThrow(/cannot be read/);
  });
});
