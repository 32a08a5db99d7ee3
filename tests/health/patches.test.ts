// patches.test.ts: is a patch in another unit than its parent named, and a sound one left in peace, wherever it lies?
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openGrid } from "../../src/grid/open.js";
import { checkPatches } from "../../src/health/patches.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { writePatch } from "../../src/samples/patch.js";
import { writeSample } from "../../src/samples/write.js";
import { mistakesOf } from "../../src/studies/quick-health.js";
import { scratchDirectory } from "../grid/make.js";

type Entry = { unit: string };
type Change = (arrays: { energy: Entry; velocity: Entry; hessian: Entry; moments: { spin: Entry } }) => void;

function patched(
  name: string,
  mesh: readonly [number, number, number],
  cells: readonly number[],
  change?: Change,
): string {
  const model = buildSample(name, {});
  const grid = join(scratchDirectory(), "grid");
  writeSample(model, { directory: grid, divisions: mesh });
  const divisions = [2, 2, mesh[2] === 1 ? 1 : 2] as const;
  writePatch(model, join(grid, "p"), { divisions, cells: Int32Array.from(cells) });
  if (change !== undefined) {
    const path = join(grid, "p", "bandgrid.json");
    const manifest = JSON.parse(readFileSync(path, "utf8"));
    change(manifest.arrays);
    writeFileSync(path, JSON.stringify(manifest));
  }
  return grid;
}

const found = (grid: string): string[] =>
  checkPatches(openGrid(grid)).map(({ message }) => message.split(" of patch")[0]);

describe("sound patches", () => {
  const all = (n: number): number[] => Array.from({ length: n }, (_, i) => i);
  for (const [name, mesh, cells] of [
    ["kane-mele", [6, 6, 1], [14]],
    ["kane-mele", [6, 6, 1], all(36)],
    ["haldane", [6, 6, 1], [0]],
    ["dirac", [6, 6, 1], [0]],
    ["rashba", [6, 6, 1], [0]],
    ["sp-square", [6, 6, 1], [0, 7]],
    ["luttinger", [4, 4, 4], [0]],
    ["metal", [4, 4, 4], [0, 21]],
    ["random", [4, 4, 4], [1, 5, 9]],
  ] as const)
    it(`${name}, ${cells.length} cells from ${cells[0]}: nothing`, () => {
      expect(found(patched(name, mesh, cells))).toEqual([]);
    });
});

describe("patches in another unit", () => {
  for (const [what, change, arrays] of [
    ["energies", (a) => Object.assign(a.energy, { unit: "rydberg" }), ["energy"]],
    ["velocities", (a) => Object.assign(a.velocity, { unit: "hartree*bohr" }), ["velocity"]],
    ["spin", (a) => Object.assign(a.moments.spin, { unit: "half-hbar" }), ["moments.spin"]],
    ["second derivatives", (a) => Object.assign(a.hessian, { unit: "rydberg*bohr^2" }), ["hessian"]],
  ] as readonly (readonly [string, Change, readonly string[]])[])
    it(`${what}: named, and told before anything is computed`, () => {
      const grid = patched("kane-mele", [6, 6, 1], [14, 20], change);
      expect(found(grid)).toEqual(arrays);
      expect(mistakesOf(grid).join("\n")).toContain(`${arrays[0]} of patch "p"`);
    });
});
