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
/** Nor below this zone mean, angstrom^2 (a tenth of an S/cm in a metal's cell): round-off of large terms. */
const absoluteFloor = 1e-4;
/** Part of the tolerated error that sampling may use up. */
const samplingShare = 0.3;
/** First guess: families let pass err at random, so that the sum over N cells of errors below s is about s sqrt(N). */
const firstSplit = 1;
const mostAttempts = 8;
const goldenPart = (Math.sqrt(5) - 1) / 2;
const depthLimit = 14;
/** No cell may take more than this many times its equal share of the samples, nor more than the whole divided by `leastCells`. */
const greed = 256;
const leastCells = 8;
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
    if (c < columns - 1) largest[c] = Math.max(largest[c], symmetryFloor * size, absoluteFloor * facts.points);
  }
  largest[columns - 1] = Math.max(facts.points, Math.max(...counts) - Math.min(...counts));
  // The Drude weight comes along, and steers nothing.
  largest.fill(Number.POSITIVE_INFINITY, job.plan.columns.length, columns - 1);
  return Array.from(largest, (value) => (accuracy * value) / facts.points);
}

interface ProbeFindings {
  /** Samples per cell. */
  readonly cost: number;
  /** Standard error of the whole sum from what was let pass, in parts of what is tolerated; the worst level and column. */
  readonly spread: number;
}

/** What a few cells, spread evenly but in no step with the mesh, cost and leave undecided. */
function probe(job: RefineJob, facts: GridFacts): ProbeFindings {
  const count = Math.min(probes, facts.points);
  const cells = Array.from({ length: count }, (_, i) => ({
    first: Math.floor((((i + 0.5) * goldenPart) % 1) * facts.points),
    count: 1,
  }));
  const sections = refinePass({ ...job, probing: true }, cells);
  const tally = sections["refine.counters"];
  const squares = sections["refine.square"];
  const columns = job.tolerance.length;
  let spread = 0;
  for (const [at, square] of squares.entries())
    spread = Math.max(spread, Math.sqrt((square * facts.points) / count) / job.tolerance[at % columns]);
  return { cost: (tally[counters.samples] + tally[counters.defectSamples]) / count, spread };
}

/**
 * Settings of the refinement pass. A few probe cells show how much families may disagree for the whole sum to be as sure as is
 * asked; where the samples would not suffice, they may disagree by more, and the error bar tells what was reached.
 */
export function planRefinement(
  job: SweepJob,
  facts: GridFacts,
  regularEv: number,
  survey: Sections,
  wish: RefineWish,
): RefineJob {
  const share = wish.samples / facts.points;
  const tolerance = tolerances(job, facts, survey, wish.accuracy);
  let splitAbove = firstSplit / Math.sqrt(facts.points);
  const samplesPerCell = Math.max(8, Math.ceil(Math.min(greed * share, wish.samples / leastCells)));
  const settings = (): RefineJob => ({ ...job, regularEv, tolerance, splitAbove, depthLimit, samplesPerCell });
  let limited = false;
  for (let attempt = 0; attempt < mostAttempts; attempt++) {
    const { cost, spread } = probe(settings(), facts);
    if (cost > share) {
      limited = true;
      splitAbove *= Math.max(1.5, (cost / share) ** 1.5);
    } else if (!limited && spread > samplingShare) splitAbove *= Math.max(0.2, (0.8 * samplingShare) / spread);
    else break;
  }
  return settings();
}
