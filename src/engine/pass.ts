// pass.ts: one task of a sweep with the methods `points` and `cells`: stored points -> spectra.
import type { GridFacts, Triple } from "../grid/grid.js";
import type { MatrixRef, PointRef } from "../kernel/kernel.js";
import { createPairPass } from "../kernel/pair.js";
import { setEnd, storedSquares } from "../kernel/sets.js";
import type { Sections } from "../spectrum/sections.js";
import { spreadSubMeshes, subMeshOf } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import { columnCount, fillColumns } from "./columns.js";
import type { SweepJob, Task } from "./job.js";
import { openRegion, type Region } from "./regions.js";
import { createBoxTally, createPointTally, type Tally } from "./tally.js";

/** Widths (eV) that a band spans along each edge of its cell: |slope . edge|. */
export function spanWidths(slope: Float64Array, band: number, edges: readonly Triple[], out: Float64Array): void {
  const at = 3 * band;
  for (let j = 0; j < edges.length; j++) {
    const [x, y, z] = edges[j];
    out[j] = Math.abs(slope[at] * x + slope[at + 1] * y + slope[at + 2] * z);
  }
}

/**
 * Widths (eV) that the bands of a set span along each edge of their cell: the root mean square of the set's block of
 * dH/dk . edge, sqrt(sum |<n|v|m>|^2 / count), which no change of basis within the set alters. A single band: |slope . edge|.
 */
export function setWidths(
  point: PointRef,
  first: number,
  end: number,
  edges: readonly Triple[],
  out: Float64Array,
): void {
  const { bands } = point;
  const [x, y, z] = point.velocity as readonly MatrixRef[];
  for (let j = 0; j < edges.length; j++) {
    const [ex, ey, ez] = edges[j];
    let square = 0;
    for (let n = first; n < end; n++)
      for (let m = first; m < end; m++) {
        const at = 2 * (n * bands + m);
        const re = ex * x.data[x.offset + at] + ey * y.data[y.offset + at] + ez * z.data[z.offset + at];
        const im = ex * x.data[x.offset + at + 1] + ey * y.data[y.offset + at + 1] + ez * z.data[z.offset + at + 1];
        square += re * re + im * im;
      }
    out[j] = Math.sqrt(square / (end - first));
  }
}

/** Opens the region a task lies in for what a job needs; second derivatives only where a local model is made. */
export function regionFor(job: SweepJob, task: Task, hessian = false): Region {
  const directions = job.method === "points" ? usedDirections(job) : [0, 1, 2];
  return openRegion(job, task, { velocity: directions, moments: job.plan.moments, hessian });
}

const usedDirections = ({ plan }: SweepJob): number[] =>
  [...new Set([...plan.drude, ...plan.products.flatMap((p) => [p.flow, p.field])])].sort();

function tallies(job: SweepJob, facts: GridFacts): [string, Tally][] {
  const columns = columnCount(job.plan);
  const subMeshes = spreadSubMeshes(facts)?.count ?? 0;
  const points: [string, Tally] = ["points", createPointTally(job.axis, columns, subMeshes)];
  return job.method === "points" ? [points] : [points, ["cells", createBoxTally(job.axis, columns, subMeshes)]];
}

/** Spectra of one task of a `points` or `cells` sweep. */
export function meshPass(job: SweepJob, task: Task): Sections {
  const region = regionFor(job, task);
  const { parent, edges, weight } = region;
  const { bands } = parent;
  const pass = createPairPass(bands, job.plan.products, job.denominator);
  const kept = tallies(job, parent);
  const sub = spreadSubMeshes(parent);
  const curvature = new Float64Array(job.plan.products.length * bands);
  const squares = new Float64Array(3 * bands);
  const widths = new Float64Array(edges.length);
  const values = new Float64Array(columnCount(job.plan));
  walkPoints(region.reader, task, job.plan.moments, (flat, point) => {
    if (!region.counts(flat)) return;
    pass.run(point, curvature);
    storedSquares(point, job.denominator.degenerateEv, squares);
    const coset = sub === undefined ? 0 : subMeshOf(region.cellOf(flat), parent, sub);
    let end = 0;
    for (let band = 0; band < bands; band++) {
      if (band === end) {
        end = setEnd(point.energyEv, point.energyOffset, bands, band, job.denominator.degenerateEv);
        if (job.method !== "points") setWidths(point, band, end, edges, widths);
      }
      fillColumns(job.plan, { products: curvature, squares, bands }, band, values);
      for (let c = 0; c < values.length; c++) values[c] *= weight;
      for (const [, tally] of kept) tally.add(point.energyEv[point.energyOffset + band], widths, values, coset);
    }
  });
  region.reader.close();
  const sections: Sections = {};
  for (const [name, tally] of kept) tally.finish(sections, name);
  return sections;
}
