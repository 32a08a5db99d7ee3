// patches.test.ts: are patches read where they belong, and is what cannot be a patch of its parent refused by name?
import { mkdirSync, readFileSync, renameSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { listPatch } from "../../src/grid/list-patch.js";
import { openGrid } from "../../src/grid/open.js";
import { openReader } from "../../src/grid/reader.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { writePatch } from "../../src/samples/patch.js";
import { writeSample } from "../../src/samples/write.js";
import { fractionalK } from "../../src/zone/mesh.js";
import { scratchDirectory } from "./make.js";

const model = buildSample("haldane", {});
const divide = { divisions: [2, 3, 1] as const };

/** A parent of 4 x 3 points, and in it a patch of these cells, not yet listed where `listed` is false. */
function withPatch(cells: readonly number[], name = "patch-01"): string {
  const parent = join(scratchDirectory(), "grid");
  writeSample(model, { directory: parent, divisions: [4, 3, 1], offset: [0.25, 0, 0] });
  writePatch(model, join(parent, name), { ...divide, cells: Int32Array.from(cells) });
  return parent;
}

/** Changes the JSON in a file. */
function edit(path: string, change: (manifest: Record<string, never>) => void): void {
  const manifest = JSON.parse(readFileSync(path, "utf8"));
  change(manifest);
  writeFileSync(path, JSON.stringify(manifest));
}

function faultOf(action: () => unknown): string {
  try {
    action();
  } catch (error) {
    if (isFault(error)) return `${error.kind}: ${error.message}`;
    throw error;
  }
  return "no fault";
}

describe("a patch", () => {
  it("holds the points that the format says, cell after cell", () => {
    const { facts, patches } = openGrid(withPatch([7, 2]));
    expect(facts.points).toBe(12);
    expect(patches).toHaveLength(1);
    const patch = patches[0].facts;
    expect(patch.points).toBe(12);
    for (const [order, [i1, i2]] of [
      [2, 1],
      [0, 2],
    ].entries())
      for (let s1 = 0; s1 < 2; s1++)
        for (let s2 = 0; s2 < 3; s2++) {
          // k = (i + offset + (s + 1/2) / m - 1/2) / n
          const k = fractionalK(order * 6 + s1 * 3 + s2, patch);
          expect(k[0]).toBeCloseTo((i1 + 0.25 + (s1 + 0.5) / 2 - 0.5) / 4, 14);
          expect(k[1]).toBeCloseTo((i2 + (s2 + 0.5) / 3 - 0.5) / 3, 14);
          expect(k[2]).toBe(0);
        }
  });

  it("changes the parent's hash, and is read as a grid is", () => {
    const parent = withPatch([5]);
    const { facts, patches } = openGrid(parent);
    const reader = openReader(patches[0], { velocity: [0], moments: [], hessian: false });
    expect(reader.read(0, 6).count).toBe(6);
    reader.close();
    edit(join(parent, "bandgrid.json"), (manifest) => {
      delete manifest.patches;
    });
    expect(openGrid(parent).patches).toEqual([]);
    expect(openGrid(parent).facts.sha256).not.toBe(facts.sha256);
  });

  it("is ignored by views, which show how the mesh converges", () => {
    const parent = join(scratchDirectory(), "grid");
    writeSample(model, { directory: parent, divisions: [4, 4, 1] });
    writePatch(model, join(parent, "p"), { divisions: [2, 2, 1], cells: Int32Array.of(3) });
    expect(openGrid(parent, { stride: 2, shift: [0, 1, 0] }).patches).toEqual([]);
  });
});

describe("refused, each by name", () => {
  const manifest = "bandgrid.json";
  const cases: readonly (readonly [what: string, spoil: (parent: string) => void, message: RegExp])[] = [
    ["a patch that is not there", (p) => renameSync(join(p, "patch-01"), join(p, "elsewhere")), /cannot be read/],
    [
      "a name that leads out",
      (p) =>
        edit(join(p, manifest), (m) => {
          Object.assign(m, { patches: ["../grid"] });
        }),
      /leads out of the directory/,
    ],
    [
      "one cell in two patches",
      (p) => {
        mkdirSync(join(p, "more"));
        writePatch(model, join(p, "other"), { ...divide, cells: Int32Array.of(7) });
      },
      /both replace cell 7/,
    ],
    [
      "other bands",
      (p) =>
        edit(join(p, "patch-01", manifest), (m) => {
          Object.assign(m, { electronsPerBand: 2 });
        }),
      /electronsPerBand is 2, the parent's 1/,
    ],
    [
      "another lattice",
      (p) =>
        edit(join(p, "patch-01", manifest), (m: { lattice?: { vectors: number[][] } }) => {
          if (m.lattice) m.lattice.vectors[0][0] += 0.01;
        }),
      /lattice vector 1 differs/,
    ],
    [
      "a cell beyond the mesh",
      (p) => writeCells(p, [12, 2]),
      /entry 0 of "cells\.i32" is 12: the parent has cells 0 to 11/,
    ],
    ["a cell below zero", (p) => writeCells(p, [-1, 2]), /entry 0 .* is -1/],
    ["a cell listed twice", (p) => writeCells(p, [2, 2]), /cell 2 is listed twice/],
    ["fewer cells than points", (p) => writeCells(p, [2]), /holds .* bytes/],
    [
      "broken numbers of cells",
      (p) => writeFileSync(join(p, "patch-01", "cells.i32"), "12345"),
      /expected one file of 4 bytes/,
    ],
    [
      "a mesh beside the patch",
      (p) =>
        edit(join(p, "patch-01", manifest), (m) => {
          Object.assign(m, { mesh: { divisions: [2, 2, 1] } });
        }),
      /this is no patch/,
    ],
  ];
  const writeCells = (parent: string, cells: number[]): void => {
    writeFileSync(join(parent, "patch-01", "cells.i32"), Buffer.from(Int32Array.from(cells).buffer));
  };
  for (const [what, spoil, message] of cases)
    it(what, () => {
      const parent = withPatch([7, 2]);
      expect(
        faultOf(() => {
          spoil(parent);
          openGrid(parent);
        }),
      ).toMatch(message);
    });

  it("a patch opened by itself", () => {
    expect(faultOf(() => openGrid(join(withPatch([1]), "patch-01")))).toMatch(/this is a patch.*parent/);
  });

  it("a patch of another model, of which nothing is left", () => {
    const parent = join(scratchDirectory(), "grid");
    writeSample(model, { directory: parent, divisions: [4, 3, 1] });
    const other = buildSample("haldane", { M: "0.5" });
    expect(faultOf(() => writePatch(other, join(parent, "p"), { ...divide, cells: Int32Array.of(1) }))).toMatch(
      /was not made from this model/,
    );
    expect(openGrid(parent).patches).toEqual([]);
  });

  it("a patch that does not fit is not listed, and the manifest stays as it was", () => {
    const parent = withPatch([1]);
    const before = readFileSync(join(parent, manifest), "utf8");
    mkdirSync(join(parent, "empty"));
    expect(faultOf(() => listPatch(parent, "empty"))).toMatch(/bandgrid\.json/);
    expect(readFileSync(join(parent, manifest), "utf8")).toBe(before);
  });
});
