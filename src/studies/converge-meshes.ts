// converge-meshes.ts: sweeps of every mesh that a convergence is judged by: the stored one and what it contains, or a family of grids.
import { dataFault, usageFault } from "../base/errors.js";
import { columnTable } from "../curves/assemble.js";
import { refinedCurves } from "../curves/refined.js";
import type { CurvesResult, Table } from "../curves/result.js";
import { columnCount } from "../engine/columns.js";
import { cutTasks, type RefineJob } from "../engine/job.js";
import { counters } from "../engine/refiner.js";
import { type RunOptions, runTasks } from "../engine/run.js";
import type { GridFacts, View } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { containedStrides, viewsOf } from "../grid/view.js";
import type { ConvergeMesh } from "./converge-result.js";
import { type ReferenceLevel, referenceLevel } from "./reference.js";
import { type SweepOptions, sweep, sweepPlanned } from "./sweep.js";
import { planSweep, unitOf } from "./sweep-plan.js";

/** Curves of all responses: [response][temperature][level]. */
type ResponseTables = readonly Table[];

/** A mesh and the curves of its shifts; those of the densest mesh's own kind of shift come first. */
export interface SweptMesh {
  readonly mesh: ConvergeMesh;
  readonly plain: readonly ResponseTables[];
  readonly refined: readonly ResponseTables[];
}

export interface Meshes {
  /** Facts of the densest mesh. */
  readonly facts: GridFacts;
  /** The sweep of the densest mesh, with its bars; of a family all sweeps, densest first. */
  readonly sweeps: readonly CurvesResult[];
  /** Densest first. */
  readonly swept: readonly SweptMesh[];
  readonly samples: number;
}

export interface MeshWish {
  /** The sweep of the densest mesh, or of each grid of a family. */
  readonly sweep: SweepOptions;
  /** Most shifts of one density that are refined. */
  readonly shifts: number;
}

/** A coarser mesh with fewer points than this along a direction tells nothing. */
const leastForSums = 3;
const leastForModels = 4;
/** Plain sums are cheap, but more shifts than this tell little more. */
const mostPlainShifts = 64;
/** Coarser meshes beyond these are too far from the stored one. */
const mostStrides = 6;
const mostRefinedStrides = 2;
/** Coarser meshes only tell an error: their cells may disagree by more. */
const leniency = 6;

const meshOf = (
  facts: GridFacts,
  step: number,
  origin: string,
): Omit<ConvergeMesh, "shifts" | "shifts_refined" | "blind"> => ({
  divisions: facts.divisions.slice(0, facts.periodic),
  points: facts.points,
  step,
  origin,
});

const tablesOf = ({ responses }: CurvesResult, key: "points" | "value"): ResponseTables =>
  responses.map((response) => response[key]);

/** Progress of parts of different weight as one. */
function sharedProgress(run: RunOptions, total: number) {
  let done = 0;
  return (weight: number): RunOptions => {
    const before = done;
    done += weight;
    const onProgress = (part: number, of: number): void =>
      run.onProgress?.(Math.round(before + (weight * part) / of), Math.round(total));
    return { ...run, onProgress };
  };
}

/** About how much longer a stored point takes to refine than to sum. */
const refinedWeight = 30;

/** What the sub-meshes of one grid are computed with. */
interface Contained {
  readonly directory: string;
  readonly options: SweepOptions;
  readonly reference: ReferenceLevel;
}

/** The plain sum over a sub-mesh; in this thread, which spares starting workers. */
async function plainSum({ directory, options, reference }: Contained, view: View, run: RunOptions) {
  const planned = planSweep(directory, { ...options, method: "points" }, { view, reference });
  const { curves } = await sweepPlanned(planned, { ...run, workers: 1 });
  return tablesOf(curves, "points");
}

