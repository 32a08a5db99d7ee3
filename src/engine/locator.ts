// locator.ts: which cells, parts of the zone, bands and pairs of bands make the occupied weight at one level and temperature?
import { childWeight, type Family, parentWeight } from "../refine/tree.js";
import type { Sections } from "../spectrum/sections.js";
import { createCellDetail } from "./cell-detail.js";
import { columnCount } from "./columns.js";
import { addToShares, newShares } from "./density-shares.js";
import type { LocateJob, Task } from "./job.js";
import type { BandSample } from "./local-sampler.js";
import { createOccupancy } from "./occupancy.js";
import type { PassWatch } from "./refine-pass.js";
import type { Region } from "./regions.js";

/** Names of a task's own arrays, [point of the task][response]; points of a region are in one task each. */
export const pointArray = (what: "main" | "truth" | "model", { first, patch }: Pick<Task, "first" | "patch">): string =>
  `locate.${what}.${patch ?? "mesh"}.${first}`;

/** Adds up what every sample contributes; all of it sums to the sweep's sum over the zone, in cells of the parent's mesh. */
export interface Locator extends PassWatch {
  /** Counts a stored point as its whole cell, its bands filled by `occupied`. */
  cell(sample: BandSample, occupied: Float64Array): void;
  /**
   * Hands over: `locate.pairs`, `.pairs.correction` [response][pair n < m], `locate.bands`, `.bands.correction` [response][band],
   * `locate.apart` [band]: in how many samples it was not degenerate with the next one, `locate.shares` (see density-shares), and the
   * points' own arrays.
   */
  finish(into: Sections): void;
}

/** What pairs and bands add up to. */
function createTotals(responses: number, bands: number, columns: number) {
  const pairs = new Float64Array((responses * (bands * (bands - 1))) / 2);
  const byBand = new Float64Array(responses * bands);
  const add = ({ values, pairs: parts }: BandSample, occupied: Float64Array, weight: number): void => {
    for (let r = 0, at = 0; r < responses; r++)
      for (let n = 0; n < bands; n++) {
        byBand[r * bands + n] += weight * occupied[n] * values[n * columns + r];
        for (let m = n + 1; m < bands; m++, at++) pairs[at] += weight * parts[at] * (occupied[n] - occupied[m]);
      }
  };
  return { pairs, byBand, add };
}

/** A locator for one task of a region. */
export function createLocator(job: LocateJob, region: Region, task: Task): Locator {
  const { bands, periodic } = region.parent;
  const { weight } = region;
  const responses = job.plan.columns.length;
  const columns = columnCount(job.plan);
  const occupancy = createOccupancy(job, region.edges, bands);
  const main = createTotals(responses, bands, columns);
  const correction = createTotals(responses, bands, columns);
  const shares = newShares(responses);
  const apart = new Float64Array(bands);
  const [ofPoint, truth, model] = [0, 0, 0].map(() => new Float64Array(task.count * responses));
  const detail = job.setOf === undefined ? undefined : createCellDetail(job, region, job.setOf);
  const [whole, part] = [new Float64Array(responses), new Float64Array(responses)];
  let at = 0;
  let point = 0;

  const totals = ({ values }: BandSample, occupied: Float64Array, factor: number, out: Float64Array): void => {
    for (let r = 0; r < responses; r++) {
      let sum = 0;
      for (let n = 0; n < bands; n++) sum += occupied[n] * values[n * columns + r];
      out[r] = factor * sum;
    }
  };
  const seeSets = ({ energyEv }: BandSample): void => {
    for (let n = 0; n + 1 < bands; n++) if (energyEv[n + 1] - energyEv[n] >= job.denominator.degenerateEv) apart[n]++;
  };
  const take = (sample: BandSample, occupied: Float64Array, factor: number, out: Float64Array): void => {
    totals(sample, occupied, factor, out);
    main.add(sample, occupied, factor);
    detail?.see(point, sample, occupied);
    for (let r = 0; r < responses; r++) ofPoint[at + r] += out[r];
  };
  const family = ({ parent, children, depth }: Family<BandSample>, resolved: boolean): void => {
    const size = 2 ** -depth;
    const volume = weight * size ** periodic;
    whole.fill(0);
    if (resolved) take(parent, occupancy.box(parent, size), volume * parentWeight(parent, depth), whole);
    for (const child of children) {
      const share = resolved ? childWeight(parent, child, depth) : 1;
      seeSets(child);
      take(child, occupancy.box(child, size / 2), (volume / children.length) * share, part);
      // What extrapolation takes off the parent is taken off its halves alike.
      for (let r = 0; r < responses; r++) part[r] += whole[r] / children.length;
      addToShares(shares, volume / children.length, part);
    }
  };
  const defect = (sample: BandSample, calls: number, sign: 1 | -1, target: Float64Array): void => {
    const occupied = occupancy.warm(sample);
    const factor = (sign * weight) / 24;
    correction.add(sample, occupied, factor * calls);
    totals(sample, occupied, factor * (sign < 0 ? calls : 1), part);
    for (let r = 0; r < responses; r++) target[at + r] += part[r];
  };
  return {
    begin(flat) {
      point = flat;
      at = (flat - task.first) * responses;
    },
    cell(sample, occupied) {
      seeSets(sample);
      take(sample, occupied, weight, part);
      addToShares(shares, weight, part);
    },
    refiner: {
      family,
      truth: (sample, calls) => defect(sample, calls, 1, truth),
      model: (sample, calls) => defect(sample, calls, -1, model),
    },
    finish(into) {
      into["locate.pairs"] = main.pairs;
      into["locate.pairs.correction"] = correction.pairs;
      into["locate.bands"] = main.byBand;
      into["locate.bands.correction"] = correction.byBand;
      into["locate.apart"] = apart;
      into["locate.shares"] = shares;
      into[pointArray("main", task)] = ofPoint;
      into[pointArray("truth", task)] = truth;
      into[pointArray("model", task)] = model;
      detail?.finish(into, task, main.pairs);
    },
  };
}
