// request.ts: which k points should be computed next, best first, and by how much would the error fall?
import { z } from "zod";
import { usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import { modelOrderOf } from "../curves/refined.js";
import type { CurvesResult, ResponseCurve } from "../curves/result.js";
import { cellDefects } from "../engine/defect-pass.js";
import { cutTasks, type DefectJob } from "../engine/job.js";
import { keptPart, parentTasks, planDefects } from "../engine/patched.js";
import { type RunOptions, runTasks } from "../engine/run.js";
import type { GridFacts } from "../grid/grid.js";
import { type Grid, openGrid } from "../grid/open.js";
import { fractionalK, meshIndices } from "../zone/mesh.js";
import type { RequestResult } from "./request-result.js";
import { sweepPlanned } from "./sweep.js";
import { planSweep, sweepOptions } from "./sweep-plan.js";

/** Options of a request: those of the sweep whose error is to fall, and how much may be computed. */
export const requestOptions = sweepOptions.extend({
  points: z.int().min(1).max(20001).default(21),
  temperature: sweepOptions.shape.temperature.unwrap().default([300]),
  method: z.literal("refine").default("refine"),
  /** Cells to name; a twentieth of the mesh where left out. Cells as good as the last one come with it. */
  cells: z.int().min(1).max(10_000_000).optional(),
  /** Parts along every periodic edge. */
  divide: z.int().min(2).max(8).default(2),
});

export type RequestOptions = z.infer<typeof requestOptions>;

const shareOfMesh = 0.05;
/** Cells whose weights differ by less are images of each other under the crystal's symmetry: all or none are named. */
const alike = 1e-6;

/** Where every response's error is how large: relative to its largest value, [level][column], from a finished sweep. */
function relativeErrors(curves: CurvesResult, job: DefectJob, columns: number): Float64Array {
  const out = new Float64Array(job.levelsEv.length * columns);
  const levels = curves.level_eV;
  curves.responses.forEach((response, column) => {
    const largest = largestOf(response);
    for (const [l, levelEv] of job.levelsEv.entries()) {
      const at = nearest(levels, levelEv - curves.reference_eV);
      const model = Math.max(...response.error_model.map((row) => row[at]));
      out[l * columns + column] = largest > 0 ? model / largest : 0;
    }
  });
  return out;
}

const largestOf = ({ value }: ResponseCurve): number => Math.max(...value.flat().map(Math.abs));

function nearest(levels: readonly number[], level: number): number {
  let best = 0;
  for (const [i, each] of levels.entries()) if (Math.abs(each - level) < Math.abs(levels[best] - level)) best = i;
  return best;
}

/** What each cell makes of the models' error: its share of the neighbour defect at a level, weighed by how large the error is there. */
interface CellShares {
  /** Over all levels and responses, summing to 1. */
  readonly overall: Float64Array;
  /** [cell][level][column], each level and column summing to 1. */
  readonly single: Float64Array;
}

function sharesOf(defects: Float64Array, points: number, size: number, weights: Float64Array): CellShares {
  const single = defects.map(Math.abs);
  const total = new Float64Array(size);
  for (let at = 0; at < single.length; at++) total[at % size] += single[at];
  for (let at = 0; at < single.length; at++) single[at] = total[at % size] > 0 ? single[at] / total[at % size] : 0;
  const allWeights = weights.reduce((sum, value) => sum + value, 0);
  const overall = new Float64Array(points);
  for (let cell = 0; cell < points; cell++)
    for (let i = 0; i < size; i++) overall[cell] += (weights[i] / allWeights) * single[cell * size + i];
  return { overall, single };
}

/** Cells that no patch holds yet, best first; ties in the order of the mesh. */
function ranked(grid: Grid, overall: Float64Array): number[] {
  const taken = new Set(grid.patches.flatMap(({ facts }) => [...(facts.patch?.cells ?? [])]));
  return Array.from(overall.keys())
    .filter((cell) => !taken.has(cell))
    .sort((a, b) => (Math.abs(overall[a] - overall[b]) > alike * overall[a] ? overall[b] - overall[a] : a - b));
}

/** The first `wanted` cells, and those after them that are as good as the last. */
function chosen(order: readonly number[], overall: Float64Array, wanted: number): number[] {
  let end = Math.min(wanted, order.length);
  const last = overall[order[end - 1]];
  while (end < order.length && overall[order[end]] >= last * (1 - alike)) end++;
  return order.slice(0, end);
}

/** Computes a request. Throws a usage Fault where there is nothing to ask for. */
export async function request(directory: string, options: RequestOptions, run: RunOptions): Promise<RequestResult> {
  const { cells: wanted, divide, ...asked } = options;
  const planned = planSweep(directory, asked);
  const grid = openGrid(directory);
  const { facts } = grid;
  const { curves, refined } = await sweepPlanned(planned, run);
  if (refined === undefined) throw new Error("a request rests on a refined sweep");
  const job = planDefects(refined, facts.points);
  const tasks = parentTasks(cutTasks(grid));
  const sections = await runTasks({ kind: "defects", job }, tasks, { workers: run.workers, signal: run.signal });
  const columns = sections["truth.0"].length / tasks[0].count / job.levelsEv.length;
  const size = job.levelsEv.length * columns;
  const weights = relativeErrors(curves, job, columns);
  if (!weights.some((weight) => weight > 0))
    throw usageFault(
      "the local models make no error in this window: nothing computed on disk would lower it",
      "Ask for other levels or responses, or lower --accuracy to lower what sampling leaves.",
    );
  const shares = sharesOf(cellDefects(facts, tasks, sections, size), facts.points, size, weights);
  const order = ranked(grid, shares.overall);
  if (order.length === 0)
    throw usageFault("patches replace every cell of this mesh already", "Make a grid of the finer mesh, and ask it.");
  const picked = chosen(order, shares.overall, wanted ?? Math.max(1, Math.round(shareOfMesh * facts.points)));
  const gain = 1 - keptPart(divide, modelOrderOf(facts.hessian));
  return {
    format: "tidegauge.request/1",
    version: productVersion,
    grid: gridOf(facts),
    job: { study: "request", ...options },
    divide: facts.periodic === 3 ? [divide, divide, divide] : [divide, divide, 1],
    cells: cellRows(facts, picked, shares.overall, gain),
    expected: expectations(curves, job, columns, (i) => {
      let fall = 0;
      for (const cell of picked) fall += gain * shares.single[cell * size + i];
      return 1 - fall;
    }),
    notes: [
      ...curves.notes,
      "errors of single cells are taken to add up with one sign and to go with the neighbour defect: what is expected is on the safe side as a rule, not a bound",
    ],
  };
}

const gridOf = ({ title, sha256, bands, divisions, offset, periodic, points }: GridFacts): RequestResult["grid"] => ({
  title,
  sha256,
  bands,
  divisions: [...divisions],
  offset: [...offset],
  periodic,
  points,
});

function cellRows(
  facts: GridFacts,
  picked: readonly number[],
  overall: Float64Array,
  gain: number,
): RequestResult["cells"] {
  let left = 1;
  return picked.map((cell) => {
    left -= gain * overall[cell];
    return {
      cell,
      index: [...meshIndices(cell, facts.divisions)] as [number, number, number],
      k: [...fractionalK(cell, facts)] as [number, number, number],
      share: overall[cell],
      left,
    };
  });
}

/** Of each response, where its bar is largest: what `left` (of a level and column, by their place) makes of it. */
function expectations(
  curves: CurvesResult,
  job: DefectJob,
  columns: number,
  left: (place: number) => number,
): RequestResult["expected"] {
  const levels = job.levelsEv.map((levelEv) => levelEv - curves.reference_eV);
  return curves.responses.map((response, column) => {
    let [t, l] = [0, 0];
    response.error.forEach((row, temperature) => {
      row.forEach((error, level) => {
        if (error > response.error[t][l]) [t, l] = [temperature, level];
      });
    });
    const sampling = response.error_sampling[t][l];
    const part = left(nearest(levels, curves.level_eV[l]) * columns + column);
    return {
      name: response.name,
      unit: response.unit,
      level_eV: curves.level_eV[l],
      temperature_K: curves.temperature_K[t],
      value: response.value[t][l],
      error_now: response.error[t][l],
      error_sampling: sampling,
      error_expected: Math.hypot(sampling, part * response.error_model[t][l]),
    };
  });
}