/** A refined sub-mesh, with the settings that the stored mesh was refined with: no probing, no bars. */
async function refinedValue(of: Contained, settings: RefineJob, view: View, run: RunOptions) {
  const { directory, options, reference } = of;
  const { job, facts, regularEv } = planSweep(directory, options, { view, reference });
  const times = view.stride ** facts.periodic;
  const refined: RefineJob = {
    ...settings,
    ...job,
    regularEv,
    splitAbove: settings.splitAbove * Math.sqrt(times) * leniency,
    samplesPerCell: settings.samplesPerCell * times,
    probing: true,
  };
  const sections = await runTasks({ kind: "refine", job: refined }, cutTasks(openGrid(directory, view)), run);
  const { hessian, bands, points, electronsPerBand, periodic } = facts;
  const columns = columnCount(job.plan);
  const curves = refinedCurves(sections, {
    ...{ axis: job.axis, columns, points, electronsPerBand, dimension: periodic, subMeshes: undefined },
    ...{ regularEv, hessian, bands },
  });
  const tables = job.plan.columns.map(({ carrier }, c) =>
    columnTable(curves, c, unitOf(carrier, facts, options).factor),
  );
  const tally = sections["refine.counters"];
  return { tables, samples: tally[counters.samples] + tally[counters.defectSamples] };
}

/** What is to be done on the sub-meshes of one stride. */
interface StridePlan {
  readonly stride: number;
  readonly points: number;
  readonly views: readonly View[];
  /** How many of the views, from the first on, are refined. */
  readonly refined: number;
}

function stridePlans(facts: GridFacts, refine: boolean, shifts: number): StridePlan[] {
  const models = containedStrides(facts, leastForModels).slice(0, mostRefinedStrides);
  return containedStrides(facts, leastForSums)
    .slice(0, mostStrides)
    .map((stride) => {
      const views = ownKindFirst(facts, stride, viewsOf(facts, stride, mostPlainShifts));
      const refined = refine && models.includes(stride) ? Math.min(shifts, views.length) : 0;
      return { stride, points: facts.points / stride ** facts.periodic, views, refined };
    });
}

const wholeMesh: View = { stride: 1, shift: [0, 0, 0] };

/** Sweeps of one grid and of the sub-meshes that it contains. */
export async function containedMeshes(directory: string, wish: MeshWish, run: RunOptions): Promise<Meshes> {
  const { facts } = openGrid(directory);
  const reference = referenceLevel(facts);
  const of: Contained = { directory, options: wish.sweep, reference };
  const refine = wish.sweep.method === "refine";
  const plans = stridePlans(facts, refine, wish.shifts);
  const costOf = ({ points, views, refined }: StridePlan): number => points * (views.length + refined * refinedWeight);
  const storedCost = facts.points * (refine ? refinedWeight : 1);
  const part = sharedProgress(run, storedCost + facts.points + plans.reduce((sum, plan) => sum + costOf(plan), 0));
  const { curves, refined: settings } = await sweepPlanned(
    planSweep(directory, wish.sweep, { reference }),
    part(storedCost),
  );
  // Patches of the grid are no part of its mesh.
  const sums = await plainSum(of, wholeMesh, part(facts.points));
  const values = settings ? [tablesOf(curves, "value")] : [];
  let samples = curves.sampling.samples + facts.points;
  const swept: SweptMesh[] = [
    {
      mesh: { ...meshOf(facts, 1, "stored"), shifts: 1, shifts_refined: values.length, blind: false },
      plain: [sums],
      refined: values,
    },
  ];
  for (const { stride, points, views, refined } of plans) {
    const [plain, models]: ResponseTables[][] = [[], []];
    for (const view of views) plain.push(await plainSum(of, view, part(points)));
    for (const view of settings ? views.slice(0, refined) : []) {
      const model = await refinedValue(of, settings as RefineJob, view, part(points * refinedWeight));
      models.push(model.tables);
      samples += model.samples;
    }
    samples += points * views.length;
    const divisions = facts.divisions.slice(0, facts.periodic).map((n) => n / stride);
    const counts = { shifts: plain.length, shifts_refined: models.length, blind: mirrored(facts, stride) };
    swept.push({ mesh: { divisions, points, step: stride, origin: "contained", ...counts }, plain, refined: models });
  }
  return { facts, sweeps: [curves], swept, samples };
}

