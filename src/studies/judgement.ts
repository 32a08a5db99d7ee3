// judgement.ts: can a measured value be the intrinsic one, at this level or at one nearby?
import type { MeasuredRow } from "./angle-result.js";

/** A measured value beside the intrinsic one, in one unit; `error` NaN where none was given. */
export interface Compared {
  readonly value: number;
  readonly error: number;
  readonly intrinsic: number;
  readonly intrinsicError: number;
}

/** The intrinsic curve over the level shifts that are allowed. */
export interface ShiftedCurve {
  readonly levelEv: readonly number[];
  readonly value: readonly number[];
  readonly error: readonly number[];
}

/** Two values agree within this many bars of both. */
const bars = 2;
/** Bar of a measured value that came without one, in parts of it. */
const assumedShare = 0.1;

/**
 * "agrees": within two bars. "level": some level in the window gives it within two bars; the nearest is told. "larger" and "smaller": no level in the
 * window does; `factor` is the measured value over the nearest one. "sign": the intrinsic curve has the other sign throughout.
 */
export function judged(
  { value, error, intrinsic, intrinsicError }: Compared,
  curve: ShiftedCurve,
): Pick<MeasuredRow, "verdict" | "shift_eV" | "factor"> {
  const own = Number.isNaN(error) ? assumedShare * Math.abs(value) : error;
  const reach = (other: number): number => bars * Math.hypot(own, other || 0);
  if (Math.abs(value - intrinsic) <= reach(intrinsicError)) return { verdict: "agrees", shift_eV: null, factor: null };
  const shift = nearestPlace(curve.levelEv, curve.value, value, (i) => reach(curve.error[i]));
  if (shift !== undefined) return { verdict: "level", shift_eV: shift, factor: null };
  const sign = value < 0 ? -1 : 1;
  const sizes = curve.value.map((each) => each * sign);
  const [least, most] = [Math.min(...sizes), Math.max(...sizes)];
  if (most <= 0) return { verdict: "sign", shift_eV: null, factor: null };
  const size = Math.abs(value);
  return size > most
    ? { verdict: "larger", shift_eV: null, factor: size / most }
    : { verdict: "smaller", shift_eV: null, factor: size / least };
}

/** The place nearest to zero where the straight lines through the points reach `target` to within `bar(i)`; undefined if nowhere. */
function nearestPlace(
  x: readonly number[],
  y: readonly number[],
  target: number,
  bar: (index: number) => number,
): number | undefined {
  let best: number | undefined;
  const offer = (place: number): void => {
    if (best === undefined || Math.abs(place) < Math.abs(best)) best = place;
  };
  for (let i = 0; i < x.length; i++) {
    if (Math.abs(y[i] - target) <= bar(i)) offer(x[i]);
    if (i > 0 && (y[i] - target) * (y[i - 1] - target) < 0)
      offer(x[i - 1] + ((target - y[i - 1]) / (y[i] - y[i - 1])) * (x[i] - x[i - 1]));
  }
  return best;
}
