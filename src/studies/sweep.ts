// sweep.ts: how do the responses run with level and temperature, and how sure is that?
import type { CurvesResult } from "../curves/result.js";
import { cutTasks } from "../engine/job.js";
import { planRefinement } from "../engine/refine-plan.js";
import { type RunOptions, runTasks } from "../engine/run.js";
import { openGrid } from "../grid/open.js";
import { type Computed, planSweep, type SweepOptions, type SweepPlan, type SweptPart } from "./sweep-plan.js";
import { assembleResult } from "./sweep-result.js";

export { type SweepOptions, sweepOptions } from "./sweep-plan.js";
export { intrinsicOnly } from "./sweep-result.js";

/** Samples that may be spent where the user names no number. */
const defaultSamples = (points: number): number => 200_000 + 100 * points;

async function compute({ job, facts, options, regularEv }: SweepPlan, run: RunOptions): Promise<Computed> {
  const tasks = cutTasks(openGrid(job.directory, job.view));
  if (job.method !== "refine")
    return { sections: await runTasks({ kind: "mesh", job }, tasks, run), refined: undefined };
  const quiet = { workers: run.workers, signal: run.signal };
  const survey = await runTasks({ kind: "survey", job, regularEv }, tasks, quiet);
  const wish = { accuracy: options.accuracy, samples: options.samples ?? defaultSamples(facts.points) };
  const refined = planRefinement(job, facts, regularEv, survey, wish);
  const main = await runTasks({ kind: "refine", job: refined }, tasks, run);
  return { sections: { ...survey, ...main }, refined };
}

/** Computes a sweep. The result does not depend on the number of workers. */
export async function sweep(
  directory: string,
  options: SweepOptions,
  run: RunOptions,
  part: SweptPart = {},
): Promise<CurvesResult> {
  const planned = planSweep(directory, options, part);
  return assembleResult(planned, await compute(planned, run));
}