/** The two halves of a direction of a mesh that is moved by half a step lie at +-1/4 of their own step: mirrors exchange them. */
const mirrored = ({ offset, periodic }: GridFacts, stride: number): boolean =>
  stride === 2 && offset.slice(0, periodic).some((x) => Math.abs(x - 0.5) < 1e-9);

/** The views with the one whose offset within its own step is the stored mesh's moved to the front, where there is such a one. */
function ownKindFirst({ offset, periodic }: GridFacts, stride: number, views: readonly View[]): View[] {
  const alike = ({ shift }: View): boolean =>
    [0, 1, 2].slice(0, periodic).every((j) => Math.abs((offset[j] + shift[j]) / stride - offset[j]) < 1e-9);
  return [...views.filter(alike), ...views.filter((view) => !alike(view))];
}

/** Sweeps of grids of one material on different meshes, about the reference level of the densest. */
export async function familyMeshes(directories: readonly string[], wish: MeshWish, run: RunOptions): Promise<Meshes> {
  const grids = directories
    .map((directory) => ({ directory, facts: openGrid(directory).facts }))
    .sort((a, b) => b.facts.points - a.facts.points);
  const [densest, ...others] = grids;
  for (const [at, other] of others.entries()) {
    checkSameMaterial(densest, other);
    checkOtherMesh(grids[at], other);
  }
  const reference = referenceLevel(densest.facts);
  const part = sharedProgress(
    run,
    grids.reduce((sum, { facts }) => sum + facts.points, 0),
  );
  const sweeps: CurvesResult[] = [];
  for (const { directory, facts } of grids)
    sweeps.push(await sweep(directory, wish.sweep, part(facts.points), { reference }));
  const swept = grids.map(({ directory, facts }, at): SweptMesh => {
    const step = (densest.facts.points / facts.points) ** (1 / facts.periodic);
    const values = wish.sweep.method === "refine" ? [tablesOf(sweeps[at], "value")] : [];
    const mesh = { ...meshOf(facts, step, directory), shifts: 1, shifts_refined: values.length, blind: false };
    return { mesh, plain: [tablesOf(sweeps[at], "points")], refined: values };
  });
  return {
    facts: densest.facts,
    sweeps,
    swept,
    samples: sweeps.reduce((sum, { sampling }) => sum + sampling.samples, 0),
  };
}

interface NamedGrid {
  readonly directory: string;
  readonly facts: GridFacts;
}

/** Throws a data Fault where two grids cannot be of one material. */
function checkSameMaterial(a: NamedGrid, b: NamedGrid): void {
  const differ = (what: string, one: string | number, other: string | number): never => {
    throw dataFault(
      `${b.directory} and ${a.directory} are not one material on two meshes: ${what} ${other} and ${one}`,
      "Give grids that differ in their mesh alone; a family that differs otherwise is what `series` is for.",
    );
  };
  const scale = Math.max(...a.facts.vectorsA.flat().map(Math.abs));
  const latticeApart = a.facts.vectorsA.flat().some((x, i) => Math.abs(x - b.facts.vectorsA.flat()[i]) > 1e-6 * scale);
  if (latticeApart) differ("lattice", JSON.stringify(a.facts.vectorsA), JSON.stringify(b.facts.vectorsA));
  for (const key of ["periodic", "bands", "electronsPerBand"] as const)
    if (a.facts[key] !== b.facts[key]) differ(key, a.facts[key], b.facts[key]);
  for (const key of ["fermiEv", "electrons"] as const) {
    const [one, other] = [a.facts[key], b.facts[key]];
    if (one !== undefined && other !== undefined && Math.abs(one - other) > (key === "fermiEv" ? 0.05 : 1e-6))
      differ(key === "fermiEv" ? "Fermi levels (eV)" : key, one, other);
  }
}

/** Throws a usage Fault where two grids have one density. */
function checkOtherMesh(a: NamedGrid, b: NamedGrid): void {
  if (a.facts.points !== b.facts.points) return;
  throw usageFault(
    `${b.directory} and ${a.directory} have the same number of k points`,
    "Name grids of different density; one grid alone is judged by the meshes that it contains.",
  );
}
