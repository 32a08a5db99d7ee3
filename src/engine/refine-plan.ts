// refine-plan.ts: from what was asked and what the first pass found to the settings of the refinement pass.
import { occupiedWeight } from "../curves/occupation.js";
import type { GridFacts } from "../grid/grid.js";
import { coarseNodes } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { columnCount } from "./columns.js";
import type { RefineJob, SweepJob } from "./job.js";
import { refinePass } from "./refine-pass.js";
import { counters } from "./refiner.js";

/** What is asked of a refinement. */
export interface RefineWish {
  /** Part of each response's largest value in the window. */
  readonly accuracy: number;
  /** Samples that may be spent, roughly. */
  readonly samples: number;
}

/** A response that vanishes by symmetry is not chased below this part of what single k points contribute to it. */
const symmetryFloor = 0.02;
/** Families let pass err at random: the sum over N cells of errors below s is about s sqrt(N) / 4. */
const splitPart = 0.4;
const depthLimit = 14;
/** No cell may take more than this many times its equal share of the samples. */
const greed = 16;
const probes = 48;

/** Tolerated error of each column in zone-mean units: accuracy times the largest regularised value in the window. */
function tolerances(job: SweepJob, facts: GridFacts, survey: Sections, accuracy: number): number[] {
  const columns = columnCount(job.plan);
  const axis = coarseNodes(job.axis);
  const regular = occupiedWeight({ axis, columns, base: survey["regular.base"], nodes: survey["regular.nodes"] });
  const largest = new Float64Array(columns);
  const out = new Float64Array(columns);
  const counts: number[] = [];
  for (const temperature of job.axis.temperaturesK)
    for (const level of job.axis.levelsEv) {
      regular(level, temperature, out);
      for (let c = 0; c < columns - 1; c++) largest[c] = Math.max(largest[c], Math.abs(out[c]));
      counts.push(out[columns - 1]);
    }
  for (const [at, size] of survey.size.entries()) {
    const c = at % columns;
    if (c < columns - 1) largest[c] = Math.max(largest[c], symmetryFloor * size);
  }
  largest[columns - 1] = Math.max(facts.points, Math.max(...counts) - Math.min(...counts));
  return Array.from(largest, (value) => Math.max((accuracy * value) / facts.points, Number.MIN_VALUE));
}

/** Mean samples per cell of evenly spaced probe cells. */
function probeCost(job: RefineJob, facts: GridFacts): number {
  const stride = Math.max(1, Math.floor(facts.points / probes));
  let samples = 0;
  let cells = 0;
  for (let first = 0; first < facts.points; first += stride, cells++) {
    const sections = refinePass(job, { first, count: 1 });
    samples += sections["refine.counters"][counters.samples] + sections["refine.counters"][counters.defectSamples];
  }
  return samples / cells;
}

/**
 * Settings of the refinement pass. Where a few probe cells show that the samples would not suffice, families may disagree by
 * more, so that the budget is spent where it matters most; the error bar then tells what was reached.
 */
export function planRefinement(job: SweepJob, facts: GridFacts, regularEv: number, survey: Sections, wish: RefineWish): RefineJob {
  const share = wish.samples / facts.points;
  const plan = (splitAbove: number): RefineJob => ({
    ...job,
    regularEv,
    tolerance: tolerances(job, facts, survey, wish.accuracy),
    splitAbove,
    depthLimit,
    samplesPerCell: Math.max(8, Math.ceil(greed * share)),
  });
  let refined = plan(splitPart / Math.sqrt(facts.points));
  for (let attempt = 0; attempt < 8; attempt++) {
    const cost = probeCost(refined, facts);
    if (cost <= share) break;
    refined = { ...refined, splitAbove: refined.splitAbove * Math.max(1.5, (cost / share) ** 1.3) };
  }
  return refined;
}
