// refine-pass.ts: one task of a refined sweep: stored points -> refined spectra of the mesh and of a contained coarser mesh.
import type { Triple } from "../grid/grid.js";
import { coarseNodes } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { cellEdges, smallestSubMeshes, subMeshOf } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import type { RefineJob, Task } from "./job.js";
import { createLocalSampler } from "./local-sampler.js";
import { readerFor } from "./pass.js";
import { createRefiner } from "./refiner.js";

/** The coarser mesh only tells an error: its cells may disagree by more. */
const coarseLeniency = 4;

/** Spectra and counters of some runs of points, under `refine.` and, where the mesh contains a sub-mesh, `coarse.`. */
export function refinePass(job: RefineJob, tasks: readonly Task[]): Sections {
  const reader = readerFor(job, true);
  const { facts } = reader;
  const edges = cellEdges(facts);
  const sampler = createLocalSampler(job, facts);
  const { points } = facts;
  const common = { job, facts, sampler };
  const fine = createRefiner({ ...common, edges, points, splitAbove: job.splitAbove, axis: job.axis.nodes });
  const sub = job.probing ? undefined : smallestSubMeshes(facts);
  const coarse =
    sub &&
    createRefiner({
      ...common,
      edges: edges.map(([x, y, z]): Triple => [x * sub.stride, y * sub.stride, z * sub.stride]),
      points: points / sub.count,
      splitAbove: job.splitAbove * Math.sqrt(sub.count) * coarseLeniency,
      axis: coarseNodes(job.axis),
    });
  for (const task of tasks)
    walkPoints(reader, task, job.plan.moments, (flat, point) => {
      sampler.load(point);
      fine.refine();
      if (sub !== undefined && subMeshOf(flat, facts, sub) === 0) coarse?.refine();
    });
  reader.close();
  const sections: Sections = {};
  fine.finish(sections, "refine");
  coarse?.finish(sections, "coarse");
  return sections;
}
