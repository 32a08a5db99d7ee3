// converge.ts: is the mesh dense enough, at which levels, and what would be needed? Options, computation, result.
import { z } from "zod";
import { boltzmannEvPerK } from "../base/constants.js";
import { usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import { type Bounds, distance, type Evidence, plainBounds, refinedBounds } from "../curves/convergence.js";
import { modelOrderOf } from "../curves/refined.js";
import type { CurvesResult } from "../curves/result.js";
import { sharpSurfaceOrder } from "../curves/spread.js";
import { verdictsOf } from "../curves/verdicts.js";
import type { RunOptions } from "../engine/run.js";
import { containedMeshes, familyMeshes, type Meshes, type SweptMesh } from "./converge-meshes.js";
import type { ConvergeBounds, ConvergeCurve, ConvergeResult, ConvergeVerdict, MeshValues } from "./converge-result.js";
import { sweepOptions } from "./sweep-plan.js";
import { intrinsicOnly } from "./sweep-result.js";

/** What is asked where --within names nothing. */
const defaultTarget = 0.01;

/** Options of `converge`: those of a sweep, and its own. */
export const convergeOptions = sweepOptions.omit({ thermal: true }).extend({
  points: z.int().min(1).max(20001).default(101),
  temperature: z.array(z.number().min(0).max(100000)).min(1).max(64).default([300]),
  method: z.enum(["refine", "points"]).default("refine"),
  /** What refinement aims at; default half of what is asked within. */
  accuracy: z.number().min(1e-6).max(1).optional(),
  /** Demanded error at two bars, as a part of each response's largest value in the window. */
  within: z.number().min(1e-6).max(1).optional(),
  /** Levels, relative to the reference level, at which values are shown mesh by mesh. */
  level: z.array(z.number()).min(1).max(20).optional(),
  /** Most shifts of one coarser mesh that are refined. */
  shifts: z.int().min(1).max(512).default(2),
});

export type ConvergeOptions = z.infer<typeof convergeOptions>;

/** Judges a grid by the meshes that it contains, or several grids of one material by each other. */
export async function converge(
  directories: readonly string[],
  options: ConvergeOptions,
  run: RunOptions,
): Promise<ConvergeResult> {
  const { within, level, shifts, ...asked } = options;
  const target = within ?? defaultTarget;
  for (const each of level ?? [])
    if (each < options.from - 1e-9 || each > options.to + 1e-9)
      throw usageFault(
        `--level ${each} lies outside the window from ${options.from} to ${options.to} eV`,
        "Widen --from --to, or leave that level out.",
      );
  const wish = { sweep: { ...asked, accuracy: asked.accuracy ?? target / 2, thermal: false }, shifts };
  const meshes =
    directories.length === 1
      ? await containedMeshes(directories[0], wish, run)
      : await familyMeshes(directories, wish, run);
  return assembled(meshes, options, target);
}

function assembled(meshes: Meshes, options: ConvergeOptions, target: number): ConvergeResult {
  const { sweeps, swept, samples } = meshes;
  const [own] = sweeps;
  const responses = own.responses.map(({ name, unit }, at) => ({
    name,
    unit,
    curves: own.temperature_K.map((_, t) => curveOf(meshes, at, t, target)),
  }));
  const good = ({ good: status }: ConvergeVerdict): boolean =>
    status === "plain" || (status === "refined" && options.method === "refine");
  return {
    format: "tidegauge.converge/1",
    version: productVersion,
    grids: sweeps.map(({ grid }) => grid),
    job: { study: "converge", ...options },
    reference_eV: own.reference_eV,
    level_eV: own.level_eV,
    temperature_K: own.temperature_K,
    chosen_level_eV: [...(options.level ?? [])],
    target,
    demanded: options.within !== undefined,
    reached: responses.every(({ curves }) =>
      curves.every(({ vanishes, verdicts }) => vanishes || verdicts.every(good)),
    ),
    meshes: swept.map(({ mesh }) => mesh),
    responses,
    sampling: { method: options.method, samples },
    notes: notesOf(swept, own, options),
  };
}

/** A response of a crystal that stays below a tenth of an S/cm, or of a layer below 1e-4 of its quantum, is of no use to anyone. */
function floorOf(unit: string): number {
  if (/S\/cm$/.test(unit)) return /2e/.test(unit) ? 0.2 : 0.1;
  if (/S\/m$/.test(unit)) return /2e/.test(unit) ? 20 : 10;
  return 1e-4;
}

/** Levels over which errors are averaged to either side: two kT, one level at least. */
function reachOf(levelEv: readonly number[], temperatureK: number): number {
  if (levelEv.length < 2) return 0;
  return Math.max(1, Math.round((2 * boltzmannEvPerK * temperatureK) / (levelEv[1] - levelEv[0])));
}

function evidenceOf({ swept, sweeps, facts }: Meshes, at: number, t: number): Evidence {
  const [own] = sweeps;
  const { error, error_sampling: sampling } = own.responses[at];
  const model = swept[0].refined.length > 0;
  const rows = (shifts: SweptMesh["plain"]): number[][] => shifts.map((responses) => responses[at][t]);
  return {
    meshes: swept.map(({ mesh, plain, refined }) => ({
      step: mesh.step,
      blind: mesh.blind,
      plain: rows(plain),
      refined: rows(refined),
    })),
    bar: model ? error[t] : [],
    samplingBar: model ? sampling[t] : [],
    plainOrder: sharpSurfaceOrder(facts.periodic),
    refinedOrder: modelOrderOf(facts.hessian),
    reach: reachOf(own.level_eV, own.temperature_K[t]),
  };
}

function curveOf(meshes: Meshes, at: number, t: number, target: number): ConvergeCurve {
  const [own] = meshes.sweeps;
  const evidence = evidenceOf(meshes, at, t);
  const [finest] = evidence.meshes;
  const best = [...(finest.refined[0] ?? finest.plain[0])];
  const plain = plainBounds(evidence);
  const refined = refinedBounds(evidence);
  const floor = floorOf(own.responses[at].unit);
  const largest = Math.max(...best.map(Math.abs));
  const sure = (refined ?? plain).bound;
  const vanishes = best.every((value, level) => Math.abs(value) + (sure[level] || 0) < floor);
  const scale = Math.max(largest, floor);
  const verdicts = verdictsOf({ scale, target, plain, refined, samplingBar: evidence.samplingBar });
  const { divisions } = meshes.swept[0].mesh;
  return {
    temperature_K: own.temperature_K[t],
    scale,
    vanishes,
    best,
    plain: written(plain),
    ...(refined && { refined: written(refined) }),
    meshes: evidence.meshes.map((mesh) => valuesOf(mesh, best, evidence.reach)),
    verdicts: verdicts.map((verdict) => ({
      from_eV: own.level_eV[verdict.first],
      to_eV: own.level_eV[verdict.last],
      good: verdict.status,
      plain_error: verdict.plainError,
      refined_error: verdict.refinedError,
      plain_needs: needed(divisions, verdict.plainFactor),
      refined_needs: needed(divisions, verdict.refinedFactor),
      samples_wanted: verdict.samplesWanted,
    })),
  };
}

const written = ({ bound, rates }: Bounds): ConvergeBounds => ({
  bound,
  rate: rates.map(({ rate }) => rate),
  rate_from: Math.min(...rates.map(({ from }) => from)),
});

function valuesOf({ plain, refined }: Evidence["meshes"][number], best: readonly number[], reach: number): MeshValues {
  return {
    plain: [...plain[0]],
    plain_off: distance(plain, best, reach),
    refined: [...(refined[0] ?? [])],
    refined_off: refined.length === 0 ? [] : distance(refined, best, reach),
  };
}

/** Even divisions, so that the mesh contains others: those of the stored mesh times a factor, rounded up. */
function needed(divisions: readonly number[], factor: number | undefined): number[] | null {
  if (factor === undefined) return null;
  if (factor <= 1) return [...divisions];
  return divisions.map((n) => 2 * Math.ceil((n * factor) / 2 - 1e-9));
}

function notesOf(swept: readonly SweptMesh[], own: CurvesResult, { method }: ConvergeOptions): string[] {
  const notes = own.notes.filter((note) => note !== intrinsicOnly);
  const contained = swept.filter(({ mesh }) => mesh.origin === "contained");
  const capped = contained.filter(({ mesh, plain }) => plain.length < mesh.step ** mesh.divisions.length);
  const more: string[] = [];
  if (swept.length === 1)
    more.push(
      "the mesh contains no sub-mesh of 3 points or more along each direction: no rate can be read, usual ones are assumed",
    );
  if (capped.length > 0)
    more.push(
      `of the meshes of ${capped.map(({ mesh }) => mesh.divisions.join(" x ")).join(", ")} not all shifts were summed`,
    );
  for (const { mesh } of contained.filter(({ mesh }) => mesh.blind))
    more.push(
      `the shifts of ${mesh.divisions.join(" x ")} may be mirror images of each other (the mesh is moved by half a step): their sums then equal that of the stored mesh and tell nothing`,
    );
  const part = contained.filter(({ refined, plain }) => refined.length > 0 && refined.length < plain.length);
  if (method === "refine" && part.length > 0)
    more.push(
      `refined were ${part.map(({ mesh, refined, plain }) => `${refined.length} of ${plain.length} shifts of ${mesh.divisions.join(" x ")}`).join(", ")}`,
    );
  return [intrinsicOnly, ...notes, ...more];
}
