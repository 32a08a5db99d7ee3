// place.ts: which stored point stands for a place in the zone?
import type { GridFacts, Triple } from "../grid/grid.js";
import type { Grid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";

/** A place in the cell of a stored point. Plain data. */
export interface Place {
  /** Which patch stores the point; the parent's mesh where left out. */
  readonly patch?: number;
  readonly flat: number;
  /** From the stored point, in the edges of what it stands for: [-1/2, 1/2) each. */
  readonly t: Triple;
  /** Its turn among the places asked for. */
  readonly index: number;
}

const wrap = (i: number, n: number): number => ((i % n) + n) % n;

/** The place of fractional coordinates: in the patch that replaces its cell, or on the mesh. Coordinates along which the grid does not repeat are ignored. */
export function createPlaces(grid: Grid): (k: Triple, index: number) => Place {
  const { divisions, offset, periodic } = grid.facts;
  const owners = new Map<number, readonly [patch: number, at: number]>();
  for (const [patch, { facts }] of grid.patches.entries())
    for (const [at, cell] of (facts.patch?.cells ?? []).entries()) owners.set(cell, [patch, at]);
  return (k, index) => {
    const inSteps = k.map((x, j) => (j < periodic ? x * divisions[j] - offset[j] : 0));
    // A hair above half, so that a place on a boundary is not thrown to either side by round-off.
    const nearest = inSteps.map((x) => Math.floor(x + 0.5 + 1e-9));
    const t = inSteps.map((x, j) => x - nearest[j]);
    const [i1, i2, i3] = nearest.map((i, j) => wrap(i, divisions[j]));
    const flat = (i1 * divisions[1] + i2) * divisions[2] + i3;
    const owner = owners.get(flat);
    if (owner === undefined) return { flat, t: [t[0], t[1], t[2]], index };
    const [patch, at] = owner;
    return { patch, index, ...withinPatch(grid.patches[patch].facts, at, t) };
  };
}

function withinPatch({ patch }: GridFacts, at: number, t: readonly number[]): Pick<Place, "flat" | "t"> {
  if (patch === undefined) throw new Error("a patch without cells");
  const m = patch.divisions;
  const inParts = t.map((x, j) => (x + 0.5) * m[j]);
  const s = inParts.map((x, j) => Math.min(m[j] - 1, Math.max(0, Math.floor(x + 1e-9))));
  const [x, y, z] = inParts.map((part, j) => part - s[j] - 0.5);
  return { flat: at * pointsPerCell(patch) + (s[0] * m[1] + s[1]) * m[2] + s[2], t: [x, y, z] };
}

/** Places in the order in which the stored points lie on disk. */
export const inStoredOrder = (places: readonly Place[]): Place[] =>
  [...places].sort((a, b) => (a.patch ?? -1) - (b.patch ?? -1) || a.flat - b.flat || a.index - b.index);
