// locate-pass.ts: one task of a sweep at one level and temperature, with what every cell, band and pair of bands adds to it.
import type { PointRef } from "../kernel/kernel.js";
import { createPairPass } from "../kernel/pair.js";
import { pairCount } from "../kernel/pairs.js";
import { setEnd } from "../kernel/sets.js";
import type { Sections } from "../spectrum/sections.js";
import { walkPoints } from "./blocks.js";
import { columnCount, fillColumns, fillPairColumns } from "./columns.js";
import type { LocateJob, RefineJob, Task } from "./job.js";
import { newSample } from "./local-sampler.js";
import { createLocator, type Locator } from "./locator.js";
import { createOccupancy } from "./occupancy.js";
import { meshPass, regionFor, setWidths } from "./pass.js";
import { refinePass } from "./refine-pass.js";
import type { Region } from "./regions.js";

/** Sections of the sweep's own pass, and beside them those of a locator. */
export function locatePass(job: LocateJob, task: Task): Sections {
  if (job.method !== "refine") return { ...meshPass(job, task), ...locateMesh(job, task) };
  let locator: Locator | undefined;
  const sections = refinePass(job as LocateJob & RefineJob, [task], (region) => {
    locator = createLocator(job, region, task);
    return locator;
  });
  locator?.finish(sections);
  return sections;
}

/** What stored points contribute with the methods `points` and `cells`. */
function locateMesh(job: LocateJob, task: Task): Sections {
  const region = regionFor(job, task);
  const { bands } = region.parent;
  const locator = createLocator(job, region, task);
  const sample = newSample(region.parent, columnCount(job.plan), job.plan.columns.length * pairCount(bands));
  const fill = createFiller(job, region);
  const occupied = new Float64Array(bands);
  walkPoints(region.reader, task, job.plan.moments, (flat, point) => {
    if (!region.counts(flat)) return;
    fill(point, sample, occupied);
    locator.begin(flat);
    locator.cell(sample, occupied);
  });
  region.reader.close();
  const sections: Sections = {};
  locator.finish(sections);
  return sections;
}

/** Fills a sample and the filled parts of its bands from a stored point. */
function createFiller(job: LocateJob, { parent: { bands }, edges }: Region) {
  const { products, columns } = job.plan;
  const pass = createPairPass(bands, products, job.denominator);
  const curvature = new Float64Array(products.length * bands);
  const pairs = new Float64Array(products.length * pairCount(bands));
  const quantities = { products: curvature, squares: new Float64Array(3 * bands), bands };
  const row = new Float64Array(columnCount(job.plan));
  const widths = new Float64Array(edges.length);
  const occupancy = createOccupancy(job, edges, bands);
  return (point: PointRef, sample: ReturnType<typeof newSample>, occupied: Float64Array): void => {
    const { energyEv, energyOffset } = point;
    pass.run(point, curvature);
    pass.pairs(point, pairs);
    fillPairColumns(columns, pairs, pairCount(bands), sample.pairs);
    let end = 0;
    for (let band = 0; band < bands; band++) {
      if (band === end) {
        end = setEnd(energyEv, energyOffset, bands, band, job.denominator.degenerateEv);
        if (job.method === "cells") setWidths(point, band, end, edges, widths);
      }
      fillColumns(job.plan, quantities, band, row);
      sample.values.set(row, band * row.length);
      sample.energyEv[band] = energyEv[energyOffset + band];
      occupied[band] = occupancy.stored(sample.energyEv[band], widths);
    }
  };
}
