// peaks.ts: where is the magnitude of a response largest, how high and wide is each peak, and is it real? No k points.
import { boltzmannEvPerK } from "../base/constants.js";

/** One curve at one temperature; `levelsEv` ascend. */
export interface PeakCurve {
  readonly levelsEv: readonly number[];
  readonly value: readonly number[];
  /** One standard bar each; NaN where unknown. */
  readonly error: readonly number[];
}

/** A maximum of |value| inside the window. */
export interface Peak {
  /** Of the parabola through the highest sample and its neighbours; the middle of a plateau. */
  readonly levelEv: number;
  /** With its sign. */
  readonly value: number;
  readonly error: number;
  /** Height above the higher of the two lowest points that part it from higher ground or the window's ends; of |value|. */
  readonly prominence: number;
  /** Full width where |value| has lost half the prominence. */
  readonly widthEv: number;
  /** Levels between which |value| stays above 90% of the peak; `open` where the window ends first. */
  readonly keeps: {
    readonly fromEv: number;
    readonly toEv: number;
    readonly openBelow: boolean;
    readonly openAbove: boolean;
  };
  readonly resolved: boolean;
  /** Why it is not resolved, in words; "" when it is. */
  readonly why: string;
}

/** What a curve cannot show: peaks narrower than the level step, the thermal width or the mesh allow. */
export interface Resolution {
  readonly temperatureK: number;
  /** Energy that one mesh step resolves, eV; 0 where the method looks inside the cells. */
  readonly meshEv: number;
  /** By how much the bars may be too narrow: 1 where they are calibrated. */
  readonly barFactor: number;
  /** Peaks with less than this part of the largest |value| as prominence are left out. */
  readonly leastProminence: number;
}

/** Full width at half maximum of -df/dE in units of k_B T: 2 arccosh(sqrt 2) twice over. */
const thermalWidth = 4 * Math.acosh(Math.SQRT2);
/** A line keeps the thermal width; what is hardly wider cannot be told from one. */
const thermalMargin = 1.05;
/** Level steps, and mesh steps, that a width must span to be real. */
const leastSteps = 2;
/** Bars by which a peak must stand out. */
const leastBars = 2;
/** Part of the peak that a tolerance keeps. */
export const keptPart = 0.9;

/** Width in eV below which a peak is not resolved, and by what. */
export function resolvedWidth(stepEv: number, { temperatureK, meshEv }: Resolution): { widthEv: number; by: string } {
  const limits = [
    { widthEv: leastSteps * stepEv, by: "the step between levels" },
    { widthEv: thermalMargin * thermalWidth * boltzmannEvPerK * temperatureK, by: `${temperatureK} K` },
    { widthEv: leastSteps * meshEv, by: "the mesh" },
  ];
  return limits.reduce((most, limit) => (limit.widthEv > most.widthEv ? limit : most));
}

/** The last sample, going from `start`, before |value| falls below `floor`; and the place between it and the next where it does. */
function fallsBelow(size: readonly number[], levelsEv: readonly number[], start: number, step: 1 | -1, floor: number) {
  for (let i = start; i + step >= 0 && i + step < size.length; i += step) {
    const next = size[i + step];
    if (next >= floor) continue;
    const part = Number.isFinite(next) && size[i] > floor ? (size[i] - floor) / (size[i] - next) : 0;
    return { levelEv: levelsEv[i] + part * (levelsEv[i + step] - levelsEv[i]), open: false };
  }
  return { levelEv: levelsEv[step > 0 ? size.length - 1 : 0], open: true };
}

/** The lowest |value| on the way from a peak to higher ground or to the window's end. */
function lowestOnTheWay(size: readonly number[], start: number, step: 1 | -1): number {
  let lowest = size[start];
  for (let i = start + step; i >= 0 && i < size.length && !(size[i] > size[start]); i += step)
    if (size[i] < lowest) lowest = size[i];
  return lowest;
}

/** Magnitudes that differ by less than this part of the largest are one: a plateau, up to round-off. */
const plateau = 1e-9;

