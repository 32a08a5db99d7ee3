// job.ts: everything a worker needs to know to do its share of a sweep: plain data, no functions.
import type { ResponsePlan } from "../bands/responses.js";
import type { View } from "../grid/grid.js";
import type { Grid } from "../grid/open.js";
import type { Denominator } from "../kernel/kernel.js";
import type { LevelAxis } from "../spectrum/axis.js";
import type { Place } from "./place.js";

export type Method = "points" | "cells" | "refine";

export interface SweepJob {
  readonly directory: string;
  /** Only this contained sub-mesh of the grid is meant. */
  readonly view?: View;
  readonly method: Method;
  readonly plan: ResponsePlan;
  readonly denominator: Denominator;
  readonly axis: LevelAxis;
}

/** What the refinement pass needs besides: from the options, and from what the first pass over the stored points found. */
export interface RefineJob extends SweepJob {
  /** Regularises the denominators of the neighbour defect, eV. */
  readonly regularEv: number;
  /** Tolerated error of each column (the last counts states), zone-mean units. */
  readonly tolerance: readonly number[];
  /** A family of boxes is halved further above this part of the tolerance. */
  readonly splitAbove: number;
  readonly depthLimit: number;
  /** Samples allowed in one cell. */
  readonly samplesPerCell: number;
  /** Only cost and spread are wanted: no contained mesh. */
  readonly probing?: true;
}

/** What the pass over the neighbour defects of single cells needs besides a sweep's job. */
export interface DefectJob extends SweepJob {
  readonly regularEv: number;
  /** Absolute. */
  readonly levelsEv: readonly number[];
  /** k_B T of the occupations. */
  readonly thermalEv: number;
}

/** A sweep at one level and temperature of which the contributions are wanted one by one; a RefineJob besides where the method is `refine`. */
export interface LocateJob extends SweepJob {
  /** As of a RefineJob; 0 for the other methods. */
  readonly regularEv: number;
  /** [band]: which set of everywhere degenerate bands it belongs to; given where every task is one cell, to be looked at closely. */
  readonly setOf?: readonly number[];
}

/** A sweep's job at one level and temperature, and places in the zone where its integrand is wanted. */
export interface PlacesJob extends SweepJob {
  readonly places: readonly Place[];
}

/** A run of stored k points: the unit of work, cut by the grid alone. */
export interface Task {
  readonly first: number;
  readonly count: number;
  /** Which of the grid's patches the points are of; the parent's mesh where left out. */
  readonly patch?: number;
}

const mostTasks = 64;
const leastPointsPerTask = 32;

/** Cuts stored points into tasks; depends on their number alone, so that sums come out the same for any number of workers. */
function cut(points: number, patch?: number): Task[] {
  const count = Math.max(leastPointsPerTask, Math.ceil(points / mostTasks));
  const tasks: Task[] = [];
  for (let first = 0; first < points; first += count)
    tasks.push({ first, count: Math.min(count, points - first), ...(patch === undefined ? {} : { patch }) });
  return tasks;
}

/** Tasks of the parent's mesh, and after them of each patch. */
export const cutTasks = (grid: Pick<Grid, "facts" | "patches">): Task[] => [
  ...cut(grid.facts.points),
  ...grid.patches.flatMap(({ facts }, patch) => cut(facts.points, patch)),
];
