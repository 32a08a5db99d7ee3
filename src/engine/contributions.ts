// contributions.ts: what does every cell of the mesh contribute, and by how much do its neighbours correct it?
import { type Grid, openGrid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";
import type { Sections } from "../spectrum/sections.js";
import { meshIndices, neighbourIndex } from "../zone/mesh.js";
import type { LocateJob, Task } from "./job.js";
import { createLinkFinder } from "./links.js";
import { pointArray } from "./locator.js";
import { openRegion, type Region } from "./regions.js";

/** Contributions of cells, [cell of the parent's mesh][response], in cells of the mesh: their sum over the number of cells is the zone mean. */
export interface CellContributions {
  /** What the cells' own models (or stored points) give. */
  readonly main: Float64Array;
  /** The neighbour defect, of each cell that which its own model gets wrong. */
  readonly correction: Float64Array;
}

type RegionKey = number | undefined;

/** A task array of a whole region: [stored point][response]. */
function gathered(what: "main" | "truth" | "model", tasks: readonly Task[], sections: Sections): Float64Array {
  const parts = tasks.map((task) => sections[pointArray(what, task)]);
  const out = new Float64Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}

/** Stored index of the neighbour one step along edge j, and the region that stores it, where it has the density of this point. */
function createNeighbours(grid: Grid, region: Region, key: RegionKey) {
  const places = new Map<number, { readonly patch: number; readonly at: number }>();
  for (const [patch, { facts }] of grid.patches.entries())
    for (const [at, cell] of (facts.patch?.cells ?? []).entries()) places.set(cell, { patch, at });
  const { patch } = region.facts;
  return (flat: number, j: number, step: number): { readonly key: RegionKey; readonly flat: number } | undefined => {
    if (patch === undefined) return { key, flat: neighbourIndex(flat, region.parent.divisions, j, step) };
    const perCell = pointsPerCell(patch);
    const place = [...meshIndices(flat % perCell, patch.divisions)];
    const m = patch.divisions[j];
    const outside = place[j] + step < 0 || place[j] + step >= m;
    place[j] = (place[j] + step + m) % m;
    const cell = outside ? neighbourIndex(region.cellOf(flat), region.parent.divisions, j, step) : region.cellOf(flat);
    const owner = places.get(cell);
    const inCell = (place[0] * patch.divisions[1] + place[1]) * patch.divisions[2] + place[2];
    return owner && { key: owner.patch, flat: owner.at * perCell + inCell };
  };
}

/** The contributions of all cells from the sections of all tasks. */
export function cellContributions(job: LocateJob, tasks: readonly Task[], sections: Sections): CellContributions {
  const grid = openGrid(job.directory, job.view);
  const responses = job.plan.columns.length;
  const keys: RegionKey[] = [undefined, ...grid.patches.keys()];
  const tasksOf = (key: RegionKey): Task[] => tasks.filter(({ patch }) => patch === key);
  const truths = new Map(keys.map((key) => [key, gathered("truth", tasksOf(key), sections)]));
  const main = new Float64Array(grid.facts.points * responses);
  const correction = new Float64Array(grid.facts.points * responses);
  for (const key of keys) {
    const region = openRegion(job, { patch: key }, { velocity: [], moments: [], hessian: false });
    const own = gathered("main", tasksOf(key), sections);
    const models = gathered("model", tasksOf(key), sections);
    const finder = createLinkFinder(region);
    const neighbour = createNeighbours(grid, region, key);
    for (let flat = 0; flat < region.facts.points; flat++) {
      const to = region.cellOf(flat) * responses;
      for (let r = 0; r < responses; r++) {
        main[to + r] += own[flat * responses + r];
        correction[to + r] += models[flat * responses + r];
      }
      if (job.method !== "refine") continue;
      const { links } = finder.find(flat);
      for (const [i, calls] of links.models.entries()) {
        const found = calls === 0 ? undefined : neighbour(flat, i >> 1, i % 2 === 0 ? -1 : 1);
        if (found === undefined) continue;
        const truth = truths.get(found.key) as Float64Array;
        for (let r = 0; r < responses; r++) correction[to + r] += calls * truth[found.flat * responses + r];
      }
    }
    region.reader.close();
  }
  return { main, correction };
}
