// places-pass.ts: what do the bands and the responses do at some places of the zone?
import { boltzmannEvPerK } from "../base/constants.js";
import { fermi } from "../curves/occupation.js";
import { openGrid } from "../grid/open.js";
import type { Sections } from "../spectrum/sections.js";
import { walkPoints } from "./blocks.js";
import { columnCount } from "./columns.js";
import type { PlacesJob, Task } from "./job.js";
import { createLocalSampler, newSample } from "./local-sampler.js";
import { regionFor } from "./pass.js";
import type { Place } from "./place.js";

/** Tasks of runs of places. */
export const placeTasks = (places: readonly Place[]): Task[] => {
  const count = Math.max(1, Math.ceil(places.length / 16));
  return Array.from({ length: Math.ceil(places.length / count) }, (_, i) => ({
    first: i * count,
    count: Math.min(count, places.length - i * count),
  }));
};

/**
 * Of some places, by their index: `place.values` [index][response], sum_n f Omega_n there, and `place.energies` [index][band], eV. With the
 * method `refine` from the local model of the stored point, else the stored point itself stands for its whole cell.
 */
export function placesPass(job: PlacesJob, { first, count }: Task): Sections {
  const places = job.places.slice(first, first + count);
  const responses = job.plan.columns.length;
  const { bands } = openGrid(job.directory, job.view).facts;
  const values = new Float64Array(job.places.length * responses);
  const energies = new Float64Array(job.places.length * bands);
  for (let at = 0; at < places.length; ) {
    const { patch } = places[at];
    const end = places.findIndex((place, i) => i > at && place.patch !== patch);
    const own = places.slice(at, end < 0 ? undefined : end);
    visitRegion(job, own, (index, filled, energyEv) => {
      values.set(filled, index * responses);
      energies.set(energyEv, index * bands);
    });
    at += own.length;
  }
  return { "place.values": values, "place.energies": energies };
}

type TakePlace = (index: number, values: Float64Array, energyEv: Float64Array) => void;

function visitRegion(job: PlacesJob, places: readonly Place[], take: TakePlace): void {
  const region = regionFor(job, { first: 0, count: 0, patch: places[0].patch }, job.method === "refine");
  const columns = columnCount(job.plan);
  const facts = job.method === "refine" ? region.parent : { ...region.parent, hessian: "none" as const };
  const sampler = createLocalSampler({ ...job, regularEv: 0 }, facts);
  const sample = newSample(region.parent, columns);
  const values = new Float64Array(job.plan.columns.length);
  const { levelsEv, temperaturesK } = job.axis;
  const thermalEv = temperaturesK[0] * boltzmannEvPerK;
  const filled = (energyEv: number): number => {
    if (thermalEv === 0) return energyEv <= levelsEv[0] ? 1 : 0;
    return fermi((energyEv - levelsEv[0]) / thermalEv);
  };
  for (let at = 0; at < places.length; ) {
    const { flat } = places[at];
    walkPoints(region.reader, { first: flat, count: 1 }, job.plan.moments, (_flat, point) => sampler.load(point));
    for (; at < places.length && places[at].flat === flat; at++) {
      for (let j = 0; j < sample.t.length; j++) sample.t[j] = job.method === "refine" ? places[at].t[j] : 0;
      sampler.evaluate(sample, region.edges);
      values.fill(0);
      for (let n = 0; n < sample.energyEv.length; n++)
        for (let r = 0; r < values.length; r++)
          values[r] += filled(sample.energyEv[n]) * sample.values[n * columns + r];
      take(places[at].index, values, sample.energyEv);
    }
  }
  region.reader.close();
}
