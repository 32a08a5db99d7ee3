// refiner.ts: refines the cell of one stored point after another, and corrects its model against the neighbours.
import { boltzmannEvPerK } from "../base/constants.js";
import type { GridFacts, Triple } from "../grid/grid.js";
import { type Closeness, mayTouch } from "../refine/gaps.js";
import { createSpectralNorm, type SpectralNorm } from "../refine/indicator.js";
import { childWeight, createTree, type Family, guessShare, parentWeight } from "../refine/tree.js";
import { indicatorNodes, type NodeAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { type BoxSpectrum, createBoxSpectrum } from "./box-spectrum.js";
import { columnCount } from "./columns.js";
import type { RefineJob } from "./job.js";
import type { Links } from "./links.js";
import type { BandSample, LocalSampler } from "./local-sampler.js";
import { spanWidths } from "./pass.js";

/** Depths that are counted apart. */
export const depthsCounted = 24;
/** Places in the counters section. */
export const counters = {
  samples: 0,
  defectSamples: 1,
  splitCells: 2,
  splitVolume: 3,
  unresolved: 4,
  depths: 5,
} as const;

/** One mesh to refine: the stored one, or a contained sub-mesh that shows how the model's error falls with the mesh step. */
export interface RefinerPlan {
  readonly job: RefineJob;
  readonly facts: GridFacts;
  /** Edges of its cells, 1/angstrom. */
  readonly edges: readonly Triple[];
  /** Number of cells of its size in the zone. */
  readonly points: number;
  /** Volume of one of them, in cells of the stored (a patch's parent's) mesh. */
  readonly weight: number;
  /** A family is halved further above this part of the tolerance. */
  readonly splitAbove: number;
  /** Where its main spectrum is kept. */
  readonly axis: NodeAxis;
  readonly sampler: LocalSampler;
  /** Sees everything that is added, as it is added. */
  readonly watch?: RefineWatch;
}

/** One who sees what a refiner adds to its spectra. */
export interface RefineWatch {
  /** A family of boxes that is final; see depositFamily. */
  family(family: Family<BandSample>, resolved: boolean): void;
  /** The stored point, on which `calls` neighbours call: its truth. */
  truth(sample: BandSample, calls: number): void;
  /** What the model says of a neighbour, to be taken off `calls` times. */
  model(sample: BandSample, calls: number): void;
}

export interface Refiner {
  /** Refines the cell of a point that the sampler has just loaded; `links` say which neighbours correct it. */
  refine(links: Links): void;
  /** Only serves the neighbours of the point just loaded. */
  serve(links: Links): void;
  /** Hands over spectra and counters under `name.`. */
  finish(into: Sections, name: string): void;
}

/** A refiner of one mesh. */
export function createRefiner(plan: RefinerPlan): Refiner {
  const { job, facts, edges, sampler, weight } = plan;
  const columns = columnCount(job.plan);
  const main = createBoxSpectrum(plan.axis, columns, edges);
  const defect = createBoxSpectrum(plan.axis, columns, edges);
  const judge = createJudge(plan);
  const tally = new Float64Array(counters.depths + depthsCounted);
  const tree = createTree<BandSample>({
    dimension: facts.periodic,
    depthLimit: job.depthLimit,
    create: sampler.newSample,
    evaluate: (sample) => sampler.evaluate(sample, edges),
    disagrees: judge.disagrees,
    accept: (family, resolved) => {
      judge.accept();
      depositFamily(family, resolved, weight, main);
      plan.watch?.family(family, resolved);
    },
  });
  const root = sampler.newSample();
  const other = sampler.newSample();
  const steps = neighbourSteps(facts.periodic);
  // (1/24) sum over cells and neighbours of (stored truth - model's guess): what a point serves as truth is gathered where it stands.
  const serve = (links: Links): void => {
    if (links.truth === 0) return;
    sampler.evaluateRegular(root, edges);
    defect.add(root, 0, (weight * links.truth) / 24);
    plan.watch?.truth(root, links.truth);
  };
  return {
    serve(links) {
      root.t.fill(0);
      serve(links);
    },
    refine(links) {
      root.t.fill(0);
      sampler.evaluate(root, edges);
      const cost = tree(root, job.samplesPerCell);
      tally[counters.samples] += cost.samples;
      tally[counters.unresolved] += cost.unresolved;
      if (cost.deepest > 1) {
        tally[counters.splitCells]++;
        // A patch's cells are parts of one of the mesh's.
        tally[counters.splitVolume] += weight;
      }
      tally[counters.depths + Math.min(cost.deepest, depthsCounted - 1)]++;
      serve(links);
      for (const [i, t] of steps.entries()) {
        if (links.models[i] === 0) continue;
        other.t.set(t);
        other.centre.set(t);
        sampler.evaluateRegular(other, edges);
        defect.add(other, 0, (-weight * links.models[i]) / 24);
        plan.watch?.model(other, links.models[i]);
      }
      tally[counters.defectSamples] += steps.length;
    },
    finish(into, name) {
      main.finish(into, name);
      defect.finish(into, `${name}.defect`);
      into[`${name}.square`] = judge.squares;
      into[`${name}.counters`] = tally;
    },
  };
}

/** The 2d neighbours along the edges, in the order of Links.models. */
export function neighbourSteps(dimension: number): Float64Array[] {
  return Array.from({ length: 2 * dimension }, (_, i) => {
    const t = new Float64Array(dimension);
    t[i >> 1] = i % 2 === 0 ? -1 : 1;
    return t;
  });
}

/** A family that agrees is extrapolated; one that a limit ended counts as it is. */
function depositFamily(family: Family<BandSample>, resolved: boolean, weight: number, main: BoxSpectrum): void {
  const { parent, children, depth } = family;
  const size = 2 ** -depth;
  const volume = weight * size ** parent.t.length;
  for (const child of children) {
    const share = resolved ? childWeight(parent, child, depth) : 1;
    main.add(child, size / 2, (volume / children.length) * share);
  }
  if (resolved) main.add(parent, size, volume * parentWeight(parent, depth));
}

/** Decides on families, and keeps the squares of what was let pass. */
function createJudge({ job, facts, edges, points, splitAbove }: RefinerPlan) {
  const columns = columnCount(job.plan);
  const nodes = indicatorNodes(job.axis);
  const norm = windowNorm(job, nodes);
  const widths = new Float64Array(edges.length);
  const closeness = windowCloseness(job, facts, points, edges, splitAbove);
  const put = ({ energyEv, slopes, values }: BandSample, size: number, weight: number): void => {
    for (let band = 0; band < facts.bands; band++) {
      spanWidths(slopes, band, edges, widths);
      for (let j = 0; j < widths.length; j++) widths[j] *= size;
      norm.add(energyEv[band], widths, weight, values, band * columns);
    }
  };
  return {
    squares: norm.squares,
    accept: norm.keepSquares,
    disagrees({ parent, children, depth }: Family<BandSample>): boolean {
      const size = 2 ** -depth;
      const volume = size ** facts.periodic / points;
      put(parent, size, -volume);
      for (const child of children) put(child, size / 2, (volume / children.length) * guessShare(parent, child, depth));
      if (norm.take() > splitAbove) return true;
      return children.some((child) => mayTouch(child.energyEv, child.slopes, edges, size / 2, closeness));
    },
  };
}

/** Families are compared at the asked levels, and a few kT beyond at the highest temperature. */
function windowNorm(job: RefineJob, nodes: NodeAxis): SpectralNorm {
  const { levelsEv, temperaturesK } = job.axis;
  const reach = 3 * Math.max(...temperaturesK) * boltzmannEvPerK + nodes.stepEv;
  const at = (energyEv: number): number =>
    Math.min(nodes.count - 1, Math.max(0, Math.round((energyEv - nodes.startEv) / nodes.stepEv)));
  return createSpectralNorm(
    nodes,
    Float64Array.from(job.tolerance),
    at(levelsEv[0] - reach),
    at(levelsEv[levelsEv.length - 1] + reach),
  );
}

/** What two bands that touch unseen could contribute: the flux pi of a Dirac point for a moment 1/2, in the zone's mean. */
function windowCloseness(
  job: RefineJob,
  facts: GridFacts,
  points: number,
  edges: readonly Triple[],
  splitAbove: number,
): Closeness {
  const { levelsEv, temperaturesK, nodes } = job.axis;
  const { degenerateEv } = job.denominator;
  const responses = job.tolerance.slice(0, -1);
  return {
    fromEv: levelsEv[0] - 2 * boltzmannEvPerK * Math.max(...temperaturesK),
    toEv: levelsEv[levelsEv.length - 1] + 2 * boltzmannEvPerK * Math.max(...temperaturesK),
    degenerateEv,
    blurEv: 4 * boltzmannEvPerK * Math.min(...temperaturesK) + 2 * nodes.stepEv,
    // Where samples are short, families may disagree by more than is tolerated, and unseen touchings may matter by as much.
    strictness:
      zoneFlux(facts.periodic, points, edges) / (Math.min(...responses) * Math.max(1, splitAbove * Math.sqrt(points))),
    dimension: facts.periodic,
  };
}

/** Zone mean of a curvature whose flux through a layer (or through a sheet one cell edge long) is pi / 2. */
function zoneFlux(dimension: 2 | 3, points: number, edges: readonly Triple[]): number {
  const [a, b] = edges;
  const normal = [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
  if (dimension === 2) return Math.PI / 2 / (points * Math.hypot(...normal));
  const c = edges[2];
  const cell = Math.abs(normal[0] * c[0] + normal[1] * c[1] + normal[2] * c[2]);
  return ((Math.PI / 2) * cell ** (1 / 3)) / (points * cell);
}
