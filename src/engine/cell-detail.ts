// cell-detail.ts: where in one cell is a response hottest, which bands make it, and how close do bands come that the level splits?
import type { Sections } from "../spectrum/sections.js";
import { fractionalK } from "../zone/mesh.js";
import { columnCount } from "./columns.js";
import type { LocateJob, Task } from "./job.js";
import type { BandSample } from "./local-sampler.js";
import type { Region } from "./regions.js";

/** Bands whose filling differs by less than this are not counted as split by the level. */
const splitPart = 0.01;

/** Place of a task's detail among its sections; a task is one cell. */
export const detailArray = ({ first, patch }: Pick<Task, "first" | "patch">): string =>
  `locate.detail.${patch ?? "mesh"}.${first}`;

/** Numbers of a detail: first the closest pair that the level splits (gap, k1, k2, k3, sets), then for each response its hottest sample and its leading pair. */
export const detailNumbers = {
  /** gap (eV), k1, k2, k3, lower set, upper set. */
  gap: 6,
  /** Density (per volume of a cell), k1, k2, k3, gap (eV) of the pair that leads there, its lower and upper set; leading pair of the cell: sets, contribution. */
  response: 10,
} as const;

export interface CellDetail {
  /** Looks at a sample in the box of a stored point. */
  see(flat: number, sample: BandSample, occupied: Float64Array): void;
  finish(into: Sections, task: Task, pairs: Float64Array): void;
}

/** Sums of pairs of bands over pairs of sets: lower[a * sets + b] for set a below set b. */
function createSetPairs(setOf: readonly number[], pairCount: number) {
  const sets = setOf[setOf.length - 1] + 1;
  const sums = new Float64Array(sets * sets);
  /** The leading pair of one response: factor(n, m) times its parts, summed over the bands of the sets. */
  return (parts: Float64Array, response: number, factor: (n: number, m: number) => number) => {
    sums.fill(0);
    for (let n = 0, at = response * pairCount; n < setOf.length; n++)
      for (let m = n + 1; m < setOf.length; m++, at++) sums[setOf[n] * sets + setOf[m]] += parts[at] * factor(n, m);
    let best = 0;
    for (let i = 1; i < sums.length; i++) if (Math.abs(sums[i]) > Math.abs(sums[best])) best = i;
    return { lower: Math.floor(best / sets), upper: best % sets, value: sums[best] };
  };
}

/** The detail of one cell; `setOf` [band]: which set of everywhere degenerate bands it belongs to. */
export function createCellDetail(job: LocateJob, region: Region, setOf: readonly number[]): CellDetail {
  const { bands } = region.parent;
  const responses = job.plan.columns.length;
  const columns = columnCount(job.plan);
  const leading = createSetPairs(setOf, (bands * (bands - 1)) / 2);
  const out = new Float64Array(detailNumbers.gap + responses * detailNumbers.response).fill(Number.NaN);
  const placeOf = (flat: number, { t }: BandSample): number[] =>
    fractionalK(flat, region.facts).map((k, j) => k + (t[j] ?? 0) / region.facts.divisions[j]);

  const seeGaps = (flat: number, sample: BandSample, occupied: Float64Array): void => {
    for (let n = 0; n < bands; n++)
      for (let m = n + 1; m < bands; m++) {
        const gap = sample.energyEv[m] - sample.energyEv[n];
        if (gap >= out[0]) break;
        if (gap < job.denominator.degenerateEv || Math.abs(occupied[n] - occupied[m]) < splitPart) continue;
        out.set([gap, ...placeOf(flat, sample), setOf[n], setOf[m]]);
      }
  };
  const seeResponse = (r: number, flat: number, sample: BandSample, occupied: Float64Array): void => {
    let density = 0;
    for (let n = 0; n < bands; n++) density += occupied[n] * sample.values[n * columns + r];
    const at = detailNumbers.gap + r * detailNumbers.response;
    if (Math.abs(density) <= Math.abs(out[at])) return;
    const { lower, upper } = leading(sample.pairs, r, (n, m) => occupied[n] - occupied[m]);
    const gap = sample.energyEv[setOf.indexOf(upper)] - sample.energyEv[setOf.lastIndexOf(lower)];
    out.set([density, ...placeOf(flat, sample), gap, lower, upper], at);
  };
  return {
    see(flat, sample, occupied) {
      seeGaps(flat, sample, occupied);
      for (let r = 0; r < responses; r++) seeResponse(r, flat, sample, occupied);
    },
    finish(into, task, pairs) {
      for (let r = 0; r < responses; r++) {
        const { lower, upper, value } = leading(pairs, r, () => 1);
        out.set([lower, upper, value], detailNumbers.gap + r * detailNumbers.response + 7);
      }
      into[detailArray(task)] = out;
    },
  };
}
