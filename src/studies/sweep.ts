// sweep.ts: how do the responses run with level and temperature, and how sure is that? Options, computation, result.
import { z } from "zod";
import { defaultResponses, planResponses } from "../bands/responses.js";
import { responseUnit } from "../bands/units.js";
import { usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import {
  type ColumnCurves,
  columnTable,
  densityOfStates,
  occupiedCurves,
  type SpectraFacts,
  spreadCurves,
} from "../curves/assemble.js";
import {
  type RefinedErrors,
  type RefinedFacts,
  refinedCurves,
  refinedErrors,
  refinedStates,
} from "../curves/refined.js";
import type { CurvesResult, ResponseCurve, Table } from "../curves/result.js";
import { columnCount } from "../engine/columns.js";
import { cutTasks, type RefineJob, type SweepJob } from "../engine/job.js";
import { resolvedEnergy } from "../engine/mesh-step.js";
import { planRefinement } from "../engine/refine-plan.js";
import { counters } from "../engine/refiner.js";
import { type RunOptions, runTasks } from "../engine/run.js";
import type { GridFacts } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { storedFacts, type View } from "../grid/view.js";
import { planAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { cellArea, cellVolume } from "../zone/lattice.js";
import { smallestSubMeshes, spreadSubMeshes } from "../zone/mesh.js";
import { countBelow, type ReferenceLevel, referenceLevel } from "./reference.js";

/** Options of a sweep; the same object is what a job file holds and what every result embeds. */
export const sweepOptions = z.strictObject({
  response: z.array(z.string()).min(1).max(200).optional(),
  from: z.number().min(-1000).max(1000).default(-1),
  to: z.number().min(-1000).max(1000).default(1),
  points: z.int().min(1).max(20001).default(201),
  temperature: z.array(z.number().min(0).max(100000)).min(1).max(64).default([0, 300]),
  method: z.enum(["refine", "cells", "points"]).default("refine"),
  accuracy: z.number().min(1e-6).max(1).default(0.01),
  samples: z.int().min(1000).max(1e10).optional(),
  degenerate: z.number().min(0).max(10).default(1e-5),
  broaden: z.number().min(0).max(100).default(0),
  unit: z.string().max(40).optional(),
});

export type SweepOptions = z.infer<typeof sweepOptions>;

/** Told to every reader of a result. */
export const intrinsicOnly = "intrinsic only, rigid band";

interface SweepPlan {
  /** Energy that the mesh resolves, for `refine`; 0 otherwise. */
  readonly regularEv: number;
  readonly job: SweepJob;
  readonly facts: GridFacts;
  readonly reference: ReferenceLevel;
  readonly options: SweepOptions;
}

/** A part of a grid to sweep over, by a level found elsewhere. */
export interface SweptPart {
  /** Only this contained sub-mesh. */
  readonly view?: View;
  /** Reference level; otherwise that of the whole grid. */
  readonly reference?: ReferenceLevel;
}

/** Checks the options against the grid and plans the job. Throws usage and data Faults. */
export function planSweep(directory: string, options: SweepOptions, part: SweptPart = {}): SweepPlan {
  if (options.points === 1 ? options.from !== options.to : !(options.from < options.to))
    throw usageFault(
      `--from ${options.from} --to ${options.to} --points ${options.points} is no window`,
      "Let --from lie below --to, or give --points 1 with both equal.",
    );
  const { view } = part;
  const { facts } = openGrid(directory, view);
  const plan = planResponses(options.response ?? defaultResponses(facts), facts);
  const reference = part.reference ?? referenceLevel(storedFacts(facts));
  const temperatures = [...new Set(options.temperature)].sort((a, b) => a - b);
  const window = {
    fromEv: reference.levelEv + options.from,
    toEv: reference.levelEv + options.to,
    points: options.points,
  };
  const regularEv = options.method === "refine" ? resolvedEnergy(facts, window.fromEv, window.toEv) : 0;
  const job: SweepJob = {
    directory,
    view,
    method: options.method,
    plan,
    denominator: { degenerateEv: options.degenerate, broadenEv: options.broaden },
    axis: planAxis(window, temperatures, marginForDefect * regularEv),
  };
  for (const column of plan.columns) unitOf(column.carrier, facts, options);
  return { job, facts, reference, options, regularEv };
}

const unitOf = (carrier: string, facts: GridFacts, options: SweepOptions) => responseUnit(carrier, facts, options.unit);

/** Spectra of a planned sweep, and the settings of its refinement if it had one. */
interface Computed {
  readonly sections: Sections;
  readonly refined: RefineJob | undefined;
}

/** The neighbour defect of a cold curve is followed in steps of the resolved energy, also on the contained mesh. */
const marginForDefect = 2.5;

/** Samples that may be spent where the user names no number. */
const defaultSamples = (points: number): number => 200_000 + 100 * points;

async function compute({ job, facts, options, regularEv }: SweepPlan, run: RunOptions): Promise<Computed> {
  const tasks = cutTasks(facts.points);
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

function spectraFacts({ job, facts }: SweepPlan): SpectraFacts {
  return {
    axis: job.axis,
    columns: columnCount(job.plan),
    points: facts.points,
    electronsPerBand: facts.electronsPerBand,
    dimension: facts.periodic,
    subMeshes: job.method === "refine" ? smallestSubMeshes(facts) : spreadSubMeshes(facts),
  };
}

const refinedFacts = (planned: SweepPlan): RefinedFacts => {
  const { hessian, bands } = planned.facts;
  return { ...spectraFacts(planned), regularEv: planned.regularEv, hessian, bands };
};

/** Error bars by cause, zone means. */
function errorCurves(planned: SweepPlan, { sections, refined }: Computed, curves: ColumnCurves): RefinedErrors {
  const known = spectraFacts(planned);
  if (refined !== undefined) return refinedErrors(sections, refinedFacts(planned), curves);
  const sampling = spreadCurves(sections, planned.job.method, known);
  return { sampling, model: sampling.map((rows) => rows.map((row) => new Float64Array(row.length))) };
}

function responseCurves(planned: SweepPlan, computed: Computed, curves: ColumnCurves): ResponseCurve[] {
  const { job, facts, options } = planned;
  const points = job.method === "points" ? curves : occupiedCurves(computed.sections, "points", spectraFacts(planned));
  const errors = errorCurves(planned, computed, curves);
  return job.plan.columns.map(({ name, carrier }, column): ResponseCurve => {
    const { unit, factor } = unitOf(carrier, facts, options);
    const sampling = columnTable(errors.sampling, column, Math.abs(factor));
    const model = columnTable(errors.model, column, Math.abs(factor));
    return {
      name,
      unit,
      value: columnTable(curves, column, factor),
      error: sampling.map((row, t) => row.map((value, level) => Math.hypot(value, model[t][level]))),
      error_sampling: sampling,
      error_model: model,
      points: columnTable(points, column, factor),
    };
  });
}

/** Value of a row at level 0 (the reference), linear between two levels; undefined when the window does not hold it. */
function atReference(row: readonly number[], levelEv: readonly number[]): number | undefined {
  const upper = levelEv.findIndex((level) => level >= 0);
  if (upper < 0 || levelEv[0] > 0) return undefined;
  if (upper === 0) return row[0];
  const part = levelEv[upper] / (levelEv[upper] - levelEv[upper - 1]);
  return row[upper] * (1 - part) + row[upper - 1] * part;
}

/** Electrons counted from those that the reference level holds at the lowest temperature asked, by the same method. */
function dopingTable(electrons: Table, levelEv: readonly number[], { facts, reference }: SweepPlan): Table {
  const neutral = atReference(electrons[0], levelEv) ?? facts.electrons ?? countBelow(facts, reference.levelEv);
  return electrons.map((row) => row.map((value) => value - neutral));
}

/** One carrier per cell as a density: per cm^3, or per cm^2 for a layer. */
function densityPerCell({ periodic, vectorsA }: GridFacts): number {
  return periodic === 3 ? 1e24 / cellVolume(vectorsA) : 1e16 / cellArea(vectorsA);
}

/** What limits a refinement on this grid, and how that shows. */
function refinementNotes(facts: GridFacts): string[] {
  const notes: string[] = [];
  if (facts.hessian === "none")
    notes.push("no second derivatives are stored: local models are of lower order, and the error bar is wider");
  if (smallestSubMeshes(facts) === undefined)
    notes.push(
      "the mesh contains no regular sub-mesh (its divisions share no factor 2, 3 or 5): the model error is a part of the neighbour defect",
    );
  if (facts.hessian === "free-electron")
    notes.push(
      "bands cut from plane waves: where the level comes near the highest stored band, the error bar is doubled",
    );
  return notes;
}

function notesOf({ job, facts, reference, options }: SweepPlan): string[] {
  const notes = [
    intrinsicOnly,
    `levels are relative to ${reference.levelEv.toFixed(6)} eV, ${reference.origin}`,
    `pairs of bands closer than ${options.degenerate} eV are taken as degenerate`,
  ];
  if (options.broaden > 0) notes.push(`denominators are broadened by ${options.broaden} eV`);
  if (job.method === "cells")
    notes.push(`energy resolution at 0 K: ${(job.axis.nodes.stepEv * 1000).toPrecision(3)} meV`);
  if (job.method === "refine") notes.push(...refinementNotes(facts));
  else if (spreadSubMeshes(facts) === undefined)
    notes.push("no error bar: the mesh contains no regular sub-mesh (its divisions share no factor 2, 3 or 5)");
  return notes;
}

/** Samples, cells and depths of a refinement. */
function samplingOf({ job, facts }: SweepPlan, { sections, refined }: Computed): CurvesResult["sampling"] {
  const { points } = facts;
  if (refined === undefined) return { method: job.method, stored: points, samples: points, deepest: 0 };
  const tally = sections["refine.counters"];
  const coarse = sections["coarse.counters"];
  const spent = tally[counters.samples] + tally[counters.defectSamples];
  const forError = coarse === undefined ? 0 : coarse[counters.samples] + coarse[counters.defectSamples];
  return {
    method: "refine",
    stored: points,
    samples: spent + forError,
    deepest: tally.subarray(counters.depths).findLastIndex((cells) => cells > 0),
    samples_for_error: forError,
    cells_split: tally[counters.splitCells],
    zone_refined: tally[counters.splitCells] / points,
    unresolved: tally[counters.unresolved],
    regular_eV: refined.regularEv,
  };
}

function assembleResult(planned: SweepPlan, computed: Computed): CurvesResult {
  const { job, facts, reference, options } = planned;
  const { sections } = computed;
  const known = spectraFacts(planned);
  const curves = computed.refined
    ? refinedCurves(sections, refinedFacts(planned))
    : occupiedCurves(sections, job.method, known);
  const levels = Array.from(job.axis.levelsEv, (_, i) =>
    options.points === 1 ? options.from : options.from + (i * (options.to - options.from)) / (options.points - 1),
  );
  const electrons = columnTable(curves, known.columns - 1, facts.electronsPerBand);
  const doping = dopingTable(electrons, levels, planned);
  const density = densityPerCell(facts);
  const { title, sha256, bands, divisions, periodic, points } = facts;
  return {
    format: "tidegauge.curves/1",
    version: productVersion,
    grid: { title, sha256, bands, divisions: [...divisions], periodic, points },
    job: { study: "sweep", ...options },
    reference_eV: reference.levelEv,
    level_eV: levels,
    temperature_K: [...job.axis.temperaturesK],
    electrons_per_cell: electrons,
    doping_per_cell: doping,
    doping_density: doping.map((row) => row.map((value) => value * density)),
    doping_density_unit: periodic === 3 ? "per_cm3" : "per_cm2",
    states_per_eV: computed.refined
      ? refinedStates(sections, refinedFacts(planned))
      : densityOfStates(sections, job.method, known),
    responses: responseCurves(planned, computed, curves),
    sampling: samplingOf(planned, computed),
    notes: notesOf(planned),
  };
}