/** First and last sample of every stretch that both neighbours lie below; stretches at the ends of the window are none. */
function summits(size: readonly number[]): [first: number, last: number][] {
  const same = plateau * size.reduce((most, value) => (value > most ? value : most), 0);
  const found: [number, number][] = [];
  let first = 0;
  for (let i = 1; i < size.length; i++) {
    if (Math.abs(size[i] - size[i - 1]) <= same) continue;
    const falls = size[i] < size[i - 1];
    if (falls && first > 0) found.push([first, i - 1]);
    first = falls ? 0 : i;
  }
  return found;
}

/** Vertex of the parabola through three samples; the middle one where it is no summit. */
function vertex(x: readonly number[], y: readonly number[], i: number): { at: number; value: number } {
  const [before, after] = [x[i] - x[i - 1], x[i + 1] - x[i]];
  const [rise, fall] = [(y[i] - y[i - 1]) / before, (y[i + 1] - y[i]) / after];
  const bend = (fall - rise) / (before + after);
  const slope = (rise * after + fall * before) / (before + after);
  const shift = bend === 0 ? 0 : -slope / (2 * bend);
  if (!(Math.abs(shift) <= Math.max(before, after))) return { at: x[i], value: y[i] };
  return { at: x[i] + shift, value: y[i] + slope * shift + bend * shift * shift };
}

/**
 * Every maximum of |value| inside the window, in the order of the levels. A response that is largest at an end of the window has
 * no peak there; see `growsBeyond`.
 */
export function findPeaks(curve: PeakCurve, resolution: Resolution): Peak[] {
  const { levelsEv, value } = curve;
  const size = value.map((entry) => (Number.isFinite(entry) ? Math.abs(entry) : Number.NaN));
  const largest = size.reduce((most, entry) => (entry > most ? entry : most), 0);
  if (levelsEv.length < 3 || largest === 0) return [];
  return summits(size)
    .map(([first, last]) => peakAt(curve, size, first, last, resolution))
    .filter(({ prominence }) => prominence >= resolution.leastProminence * largest);
}

function peakAt(
  { levelsEv, value, error }: PeakCurve,
  size: readonly number[],
  first: number,
  last: number,
  resolution: Resolution,
): Peak {
  const middle = (first + last) >> 1;
  const top =
    first === last
      ? vertex(levelsEv, value, first)
      : { at: (levelsEv[first] + levelsEv[last]) / 2, value: value[middle] };
  const height = Math.abs(top.value);
  const prominence = height - Math.max(lowestOnTheWay(size, first, -1), lowestOnTheWay(size, last, 1));
  const edge = (floor: number) => [
    fallsBelow(size, levelsEv, first, -1, floor),
    fallsBelow(size, levelsEv, last, 1, floor),
  ];
  const [left, right] = edge(height - prominence / 2);
  const [low, high] = edge(keptPart * height);
  const peak = {
    levelEv: top.at,
    value: top.value,
    error: error[middle],
    prominence,
    widthEv: right.levelEv - left.levelEv,
  };
  const why = unresolvedWhy(peak, levelsEv[middle + 1] - levelsEv[middle], resolution);
  const keeps = { fromEv: low.levelEv, toEv: high.levelEv, openBelow: low.open, openAbove: high.open };
  return { ...peak, keeps, resolved: why === "", why };
}

function unresolvedWhy(
  { prominence, error, widthEv }: Pick<Peak, "prominence" | "error" | "widthEv">,
  stepEv: number,
  resolution: Resolution,
): string {
  const limit = resolvedWidth(stepEv, resolution);
  if (widthEv < limit.widthEv) return `narrower than ${limit.by} resolves`;
  if (!Number.isFinite(error)) return "no error bar is known here";
  return prominence < leastBars * resolution.barFactor * error ? "does not stand out by two error bars" : "";
}

/** The ends of the window at which |value| is larger than at every inner peak and still grows outward. */
export function growsBeyond({ levelsEv, value }: PeakCurve): ("low" | "high")[] {
  const size = value.map(Math.abs);
  const last = levelsEv.length - 1;
  if (last < 2) return [];
  const largest = size.reduce((most, entry) => (entry > most ? entry : most), 0);
  const ends: ("low" | "high")[] = [];
  if (largest > 0 && size[0] >= largest && size[0] > size[1]) ends.push("low");
  if (largest > 0 && size[last] >= largest && size[last] > size[last - 1]) ends.push("high");
  return ends;
}
