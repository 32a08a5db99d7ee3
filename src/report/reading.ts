// reading.ts: what can be read off one curve: its value at a level, and its largest value?

/** A point of a curve with its bar. `index` is the nearest level of the axis. */
export interface Reading {
  levelEv: number;
  value: number;
  error: number;
  index: number;
}

/**
 * The curve at `levelEv`: the stored level where there is one (to 1e-9 eV), else the straight line between its two
 * neighbours, value and bar alike. Undefined when the level lies outside the window. `levels` ascend.
 */
export function readingAt(
  levels: readonly number[],
  value: readonly number[],
  error: readonly number[],
  levelEv: number,
): Reading | undefined {
  const exact = levels.findIndex((level) => Math.abs(level - levelEv) < 1e-9);
  if (exact >= 0) return { levelEv, value: value[exact], error: error[exact], index: exact };
  const right = levels.findIndex((level) => level > levelEv);
  if (right <= 0) return undefined;
  const left = right - 1;
  const weight = (levelEv - levels[left]) / (levels[right] - levels[left]);
  const between = (row: readonly number[]): number => row[left] + weight * (row[right] - row[left]);
  return { levelEv, value: between(value), error: between(error), index: weight < 0.5 ? left : right };
}

/** Magnitudes that differ by less than this part of themselves are one: a plateau, up to round-off. */
const plateau = 1e-9;

/**
 * The level where the magnitude is largest; on a plateau the level nearest to the reference. Undefined when the curve
 * holds no number.
 */
export function largestOf(
  levels: readonly number[],
  value: readonly number[],
  error: readonly number[],
): Reading | undefined {
  const size = (at: number): number => (Number.isFinite(value[at]) ? Math.abs(value[at]) : -1);
  const largest = levels.reduce((most, _, at) => Math.max(most, size(at)), -1);
  let best = -1;
  for (let at = 0; at < levels.length && largest >= 0; at++) {
    if (size(at) < largest * (1 - plateau)) continue;
    if (best < 0 || Math.abs(levels[at]) < Math.abs(levels[best])) best = at;
  }
  return best < 0 ? undefined : { levelEv: levels[best], value: value[best], error: error[best], index: best };
}
