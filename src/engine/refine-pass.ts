// refine-pass.ts: one task of a refined sweep: stored points -> refined spectra of the mesh and of a contained coarser mesh.
import type { Triple } from "../grid/grid.js";
import { coarseNodes } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { smallestSubMeshes, subMeshOf } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import type { RefineJob, Task } from "./job.js";
import { allLinks, createLinkFinder } from "./links.js";
import { createLocalSampler, type LocalSampler } from "./local-sampler.js";
import { regionFor } from "./pass.js";
import { createRefiner, type Refiner, type RefineWatch } from "./refiner.js";
import type { Region } from "./regions.js";

/** The coarser mesh only tells an error: its cells may disagree by more. */
const coarseLeniency = 4;
/** So may cells that patches replace: what their own models give serves the same comparison. */
const replacedLeniency = 4;

/** One who sees what a pass over a region's points adds up. */
export interface PassWatch {
  /** Told which point comes next, before it is refined. */
  begin(flat: number): void;
  readonly refiner: RefineWatch;
}

/**
 * Spectra and counters of some runs of points of one region, under `refine.` (of a patch `patch.`); where the parent's mesh contains a sub-mesh also that
 * mesh's, under `coarse.`; and where patches replace cells, what the parent's own models give for those, under `replaced.`. `watchOf` makes
 * one who sees all that is added under `refine.` or `patch.`; samples then hold the parts of pairs of bands.
 */
export function refinePass(job: RefineJob, tasks: readonly Task[], watchOf?: (region: Region) => PassWatch): Sections {
  const region = regionFor(job, tasks[0], true);
  const watch = watchOf?.(region);
  const local = { ...job, regularEv: job.regularEv * region.weight ** (1 / region.parent.periodic) };
  const sampler = createLocalSampler(local, region.parent, watch === undefined ? "bands" : "pairs");
  const fine = ownRefiner(job, region, sampler, 1, watch?.refiner);
  const ofParent = region.facts.patch === undefined && !job.probing;
  const replaced = ofParent && region.patchOf.size > 0 ? ownRefiner(job, region, sampler, replacedLeniency) : undefined;
  const sub = ofParent ? smallestSubMeshes(region.parent) : undefined;
  const coarse = sub && coarseRefiner(job, region, sampler, sub);
  const finder = createLinkFinder(region);
  const all = allLinks(region.parent.periodic);
  for (const task of tasks)
    walkPoints(region.reader, task, job.plan.moments, (flat, point) => {
      sampler.load(point);
      watch?.begin(flat);
      const { links, replaced: lost } = finder.find(flat);
      if (region.counts(flat)) {
        fine.refine(links);
        replaced?.serve(lost);
      } else {
        fine.serve(links);
        replaced?.refine(lost);
      }
      if (sub !== undefined && subMeshOf(flat, region.parent, sub) === 0) coarse?.refine(all);
    });
  region.reader.close();
  const sections: Sections = {};
  fine.finish(sections, region.facts.patch === undefined ? "refine" : "patch");
  replaced?.finish(sections, "replaced");
  coarse?.finish(sections, "coarse");
  return sections;
}

function ownRefiner(
  job: RefineJob,
  region: Region,
  sampler: LocalSampler,
  leniency: number,
  watch?: RefineWatch,
): Refiner {
  const { parent, edges, weight } = region;
  return createRefiner({
    job,
    facts: parent,
    sampler,
    edges,
    points: parent.points / weight,
    weight,
    splitAbove: job.splitAbove * leniency,
    axis: job.axis.nodes,
    watch,
  });
}

function coarseRefiner(
  job: RefineJob,
  { parent, edges }: Region,
  sampler: LocalSampler,
  sub: { readonly stride: number; readonly count: number },
): Refiner {
  return createRefiner({
    job,
    facts: parent,
    sampler,
    edges: edges.map(([x, y, z]): Triple => [x * sub.stride, y * sub.stride, z * sub.stride]),
    points: parent.points / sub.count,
    weight: 1,
    splitAbove: job.splitAbove * Math.sqrt(sub.count) * coarseLeniency,
    axis: coarseNodes(job.axis),
  });
}
