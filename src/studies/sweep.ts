// sweep.ts: how do the responses run with level and temperature, and how sure is that?

import { modelOrderOf } from "../curves/refined.js";
import type { CurvesResult } from "../curves/result.js";
import { cutTasks, type RefineJob, type Task } from "../engine/job.js";
import { joinPatches, type ModelShare, modelShare, parentTasks, planDefects } from "../engine/patched.js";
import { planRefinement } from "../engine/refine-plan.js";
import { type RunOptions, runTasks } from "../engine/run.js";
import type { Work } from "../engine/work.js";
import { type Grid, openGrid } from "../grid/open.js";
import { type Computed, planSweep, type SweepOptions, type SweepPlan, type SweptPart } from "./sweep-plan.js";
import { assembleResult } from "./sweep-result.js";

export { type SweepOptions, sweepOptions } from "./sweep-plan.js";
export { intrinsicOnly } from "./sweep-result.js";

/** Samples that may be spent where the user names no number: a base, and some for each stored point. */
export const defaultSampling = { base: 200_000, perPoint: 100 } as const;

const defaultSamples = (points: number): number => defaultSampling.base + defaultSampling.perPoint * points;

/** Computes the spectra of a planned sweep; with "locate" (one level and temperature) also what every cell, band and pair adds, see engine/locator. */
export async function computeSweep(
  { job, facts, options, regularEv }: SweepPlan,
  run: RunOptions,
  wanted: "curves" | "locate" = "curves",
): Promise<Computed> {
  const grid = openGrid(job.directory, job.view);
  const tasks = cutTasks(grid);
  const locate = wanted === "locate";
  if (job.method !== "refine") {
    const work: Work = locate ? { kind: "locate", job: { ...job, regularEv } } : { kind: "mesh", job };
    return { sections: await runTasks(work, tasks, run), refined: undefined };
  }
  const quiet = { workers: run.workers, signal: run.signal };
  const survey = await runTasks({ kind: "survey", job, regularEv }, tasks, quiet);
  const wish = { accuracy: options.accuracy, samples: options.samples ?? defaultSamples(facts.points) };
  const refined = planRefinement(job, facts, regularEv, survey, wish);
  const main = joinPatches(await runTasks({ kind: locate ? "locate" : "refine", job: refined }, tasks, run));
  const sections = { ...survey, ...main };
  return { sections, refined, modelShare: await shareLeft(grid, refined, tasks, quiet) };
}

/** Where patches stand in for cells: how much of the models' error they leave. */
async function shareLeft(
  grid: Grid,
  refined: RefineJob,
  tasks: readonly Task[],
  run: RunOptions,
): Promise<ModelShare | undefined> {
  if (grid.patches.length === 0) return undefined;
  const job = planDefects(refined, grid.facts.points);
  const own = parentTasks(tasks);
  const sections = await runTasks({ kind: "defects", job }, own, run);
  return modelShare(grid, job, own, sections, modelOrderOf(grid.facts.hessian));
}

/** Computes a planned sweep; also tells the settings of its refinement, where it had one. */
export async function sweepPlanned(
  planned: SweepPlan,
  run: RunOptions,
): Promise<{ readonly curves: CurvesResult; readonly refined: RefineJob | undefined }> {
  const computed = await computeSweep(planned, run);
  return { curves: assembleResult(planned, computed), refined: computed.refined };
}

/** Computes a sweep. The result does not depend on the number of workers. */
export async function sweep(
  directory: string,
  options: SweepOptions,
  run: RunOptions,
  part: SweptPart = {},
): Promise<CurvesResult> {
  return (await sweepPlanned(planSweep(directory, options, part), run)).curves;
}
