// range.ts: from where to where does the vertical axis of a panel go, and which power of ten stands beside it?

/** One line of a panel, all arrays along the level axis. `error` and `points` may be absent. */
export interface Trace {
  colour: string;
  value: readonly number[];
  error?: readonly number[];
  points?: readonly number[];
}

const finite = (values: readonly number[]): number[] => values.filter(Number.isFinite);
const least = (values: readonly number[]): number => values.reduce((a, b) => Math.min(a, b), Number.POSITIVE_INFINITY);
const most = (values: readonly number[]): number => values.reduce((a, b) => Math.max(a, b), Number.NEGATIVE_INFINITY);

/**
 * The vertical range: all values and zero; bars and plain sums may widen it by at most a third of that on each side (a plain sum
 * can be wrong by orders of magnitude, and must not flatten what the picture is about). Undefined when there is no number.
 */
export function verticalRange(traces: readonly Trace[]): [number, number] | undefined {
  const values = traces.flatMap(({ value }) => finite(value));
  if (values.length === 0) return undefined;
  const beside = traces.flatMap(({ value, error, points }) => [
    ...finite(value.map((middle, e) => middle - (error?.[e] ?? 0))),
    ...finite(value.map((middle, e) => middle + (error?.[e] ?? 0))),
    ...finite(points ?? []),
  ]);
  const [low, high] = [Math.min(0, least(values)), Math.max(0, most(values))];
  const room = high > low ? (high - low) / 3 : 1;
  const bottom = Math.max(Math.min(low, least(beside)), low - room);
  const top = Math.min(Math.max(high, most(beside)), high + room);
  if (!(top > bottom)) return [-1, 1];
  const margin = 0.05 * (top - bottom);
  return [bottom - (bottom < 0 ? margin : 0), top + (top > 0 ? margin : 0)];
}

/** Power of ten taken out of the tick labels so that they stay short: 0 within 1e-2 to 1e5. */
export function tickPower([bottom, top]: readonly [number, number]): number {
  const size = Math.max(Math.abs(bottom), Math.abs(top));
  const exponent = Math.floor(Math.log10(size));
  return exponent >= -2 && exponent < 5 ? 0 : exponent;
}
