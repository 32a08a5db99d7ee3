// refine-pass.ts: one task of a refined sweep: local models of the stored points -> trees of cells -> spectra.
import type { GridFacts, Triple } from "../grid/grid.js";
import type { PointRef } from "../kernel/kernel.js";
import { createLocalModel } from "../kernel/local.js";
import { mayTouch } from "../refine/gaps.js";
import { createSpectralNorm } from "../refine/indicator.js";
import { createTree, type Family, type Sample } from "../refine/tree.js";
import { coarseNodes, indicatorNodes } from "../spectrum/axis.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../spectrum/boxes.js";
import type { Sections } from "../spectrum/sections.js";
import { cellEdges } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import { columnCount, fillColumns } from "./columns.js";
import type { RefineJob, Task } from "./job.js";
import { readerFor, spanWidths } from "./pass.js";

/** Levels of depth that are counted apart. */
export const depthsCounted = 24;
/** What the counters section holds. */
export const counters = { samples: 0, splitCells: 1, unresolved: 2, defectSamples: 3, depths: 4 } as const;

/** A sample of the local model: energies, slopes and columns of every band, and with regularised denominators again. */
interface BandSample extends Sample {
  readonly energyEv: Float64Array;
  readonly slopes: Float64Array;
  /** [band][column] */
  readonly values: Float64Array;
}

const newSample = (facts: GridFacts, columns: number): BandSample => ({
  t: new Float64Array(facts.periodic),
  energyEv: new Float64Array(facts.bands),
  slopes: new Float64Array(3 * facts.bands),
  values: new Float64Array(facts.bands * columns),
});

/** Weights of Richardson's extrapolation of a family: children and parent err like the square of the box. */
const childShare = 4 / 3;
const parentShare = -1 / 3;

/** Cartesian q of edge coordinates. */
function displacement(t: Float64Array, edges: readonly Triple[], out: Float64Array): void {
  out.fill(0);
  for (let j = 0; j < edges.length; j++) for (let a = 0; a < 3; a++) out[a] += t[j] * edges[j][a];
}

/** The local model of one point at a time, as samples; `regular` gives the regularised columns of the last evaluation. */
function createSampler(job: RefineJob, facts: GridFacts, edges: readonly Triple[]) {
  const { bands } = facts;
  const { products } = job.plan;
  const columns = columnCount(job.plan);
  const regular = { degenerateEv: 0, broadenEv: Math.hypot(job.regularEv, job.denominator.broadenEv) };
  const model = createLocalModel({
    bands,
    hessian: facts.hessian,
    directions: facts.periodic === 3 ? [0, 1, 2] : [0, 1],
    products,
    denominators: [job.denominator, regular],
  });
  const curvature = new Float64Array(2 * products.length * bands);
  const q = new Float64Array(3);
  const row = new Float64Array(columns);
  const fill = (sample: BandSample, source: Float64Array): void => {
    sample.energyEv.set(model.energyEv);
    sample.slopes.set(model.slopes);
    for (let band = 0; band < bands; band++) {
      fillColumns(job.plan, source, bands, band, row);
      sample.values.set(row, band * columns);
    }
  };
  return {
    load: (point: PointRef) => model.load(point),
    /** Plain denominators, for the tree. */
    evaluate(sample: BandSample): void {
      displacement(sample.t, edges, q);
      model.evaluate(q[0], q[1], q[2], curvature);
      fill(sample, curvature);
    },
    /** Regularised denominators, for the defect. */
    evaluateRegular(sample: BandSample): void {
      displacement(sample.t, edges, q);
      model.evaluate(q[0], q[1], q[2], curvature);
      fill(sample, curvature.subarray(products.length * bands));
    },
  };
}

/** Adds a sample's bands, each spread over a box of `size` cells, times a weight. */
type AddSample = (sample: BandSample, size: number, weight: number) => void;

function createSpectrum(axis: { startEv: number; stepEv: number; count: number }, columns: number, edges: readonly Triple[]) {
  const store = createBoxStore(axis, columns);
  const shaper = createBoxShaper(axis);
  const widths = new Float64Array(edges.length);
  const row = new Float64Array(columns);
  const add: AddSample = (sample, size, weight) => {
    for (let band = 0; band < sample.energyEv.length; band++) {
      spanWidths(sample.slopes, band, edges, widths);
      for (let j = 0; j < widths.length; j++) widths[j] *= size;
      const shape = shaper(sample.energyEv[band], widths);
      if (shape.side === 1) break;
      for (let c = 0; c < columns; c++) row[c] = weight * sample.values[band * columns + c];
      depositShape(store, shape, row);
    }
  };
  const finish = (into: Sections, name: string): void => {
    settleBoxes(store);
    into[`${name}.base`] = store.base;
    into[`${name}.nodes`] = store.copies[0];
  };
  return { add, finish };
}

