// survey.ts: what is in a band grid and can it be trusted? Reads every number once and collects what is wrong.
import { isFault } from "../base/errors.js";
import type { ArrayPlan } from "./arrays.js";
import type { Block } from "./grid.js";
import { forEachMatrix, type Grid, openUncheckedReader, pointsPerBlock, storedPart, wantAll } from "./reader.js";
import {
  componentName,
  type Finding,
  hermitianTolerance,
  type Report,
  smallestScale,
  storedBits,
  verifyEnergies,
  verifyMatrices,
} from "./verify.js";

/** The range of one band over the stored k points, eV. */
export interface BandRange {
  readonly lowestEv: number;
  readonly highestEv: number;
}

/** How far the worst matrix of an array is from its conjugate transpose. */
export interface ArraySurvey {
  /** As in the manifest: "energy", "velocity", "moments.spin", "hessian". */
  readonly name: string;
  readonly bytes: number;
  readonly files: number;
  readonly type: string;
  readonly axes: readonly string[];
  /** Canonical units; 0 for energies. `relative`: over the largest element of that matrix, or over 0.1. */
  readonly asymmetry: {
    readonly deviation: number;
    readonly relative: number;
    readonly point: number;
    readonly component: string;
  };
  /** Largest |Re| or |Im| of an element, canonical units; 0 for energies. */
  readonly largest: number;
  /** What `relative` may be; 0 for energies. */
  readonly tolerance: number;
}

/** What a full scan found. Numbers that are not finite are left out of ranges. */
export interface Survey {
  readonly points: number;
  readonly bytes: number;
  readonly bandRanges: readonly BandRange[];
  readonly lowestEv: number;
  readonly highestEv: number;
  readonly arrays: readonly ArraySurvey[];
  readonly slowArrays: readonly string[];
  /** The first hard faults in reading order, at most `cap`. */
  readonly findings: readonly Finding[];
  /** All hard faults, also those beyond the cap. */
  readonly findingsTotal: number;
  /** A Fault that ended the scan early (a file that cannot be read); undefined where all points were scanned. */
  readonly stopped: string | undefined;
}

/** Tells how many of the k points have been scanned. */
export type Progress = (done: number, total: number) => void;

interface Worst {
  deviation: number;
  relative: number;
  point: number;
  component: string;
  largest: number;
}

/**
 * Scans all numbers of a grid in blocks of about 32 MB. Collects hard faults (not finite, not ascending, not Hermitian)
 * instead of throwing on the first; keeps at most `cap` of them and counts the rest.
 */
export function surveyGrid(given: Grid, onProgress?: Progress, cap = 20): Survey {
  const grid = storedPart(given);
  const { facts } = grid;
  const want = wantAll(grid);
  const step = pointsPerBlock(grid, want);
  const reader = openUncheckedReader(grid, want);
  const findings: Finding[] = [];
  const count = { findings: 0 };
  const report = (finding: Finding): void => {
    if (count.findings++ < cap) findings.push(finding);
  };
  const ranges = Array.from({ length: facts.bands }, () => ({ lowestEv: Infinity, highestEv: -Infinity }));
  const worst = new Map(grid.arrays.map((plan) => [plan.name, newWorst()]));
  let stopped: string | undefined;
  try {
    for (let first = 0; first < facts.points; first += step) {
      const block = reader.read(first, Math.min(step, facts.points - first));
      widen(ranges, block);
      verifyEnergies(facts, grid.arrays[0], block, report);
      measure(grid, block, worst, report);
      onProgress?.(first + block.count, facts.points);
    }
  } catch (error) {
    if (!isFault(error)) throw error;
    stopped = error.message;
  } finally {
    reader.close();
  }
  return {
    points: facts.points,
    bytes: facts.bytes,
    bandRanges: ranges,
    lowestEv: ranges.reduce((lowest, range) => Math.min(lowest, range.lowestEv), Infinity),
    highestEv: ranges.reduce((highest, range) => Math.max(highest, range.highestEv), -Infinity),
    arrays: grid.arrays.map((plan) => arraySurvey(plan, worst.get(plan.name) ?? newWorst())),
    slowArrays: grid.slowArrays,
    findings,
    findingsTotal: count.findings,
    stopped,
  };
}

function newWorst(): Worst {
  return { deviation: 0, relative: 0, point: 0, component: "", largest: 0 };
}

/** Checks the matrices of a block and keeps the worst asymmetry of each array. */
function measure(grid: Grid, block: Block, worst: ReadonlyMap<string, Worst>, report: Report): void {
  forEachMatrix(grid, block, (plan, component, matrices) => {
    const entry = worst.get(plan.name) ?? newWorst();
    verifyMatrices(grid.facts, plan, block, matrices, component, report, (point, { deviation, largest }) => {
      entry.largest = Math.max(entry.largest, largest);
      if (deviation <= entry.deviation) return;
      const relative = deviation / Math.max(largest, smallestScale);
      Object.assign(entry, { deviation, relative, point, component: componentName(plan, component) });
    });
  });
}

function arraySurvey(plan: ArrayPlan, { largest, ...asymmetry }: Worst): ArraySurvey {
  return {
    name: plan.name,
    bytes: plan.files.reduce((sum, file) => sum + file.bytes, 0),
    files: plan.files.length,
    type: plan.type,
    axes: plan.axes,
    asymmetry,
    largest,
    tolerance: plan.role === "energy" ? 0 : hermitianTolerance[storedBits(plan)],
  };
}

function widen(ranges: { lowestEv: number; highestEv: number }[], block: Block): void {
  const { bands, count, energyEv } = block;
  for (let band = 0; band < bands; band++) {
    const range = ranges[band];
    for (let place = band; place < count * bands; place += bands) {
      const value = energyEv[place];
      if (!Number.isFinite(value)) continue;
      if (value < range.lowestEv) range.lowestEv = value;
      if (value > range.highestEv) range.highestEv = value;
    }
  }
}
