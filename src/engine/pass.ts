// pass.ts: one task of a sweep with the methods `points` and `cells`: stored points -> spectra.
import { openReader } from "../grid/reader.js";
import type { BlockReader, GridFacts, Triple } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { createPairPass } from "../kernel/pair.js";
import type { Sections } from "../spectrum/sections.js";
import { cellEdges, smallestSubMeshes, subMeshOf } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import { columnCount, fillColumns } from "./columns.js";
import type { SweepJob, Task } from "./job.js";
import { createBoxTally, createPointTally, type Tally } from "./tally.js";

/** Widths (eV) that a band spans along each edge of its cell: |slope . edge|. */
export function spanWidths(slope: Float64Array, band: number, edges: readonly Triple[], out: Float64Array): void {
  const at = 3 * band;
  for (let j = 0; j < edges.length; j++) {
    const [x, y, z] = edges[j];
    out[j] = Math.abs(slope[at] * x + slope[at + 1] * y + slope[at + 2] * z);
  }
}

/** Opens the reader a job needs. */
export function readerFor(job: SweepJob): BlockReader {
  const directions = job.method === "points" ? usedDirections(job) : [0, 1, 2];
  const hessian = job.method === "refine";
  return openReader(openGrid(job.directory), { velocity: directions, moments: job.plan.moments, hessian });
}

const usedDirections = (job: SweepJob): number[] =>
  [...new Set(job.plan.products.flatMap((p) => [p.flow, p.field]))].sort();

function tallies(job: SweepJob, facts: GridFacts): [string, Tally][] {
  const columns = columnCount(job.plan);
  const subMeshes = smallestSubMeshes(facts)?.count ?? 0;
  const points: [string, Tally] = ["points", createPointTally(job.axis, columns, subMeshes)];
  return job.method === "points" ? [points] : [points, ["cells", createBoxTally(job.axis, columns, subMeshes)]];
}

/** Spectra of one task of a `points` or `cells` sweep. */
export function meshPass(job: SweepJob, task: Task): Sections {
  const reader = readerFor(job);
  const { facts } = reader;
  const { bands } = facts;
  const pass = createPairPass(bands, job.plan.products, job.denominator);
  const kept = tallies(job, facts);
  const sub = smallestSubMeshes(facts);
  const edges = cellEdges(facts);
  const curvature = new Float64Array(job.plan.products.length * bands);
  const slope = new Float64Array(3 * bands);
  const widths = new Float64Array(edges.length);
  const values = new Float64Array(columnCount(job.plan));
  walkPoints(reader, task, job.plan.moments, (flat, point) => {
    pass.run(point, curvature);
    if (job.method !== "points") pass.slopes(point, slope);
    const coset = sub === undefined ? 0 : subMeshOf(flat, facts, sub);
    for (let band = 0; band < bands; band++) {
      fillColumns(job.plan, curvature, bands, band, values);
      spanWidths(slope, band, edges, widths);
      for (const [, tally] of kept) tally.add(point.energyEv[point.energyOffset + band], widths, values, coset);
    }
  });
  reader.close();
  const sections: Sections = {};
  for (const [name, tally] of kept) tally.finish(sections, name);
  return sections;
}
