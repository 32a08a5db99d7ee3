// range.ts: are these k points that a grid holds?
import { usageFault } from "../base/errors.js";

/** Throws a usage Fault where the k points first ... first + count - 1 are not among `points`, or not one at least. */
export function checkRange(first: number, count: number, points: number): void {
  const whole = Number.isInteger(first) && Number.isInteger(count);
  if (whole && first >= 0 && count >= 1 && first + count <= points) return;
  throw usageFault(
    `k points ${first} to ${first + count - 1} were asked for; the grid holds 0 to ${points - 1}`,
    "Ask for points that are stored.",
  );
}
