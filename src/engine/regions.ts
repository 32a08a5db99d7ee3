// regions.ts: the parts of the zone that are stored with one density: the parent's mesh, and every patch. What does a point stand for?
import type { BlockReader, GridFacts, Triple, Want } from "../grid/grid.js";
import { type Grid, openGrid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";
import { openReader } from "../grid/reader.js";
import { cellEdges } from "../zone/mesh.js";
import type { SweepJob } from "./job.js";

/** One region, opened for reading. */
export interface Region {
  readonly reader: BlockReader;
  /** Facts of its own points; of a patch those of the finer mesh that they belong to. */
  readonly facts: GridFacts;
  /** Facts of the parent's mesh, in whose cells everything is counted. */
  readonly parent: GridFacts;
  /** Edges of what a stored point stands for, 1/angstrom. */
  readonly edges: readonly Triple[];
  /** Volume of that, in cells of the parent's mesh. */
  readonly weight: number;
  /** Flat index of the parent's cell that a stored point belongs to. */
  readonly cellOf: (flat: number) => number;
  /** False for a point of the parent whose cell a patch replaces. */
  readonly counts: (flat: number) => boolean;
  /** By the parent's flat index: which patch replaces the cell. Empty where the grid has none. */
  readonly patchOf: ReadonlyMap<number, Grid>;
}

/** Which patch replaces which cell. */
function patchesByCell(grid: Grid): Map<number, Grid> {
  const owner = new Map<number, Grid>();
  for (const patch of grid.patches) for (const cell of patch.facts.patch?.cells ?? []) owner.set(cell, patch);
  return owner;
}

/** Opens the region that a task lies in. */
export function openRegion(
  job: Pick<SweepJob, "directory" | "view">,
  task: { readonly patch?: number | undefined },
  want: Want,
): Region {
  const grid = openGrid(job.directory, job.view);
  const own = task.patch === undefined ? grid : grid.patches[task.patch];
  const patchOf = patchesByCell(grid);
  const { facts } = own;
  const cells = facts.patch?.cells;
  const perCell = facts.patch === undefined ? 1 : pointsPerCell(facts.patch);
  return {
    reader: openReader(own, want),
    facts,
    parent: grid.facts,
    edges: cellEdges(facts),
    weight: 1 / perCell,
    cellOf: (flat) => (cells === undefined ? flat : cells[Math.floor(flat / perCell)]),
    counts: (flat) => cells !== undefined || !patchOf.has(flat),
    patchOf,
  };
}
