// patches.ts: which finer data replace which cells of a parent's mesh? Finds, reads and checks the patches that a grid lists.
import { readFileSync, realpathSync, statSync } from "node:fs";
import { isAbsolute, join, relative, sep } from "node:path";
import { dataFault } from "../base/errors.js";
import { findFiles } from "./files.js";
import type { GridFacts, PatchCells, Triple } from "./grid.js";
import { quoted, reasonOf } from "./jsontext.js";
import type { Manifest } from "./manifest.js";

/** Points that a patch stores for each cell. */
export const pointsPerCell = ({ divisions }: Pick<PatchCells, "divisions">): number =>
  divisions[0] * divisions[1] * divisions[2];

const cellsPerFile = 1 << 28;

/**
 * The cells of the patch in `directory`: 32-bit little-endian whole numbers. Throws a data Fault where the file does not hold such
 * numbers, or one that is no cell of the parent, or one twice.
 */
export function readPatchCells(
  directory: string,
  name: string,
  patch: NonNullable<Manifest["patch"]>,
  parent: Pick<GridFacts, "divisions" | "periodic">,
): PatchCells {
  const { divisions } = patch;
  const where = `patch ${quoted(name)}`;
  if (parent.periodic === 2 && divisions[2] !== 1)
    throw dataFault(`${where}: patch.divisions[2] is ${divisions[2]}: a layer is not divided along b3`, "Make it 1.");
  const bytes = cellBytes(directory, where, patch.cells);
  const cells = Int32Array.from({ length: bytes.length / 4 }, (_, i) => bytes.readInt32LE(4 * i));
  const all = parent.divisions[0] * parent.divisions[1] * parent.divisions[2];
  const seen = new Set<number>();
  for (const [i, cell] of cells.entries()) {
    if (cell < 0 || cell >= all)
      throw dataFault(
        `${where}: entry ${i} of ${quoted(patch.cells)} is ${cell}: the parent has cells 0 to ${all - 1}`,
        "List flat indices (i1 n2 + i2) n3 + i3 of the parent's mesh.",
      );
    if (seen.has(cell)) throw dataFault(`${where}: cell ${cell} is listed twice`, "List each cell once.");
    seen.add(cell);
  }
  return { name, divisions, cells };
}

function cellBytes(directory: string, where: string, file: string): Buffer {
  const [found, ...more] = findFiles(directory, `${where}, cells`, file);
  const sized = more.length === 0 && found.bytes > 0 && found.bytes % 4 === 0 && found.bytes / 4 <= cellsPerFile;
  if (!sized)
    throw dataFault(
      `${where}: ${quoted(file)} holds ${found.bytes} bytes${more.length > 0 ? " and is not the only match" : ""}: expected one file of 4 bytes a cell`,
      "Write the cells' flat indices as 32-bit little-endian whole numbers.",
    );
  try {
    return readFileSync(found.path);
  } catch (error) {
    throw dataFault(`${where}: ${quoted(file)} cannot be read: ${reasonOf(error)}`, "Make the file readable.", error);
  }
}

/** The directory of a patch that a parent in `directory` lists. Throws a data Fault for a name that leads out of it, or to nothing. */
export function patchDirectory(directory: string, name: string): string {
  const fail = (what: string): never => {
    throw dataFault(
      `patches: ${quoted(name)} ${what}`,
      "Name directories inside the parent's directory, each a band grid with a patch in place of a mesh.",
    );
  };
  if (isAbsolute(name) || /^[A-Za-z]:[\\/]/.test(name) || name.split(/[\\/]/).includes("..") || name.includes("\0"))
    return fail("leads out of the directory");
  try {
    const inside = relative(realpathSync(directory), realpathSync(join(directory, name)));
    if (inside === "" || inside.split(sep)[0] === ".." || isAbsolute(inside)) return fail("leads out of the directory");
    if (!statSync(join(directory, name)).isDirectory()) return fail("is not a directory");
  } catch (error) {
    if (error instanceof Error && "code" in error) return fail(`cannot be read: ${reasonOf(error)}`);
    throw error;
  }
  return join(directory, name);
}

/**
 * Facts of a patch's points as those of the finer mesh they belong to: divisions n m, and the offset that puts the points where the
 * format says, k = ((i + offset) + (s + 1/2) / m - 1/2) / n. Not in [0, 1) as a rule, and `points` counts the stored ones alone.
 */
export function patchMesh(parent: Pick<GridFacts, "divisions" | "offset">, { divisions, cells }: PatchCells) {
  const along = (of: (n: number, m: number, offset: number) => number): Triple =>
    [0, 1, 2].map((j) => of(parent.divisions[j], divisions[j], parent.offset[j])) as unknown as Triple;
  return {
    divisions: along((n, m) => n * m),
    offset: along((_n, m, offset) => m * offset + 0.5 - m / 2),
    points: cells.length * pointsPerCell({ divisions }),
  };
}

/** What a patch must have in common with its parent, as one comparable text each. */
function kinship(facts: GridFacts): readonly (readonly [string, string])[] {
  const moments = facts.moments.map(({ name, kind, underTimeReversal, directions, unit }) =>
    [name, kind, underTimeReversal, directions, unit].join(" "),
  );
  return [
    ["bands", String(facts.bands)],
    ["electronsPerBand", String(facts.electronsPerBand)],
    ["lattice.periodic", String(facts.periodic)],
    ["arrays.moments", moments.sort().join("; ")],
    ["arrays.hessian", facts.hessian],
  ];
}

/** Vectors count as equal within this part of their length. */
const sameVector = 1e-6;

/** Throws a data Fault where a patch does not describe the parent's crystal. */
export function checkKinship(parent: GridFacts, patch: GridFacts, name: string): void {
  const cure = "Compute the patch with the parent's settings, and write what the parent writes.";
  for (const [at, [field, expected]] of kinship(parent).entries()) {
    const found = kinship(patch)[at][1];
    if (found !== expected)
      throw dataFault(
        `patch ${quoted(name)}: ${field} is ${found || "none"}, the parent's ${expected || "none"}`,
        cure,
      );
  }
  parent.vectorsA.forEach((row, i) => {
    const off = Math.hypot(...row.map((x, j) => x - patch.vectorsA[i][j]));
    if (off > sameVector * Math.hypot(...row))
      throw dataFault(`patch ${quoted(name)}: lattice vector ${i + 1} differs from the parent's`, cure);
  });
}

/** Throws a data Fault where two patches replace one cell. */
export function checkDisjoint(patches: readonly PatchCells[]): void {
  const owner = new Map<number, string>();
  for (const { name, cells } of patches)
    for (const cell of cells) {
      const other = owner.get(cell);
      if (other !== undefined)
        throw dataFault(
          `patches ${quoted(other)} and ${quoted(name)} both replace cell ${cell}`,
          "Let a cell be in one patch only.",
        );
      owner.set(cell, name);
    }
}
