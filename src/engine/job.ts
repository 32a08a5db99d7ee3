// job.ts: everything a worker needs to know to do its share of a sweep: plain data, no functions.
import type { ResponsePlan } from "../bands/responses.js";
import type { View } from "../grid/grid.js";
import type { Denominator } from "../kernel/kernel.js";
import type { LevelAxis } from "../spectrum/axis.js";

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

/** A run of stored k points: the unit of work, cut by the grid alone. */
export interface Task {
  readonly first: number;
  readonly count: number;
}

const mostTasks = 64;
const leastPointsPerTask = 32;

/** Cuts the stored points into tasks; depends on the number of points alone, so that sums come out the same for any number of workers. */
export function cutTasks(points: number): Task[] {
  const count = Math.max(leastPointsPerTask, Math.ceil(points / mostTasks));
  const tasks: Task[] = [];
  for (let first = 0; first < points; first += count) tasks.push({ first, count: Math.min(count, points - first) });
  return tasks;
}
