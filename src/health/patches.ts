// patches.ts: does a patch speak the parent's language? Sizes of its energies and matrices against the cells that it replaces.
import type { Block, BlockReader, MatrixBlock } from "../grid/grid.js";
import type { Grid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";
import { openReader, wantAll } from "../grid/reader.js";
import { type HealthFinding, shown } from "./finding.js";

/** Cells of each patch that are looked at, spread over its list. */
const cellsSeen = 6;
/** Within a cell the sum of |M_nm|^2 over all bands varies by its second derivative: far less than this factor, either way. */
const sameSize = 1.7;

/** Sums of squares of one array, cell by cell: the parent's in the patch's cells and in cells all over the mesh, and the patch's. */
interface Sizes {
  parent: number;
  mesh: number;
  patch: number;
}

const squaresOf = ({ data, offset }: MatrixBlock, bands: number): number => {
  let sum = 0;
  for (let i = offset; i < offset + 2 * bands * bands; i++) sum += data[i] ** 2;
  return sum;
};

/** Sum of squares by array of one point; no choice of basis changes them. */
function sizesOf(block: Block): Map<string, number> {
  const { bands, energyEv } = block;
  const all = (matrices: readonly (MatrixBlock | undefined)[]): number =>
    matrices.reduce((sum, matrix) => sum + (matrix === undefined ? 0 : squaresOf(matrix, bands)), 0);
  const middle = energyEv.subarray(0, bands).reduce((sum, energy) => sum + energy, 0) / bands;
  const sizes = new Map([
    ["energy", energyEv.subarray(0, bands).reduce((sum, energy) => sum + (energy - middle) ** 2, 0)],
    ["velocity", all(block.velocity)],
  ]);
  for (const [name, matrices] of block.moments) sizes.set(`moments.${name}`, all(matrices));
  if (block.hessian !== undefined) sizes.set("hessian", all(block.hessian));
  return sizes;
}

function compared(parent: BlockReader, patch: BlockReader): Map<string, Sizes> {
  const cells = patch.facts.patch?.cells ?? new Int32Array(0);
  const perCell = patch.facts.patch === undefined ? 1 : pointsPerCell(patch.facts.patch);
  const found = new Map<string, Sizes>();
  const add = (side: keyof Sizes, sizes: Map<string, number>, weight: number): void => {
    for (const [name, size] of sizes) {
      const entry = found.get(name) ?? { parent: 0, mesh: 0, patch: 0 };
      entry[side] += weight * size;
      found.set(name, entry);
    }
  };
  const { points } = parent.facts;
  const seen = Math.min(cellsSeen, cells.length);
  for (let i = 0; i < seen; i++) {
    const at = Math.floor((i * cells.length) / seen);
    add("mesh", sizesOf(parent.read(Math.floor(((i + 0.5) * points) / seen), 1)), 1);
    add("parent", sizesOf(parent.read(cells[at], 1)), 1);
    for (let s = 0; s < perCell; s++) add("patch", sizesOf(patch.read(at * perCell + s, 1)), 1 / perCell);
  }
  return found;
}

/**
 * Another unit shows against the parent's numbers in the same cells, and likewise against those all over its mesh: a matrix may vanish
 * at the middle of a cell and not beside it.
 */
const differs = ({ parent, mesh, patch }: Sizes): boolean =>
  patch > sameSize * Math.max(parent, mesh) || sameSize * patch < Math.min(parent, mesh);

/** A finding for each array of a patch whose numbers are of another size than the parent's. Throws data Faults of the files. */
export function checkPatches(grid: Grid): HealthFinding[] {
  if (grid.patches.length === 0) return [];
  const parent = openReader(grid, wantAll(grid));
  const findings = grid.patches.flatMap((patch) => {
    const reader = openReader(patch, wantAll(patch));
    const sizes = compared(parent, reader);
    reader.close();
    const name = patch.facts.patch?.name ?? "";
    return [...sizes]
      .filter(([, each]) => each.parent > 0 && differs(each))
      .map(([array, { parent: own, patch: other }]): HealthFinding => {
        const factor = shown(Math.sqrt(other / own));
        return {
          id: "patch-size",
          severity: "fault",
          message: `${array} of patch ${JSON.stringify(name)} is ${factor} times as large as the parent's in the same cells`,
          evidence: `root of the sum of squares, patch over parent: ${factor}`,
          measured: `over up to ${cellsSeen} cells of the patch and all their points, all bands and components; and against as many points of the mesh`,
          cure: `Correct the unit of arrays.${array} in the patch's manifest, or compute the patch with the parent's settings.`,
        };
      });
  });
  parent.close();
  return findings;
}
