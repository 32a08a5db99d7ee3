// links.ts: which neighbours correct the local model of a stored point, where meshes of different density meet?
import { pointsPerCell } from "../grid/patches.js";
import { meshIndices, neighbourIndex } from "../zone/mesh.js";
import type { Region } from "./regions.js";

/**
 * How a point takes part in the neighbour defect. `models[2 j + side]`: weight of its own model at the neighbour along edge j, minus
 * side first; `truth`: the weights with which its neighbours call on it, summed. Both are 1 for each neighbour inside one mesh. A point without a neighbour
 * of its own density on one side counts the other side twice: the error to be corrected is even in the step.
 */
export interface Links {
  readonly models: Float64Array;
  truth: number;
}

/** Of every point of a region: its links, and those that it would have if no cell were replaced (`replaced`), less its links. */
export interface LinkFinder {
  /** Fills `links`, and `replaced` where the parent's mesh has replaced cells. Both are reused by the next call. */
  find(flat: number): { readonly links: Links; readonly replaced: Links };
}

/** Links of a point inside one mesh. */
export const allLinks = (dimension: number): Links => ({
  models: new Float64Array(2 * dimension).fill(1),
  truth: 2 * dimension,
});

const newLinks = (dimension: number): Links => ({ models: new Float64Array(2 * dimension), truth: 0 });

/** Links of the points of a region. */
export function createLinkFinder(region: Region): LinkFinder {
  return region.facts.patch === undefined ? parentLinks(region) : patchLinks(region);
}

/** A point of the parent serves its neighbours although a patch replaces its own cell; a replaced cell needs no correction. */
function parentLinks(region: Region): LinkFinder {
  const { periodic } = region.parent;
  const links = newLinks(periodic);
  const replaced = newLinks(periodic);
  return {
    find(flat) {
      let kept = 2 * periodic;
      if (region.patchOf.size > 0)
        for (let j = 0; j < periodic; j++)
          for (const step of [-1, 1])
            if (region.patchOf.has(neighbourIndex(flat, region.parent.divisions, j, step))) kept--;
      const own = region.counts(flat) ? 1 : 0;
      links.models.fill(own);
      links.truth = kept;
      replaced.models.fill(1 - own);
      replaced.truth = 2 * periodic - kept;
      return { links, replaced };
    },
  };
}

function patchLinks(region: Region): LinkFinder {
  const { periodic } = region.parent;
  const patch = region.facts.patch;
  if (patch === undefined) throw new Error("a patch's links were asked of the parent's mesh");
  const { divisions } = patch;
  const perCell = pointsPerCell(patch);
  const links = newLinks(periodic);
  const none = newLinks(periodic);
  const same = (cell: number): boolean => {
    const other = region.patchOf.get(cell)?.facts.patch;
    return other?.divisions.every((m, j) => m === divisions[j]) ?? false;
  };
  /** Is there a point of this density `step` points along edge j from place s of the cell? */
  const exists = (cell: number, s: number, j: number, step: number): boolean => {
    const m = divisions[j];
    const cells = Math.floor((s + step) / m);
    let at = cell;
    for (let i = 0; i < Math.abs(cells); i++) {
      at = neighbourIndex(at, region.parent.divisions, j, Math.sign(cells));
      if (!same(at)) return false;
    }
    return true;
  };
  return {
    find(flat) {
      const cell = region.cellOf(flat);
      const place = meshIndices(flat % perCell, divisions);
      links.truth = 0;
      for (let j = 0; j < periodic; j++)
        for (const side of [0, 1]) {
          const step = side === 0 ? -1 : 1;
          const there = exists(cell, place[j], j, step);
          links.models[2 * j + side] = there ? (exists(cell, place[j], j, -step) ? 1 : 2) : 0;
          // The neighbour on this side calls on this point once, or twice where there is none beyond it.
          if (there) links.truth += exists(cell, place[j], j, 2 * step) ? 1 : 2;
        }
      return { links, replaced: none };
    },
  };
}
