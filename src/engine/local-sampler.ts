// local-sampler.ts: the local model of one stored point as samples of the columns that are kept.
import type { GridFacts, Triple } from "../grid/grid.js";
import type { PointRef } from "../kernel/kernel.js";
import { createLocalModel } from "../kernel/local.js";
import { pairCount } from "../kernel/pairs.js";
import { averageOverSets } from "../kernel/sets.js";
import type { Sample } from "../refine/tree.js";
import { columnCount, fillColumns, fillPairColumns, mixColumns } from "./columns.js";
import type { RefineJob, SweepJob } from "./job.js";

/** What the local model says at one place: energies and slopes of every band, and its columns. */
export interface BandSample extends Sample {
  readonly energyEv: Float64Array;
  /** [band * 3 + direction], eV angstrom. */
  readonly slopes: Float64Array;
  /** [band * columns + column] */
  readonly values: Float64Array;
  /** What each pair of bands n < m adds to n and takes from m, [response * pairs + pair]; empty where it is not wanted. */
  readonly pairs: Float64Array;
}

/** A sample to be filled; `pairNumbers`: room for what pairs of bands give. */
export const newSample = (facts: GridFacts, columns: number, pairNumbers = 0): BandSample => ({
  t: new Float64Array(facts.periodic),
  centre: new Float64Array(facts.periodic),
  energyEv: new Float64Array(facts.bands),
  slopes: new Float64Array(3 * facts.bands),
  values: new Float64Array(facts.bands * columns),
  pairs: new Float64Array(pairNumbers),
});

export interface LocalSampler {
  /** A sample that this sampler fills. */
  newSample(): BandSample;
  load(point: PointRef): void;
  /** Fills the sample at its t (in the given edges), with the denominators of the job. */
  evaluate(sample: BandSample, edges: readonly Triple[]): void;
  /** The same with regularised denominators. */
  evaluateRegular(sample: BandSample, edges: readonly Triple[]): void;
}

/** A sampler for one grid and job, whose own samples hold the parts of pairs of bands too, where wanted; allocates nothing per sample. */
export function createLocalSampler(
  job: SweepJob & Pick<RefineJob, "regularEv">,
  facts: GridFacts,
  detail: "bands" | "pairs" = "bands",
): LocalSampler {
  const { bands } = facts;
  const mixed = mixColumns(job.plan);
  const { products } = mixed;
  const columns = columnCount(job.plan);
  const regular = { degenerateEv: 0, broadenEv: Math.hypot(job.regularEv, job.denominator.broadenEv) };
  const model = createLocalModel({
    bands,
    hessian: facts.hessian,
    directions: facts.periodic === 3 ? [0, 1, 2] : [0, 1],
    products,
    denominators: [job.denominator, regular],
    togetherEv: job.denominator.degenerateEv,
  });
  const curvature = new Float64Array(2 * products.length * bands);
  const regularised = curvature.subarray(products.length * bands);
  const q = new Float64Array(3);
  const row = new Float64Array(columns);
  const productPairs = new Float64Array(detail === "pairs" ? products.length * pairCount(bands) : 0);
  const pairNumbers = detail === "pairs" ? job.plan.columns.length * pairCount(bands) : 0;
  const fill = (sample: BandSample, edges: readonly Triple[], source: Float64Array): void => {
    q.fill(0);
    for (let j = 0; j < edges.length; j++) for (let a = 0; a < 3; a++) q[a] += sample.t[j] * edges[j][a];
    model.evaluate(q[0], q[1], q[2], curvature);
    sample.energyEv.set(model.energyEv);
    sample.slopes.set(model.slopes);
    averageOverSets(sample.energyEv, sample.slopes, job.denominator.degenerateEv);
    for (let band = 0; band < bands; band++) {
      fillColumns(mixed, { products: source, squares: model.squares, bands }, band, row);
      sample.values.set(row, band * columns);
    }
    if (sample.pairs.length === 0) return;
    model.pairCurvatures(source === regularised ? 1 : 0, productPairs);
    fillPairColumns(mixed.columns, productPairs, pairCount(bands), sample.pairs);
  };
  return {
    newSample: () => newSample(facts, columns, pairNumbers),
    load: (point) => model.load(point),
    evaluate: (sample, edges) => fill(sample, edges, curvature),
    evaluateRegular: (sample, edges) => fill(sample, edges, regularised),
  };
}