/** Neighbours along each edge, both ways. */
function neighbourSteps(dimension: number): Float64Array[] {
  return Array.from({ length: 2 * dimension }, (_, i) => {
    const t = new Float64Array(dimension);
    t[i >> 1] = i % 2 === 0 ? 1 : -1;
    return t;
  });
}

/** Spectra and counters of one task. */
export function refinePass(job: RefineJob, task: Task): Sections {
  const reader = readerFor(job);
  const { facts } = reader;
  const columns = columnCount(job.plan);
  const edges = cellEdges(facts);
  const sampler = createSampler(job, facts, edges);
  const spectra = {
    refine: createSpectrum(job.axis.nodes, columns, edges),
    step: createSpectrum(coarseNodes(job.axis), columns, edges),
    defect: createSpectrum(coarseNodes(job.axis), columns, edges),
  };
  const tally = new Float64Array(counters.depths + depthsCounted);
  const norm = createSpectralNorm(indicatorNodes(job.axis), Float64Array.from(job.tolerance));
  const tree = createTree<BandSample>({
    dimension: facts.periodic,
    depthLimit: job.depthLimit,
    create: () => newSample(facts, columns),
    evaluate: sampler.evaluate,
    disagrees: (family) => disagrees(family, job, facts, edges, norm),
    accept: (family, resolved) => acceptFamily(family, resolved, facts.periodic, spectra),
  });
  const root = newSample(facts, columns);
  const other = newSample(facts, columns);
  const steps = neighbourSteps(facts.periodic);
  walkPoints(reader, task, job.plan.moments, (_flat, point) => {
    sampler.load(point);
    root.t.fill(0);
    sampler.evaluate(root);
    const cost = tree(root, job.samplesPerCell);
    tally[counters.samples] += cost.samples;
    tally[counters.unresolved] += cost.unresolved;
    if (cost.deepest > 1) tally[counters.splitCells]++;
    tally[counters.depths + Math.min(cost.deepest, depthsCounted - 1)]++;
    // Each stored point is the neighbour of 2d cells: its true contribution counts 2d times 1/24, each model's guess of it once.
    root.t.fill(0);
    sampler.evaluateRegular(root);
    addDefect(root, steps.length / 24, spectra);
    for (const t of steps) {
      other.t.set(t);
      sampler.evaluateRegular(other);
      addDefect(other, -1 / 24, spectra);
    }
    tally[counters.defectSamples] += steps.length;
  });
  reader.close();
  const sections: Sections = { counters: tally };
  for (const [name, spectrum] of Object.entries(spectra)) spectrum.finish(sections, name);
  return sections;
}

type Spectra = Record<"refine" | "step" | "defect", { add: AddSample }>;

function addDefect(sample: BandSample, weight: number, spectra: Spectra): void {
  spectra.refine.add(sample, +(process.env.DS ?? 1), weight);
  spectra.defect.add(sample, +(process.env.DS ?? 1), weight);
}

function acceptFamily(family: Family<BandSample>, resolved: boolean, dimension: number, spectra: Spectra): void {
  const { parent, children, depth } = family;
  const size = 2 ** -depth;
  const volume = size ** dimension;
  const childVolume = volume / children.length;
  for (const child of children) {
    spectra.refine.add(child, size / 2, childVolume * (resolved ? childShare : 1));
    spectra.step.add(child, size / 2, childVolume / 3);
  }
  if (resolved) spectra.refine.add(parent, size, volume * parentShare);
  spectra.step.add(parent, size, -volume / 3);
}

function disagrees(
  family: Family<BandSample>,
  job: RefineJob,
  facts: GridFacts,
  edges: readonly Triple[],
  norm: ReturnType<typeof createSpectralNorm>,
): boolean {
  const { parent, children, depth } = family;
  const columns = columnCount(job.plan);
  const size = 2 ** -depth;
  const volume = size ** facts.periodic / facts.points;
  const widths = new Float64Array(edges.length);
  const put = (sample: BandSample, scale: number, weight: number): void => {
    for (let band = 0; band < facts.bands; band++) {
      spanWidths(sample.slopes, band, edges, widths);
      for (let j = 0; j < widths.length; j++) widths[j] *= scale;
      norm.add(sample.energyEv[band], widths, weight, sample.values.subarray(band * columns, (band + 1) * columns));
    }
  };
  put(parent, size, -volume);
  for (const child of children) put(child, size / 2, volume / children.length);
  if (norm.take() > job.splitAbove) return true;
  const levels = job.axis.levelsEv;
  const window = { fromEv: levels[0] - 0.1, toEv: levels[levels.length - 1] + 0.1 };
  if (volume * facts.points < 2 ** (-facts.periodic * 6)) return false;
  return process.env.NOTOUCH === undefined && children.some((child) => mayTouch(child.energyEv, child.slopes, edges, size / 2, window, job.denominator.degenerateEv));
}
