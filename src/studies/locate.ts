// locate.ts: which bands and which part of the zone make the value at this level?
import { z } from "zod";
import { productVersion } from "../base/version.js";
import type { CurvesResult } from "../curves/result.js";
import { type CellContributions, cellContributions } from "../engine/contributions.js";
import { cutTasks, type LocateJob, type Task } from "../engine/job.js";
import { createPlaces, inStoredOrder } from "../engine/place.js";
import { placeTasks } from "../engine/places-pass.js";
import { type RunOptions, runTasks } from "../engine/run.js";
import type { Triple } from "../grid/grid.js";
import { type Grid, openGrid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";
import type { Sections } from "../spectrum/sections.js";
import { reciprocalVectors } from "../zone/lattice.js";
import { detailTasks, type Found, listedCells, locatedResponse, type WholeZone } from "./locate-cells.js";
import { bandsOfSets, overlaps, setsOfBands } from "./locate-parts.js";
import type { LocateResult } from "./locate-result.js";
import { pathOf, planeOf, planePlaces } from "./locate-where.js";
import { computeSweep } from "./sweep.js";
import { planSweep, type SweepPlan, sweepOptions, unitOf } from "./sweep-plan.js";
import { assembleResult } from "./sweep-result.js";

/** Of a sum of contributions of both signs that cancel this part may be left. */
const roundOff = 1e-9;

const { response, method, accuracy, samples, degenerate, broaden, unit } = sweepOptions.shape;

/** Options of `locate`: those of a sweep at one level and temperature, and where to look. */
export const locateOptions = z.strictObject({
  response,
  method,
  accuracy,
  samples,
  degenerate,
  broaden,
  unit,
  /** Relative to the reference level. */
  level: z.number().min(-1000).max(1000).default(0),
  temperature: z.array(z.number().min(0).max(100000)).length(1, { error: "expected one temperature" }).default([300]),
  /** Cells listed for each response. */
  cells: z.int().min(1).max(100_000).default(100),
  /** Centre and two directions of the map. */
  plane: z.string().max(400).optional(),
  /** Places of the map along each direction. */
  mapPoints: z.int().min(2).max(1001).default(61),
  path: z.string().max(4000).optional(),
  pathPoints: z.int().min(2).max(20_001).default(200),
});

export type LocateOptions = z.infer<typeof locateOptions>;

/** What the integrand is at some places: [place][response] in zone means, and energies [place][band]. */
interface Visited {
  readonly values: Float64Array;
  readonly energies: Float64Array;
}

/** The integrand at places of the zone; the last ones asked for may be a path's. */
async function visit(job: SweepPlan["job"], places: readonly Triple[], run: RunOptions): Promise<Visited> {
  const placeOf = createPlaces(openGrid(job.directory, job.view));
  const ordered = inStoredOrder(places.map(placeOf));
  const sections = await runTasks({ kind: "places", job: { ...job, places: ordered } }, placeTasks(ordered), run);
  return { values: sections["place.values"], energies: sections["place.energies"] };
}

/** Tasks that look closely at the listed cells, each one cell of the mesh or the points of a patch that stand for it. */
async function details(
  planned: SweepPlan,
  job: LocateJob,
  cells: readonly number[],
  setOf: readonly number[],
  run: RunOptions,
): Promise<{ readonly tasks: readonly Task[]; readonly sections: Sections }> {
  const tasks = detailTasks(openGrid(planned.job.directory, planned.job.view), cells);
  const close = { ...job, setOf, probing: true as const };
  return { tasks, sections: await runTasks({ kind: "locate", job: close }, tasks, run) };
}

/** Computes where a value comes from. Throws usage and data Faults. */
export async function locate(directory: string, options: LocateOptions, run: RunOptions): Promise<LocateResult> {
  const {
    level,
    temperature,
    cells: listed,
    plane: planeText,
    mapPoints,
    path: pathText,
    pathPoints,
    ...rest
  } = options;
  const planned = planSweep(directory, { ...rest, from: level, to: level, points: 1, temperature });
  const grid = openGrid(directory);
  const { facts } = grid;
  const plane = planeOf(planeText, mapPoints, facts.periodic);
  const path = pathText === undefined ? undefined : pathOf(pathText, pathPoints, facts);
  const computed = await computeSweep(planned, run, "locate");
  const curves = assembleResult(planned, computed);
  const { sections } = computed;
  const job: LocateJob = computed.refined ?? { ...planned.job, regularEv: planned.regularEv };
  const contributions = cellContributions(job, cutTasks(grid), sections);
  const setOf = setsOfBands(sections["locate.apart"]);
  const quiet = { workers: run.workers, signal: run.signal };
  const order = planned.job.plan.columns.map((_, r) => listedCells(contributions, r, planned.job.plan.columns.length));
  const shown = [...new Set(order.flatMap((cells) => [...cells.subarray(0, listed)]))].sort((a, b) => a - b);
  const found: Found = await details(planned, job, shown, setOf, quiet);
  const places = [...planePlaces(plane), ...(path?.k ?? [])];
  const visited = await visit(planned.job, places, quiet);
  const zone: WholeZone = { grid, sections, contributions, setOf, found, listed, curves };
  const responses = planned.job.plan.columns.map(({ carrier }, r) => {
    const { factor } = unitOf(carrier, facts, planned.options);
    const values = (first: number, count: number): number[] =>
      Array.from({ length: count }, (_, i) => factor * visited.values[(first + i) * order.length + r]);
    return {
      ...locatedResponse(zone, r, order[r], factor),
      map: Array.from({ length: mapPoints }, (_, row) => values(row * mapPoints, mapPoints)),
      ...(path === undefined ? {} : { path: values(mapPoints ** 2, path.k.length) }),
    };
  });
  return {
    format: "tidegauge.locate/1",
    version: productVersion,
    grid: gridOf(grid),
    job: { study: "locate", ...options },
    reference_eV: curves.reference_eV,
    level_eV: level,
    temperature_K: temperature[0],
    sets: bandsOfSets(setOf),
    responses,
    overlap: overlaps(partsOf(responses, contributions, setOf)),
    plane,
    ...(path === undefined
      ? {}
      : { path: { ...path, energies_eV: energiesOf(visited, mapPoints ** 2, facts.bands, curves) } }),
    sampling: samplingOf(curves, grid),
    notes: [...curves.notes, ...notesOf(grid, planned.options)],
  };
}

const gridOf = ({ facts }: Grid): LocateResult["grid"] => ({
  title: facts.title,
  sha256: facts.sha256,
  bands: facts.bands,
  divisions: [...facts.divisions],
  offset: [...facts.offset],
  periodic: facts.periodic,
  points: facts.points,
  reciprocal: [...reciprocalVectors(facts.vectorsA)],
});

const samplingOf = ({ sampling }: CurvesResult, { patches }: Grid): LocateResult["sampling"] => ({
  method: sampling.method,
  stored: sampling.stored,
  samples: sampling.samples,
  deepest: sampling.deepest,
  patches: patches.reduce((sum, { facts }) => sum + facts.points / (facts.patch ? pointsPerCell(facts.patch) : 1), 0),
});

/** Cells of the mesh and pairs of sets of every response as vectors in one order. */
function partsOf(
  responses: LocateResult["responses"],
  { main, correction }: CellContributions,
  setOf: readonly number[],
) {
  const count = responses.length;
  const sets = setOf[setOf.length - 1] + 1;
  return responses.map(({ name, pairs, positive, negative, vanishes }, r) => {
    const cells = Float64Array.from({ length: main.length / count }, (_, cell) =>
      vanishes ? 0 : main[cell * count + r] + correction[cell * count + r],
    );
    const bySets = new Float64Array(sets * sets);
    // What round-off leaves of pairs that cancel throughout the zone has nothing in common with anything.
    const least = roundOff * (positive - negative);
    for (const { lower, upper, contribution } of pairs)
      if (!vanishes && Math.abs(contribution) > least) bySets[lower * sets + upper] = contribution;
    return { name, cells, pairs: bySets };
  });
}

function energiesOf({ energies }: Visited, first: number, bands: number, { reference_eV }: CurvesResult): number[][] {
  const count = energies.length / bands - first;
  return Array.from({ length: count }, (_, i) =>
    Array.from(energies.subarray((first + i) * bands, (first + i + 1) * bands), (energy) => energy - reference_eV),
  );
}

function notesOf({ facts }: Grid, { method: how, degenerate: closeness }: SweepPlan["options"]): string[] {
  return [
    "a cell's contribution is that of all its bands together; images of a place under the crystal's symmetry are listed one by one",
    `bands are counted from 0 in the order of their energies; those never seen more than ${closeness} eV apart are one set, and within a set no band is told from another`,
    "where bands cross, their numbers change over: a pair of numbers need not be one pair of orbitals throughout the zone",
    ...(how === "refine"
      ? [
          "maps and paths show the integrand of each cell's own model: small steps at cell boundaries are what its neighbours correct",
        ]
      : ["maps and paths show the stored point in whose cell a place lies"]),
    ...(facts.electronsPerBand === 2 ? ["every band holds two electrons and counts twice"] : []),
  ];
}
