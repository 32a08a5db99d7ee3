// stencil.ts: does a quantity change along a line of the mesh as a stated derivative says? Compact differences of high order.
//
// S. K. Lele, J. Comput. Phys. 103, 16 (1992): P(-1) + 3 P(0) + P(1) = (14/3) (O(1) - O(-1)) / 2 + (1/3) (O(2) - O(-2)) / 4, sixth order in the
// step; (P(-1) + 4 P(0) + P(1)) / 6 = (O(1) - O(-1)) / 2, fourth. Derivatives are per step of the mesh.

/** Weighted derivative that the differences give, and how far it may be off. */
export interface Difference {
  readonly value: number;
  /** Infinite where the values jump: at the end of a continuum cut to a box, or on a mesh far too coarse. */
  readonly error: number;
}

/** A fourth difference above this part of the range of five values is a jump or unresolved: a sine of 1.2 radian per step reaches it. */
const roughest = 0.9;

/** Points on each side that the widest stencil takes from a line of `count` points: 2 or 1. */
export const reachOf = (count: number): 1 | 2 => (count >= 5 ? 2 : 1);

/** Mean of the stated derivatives around place `at` of a line, as the stencil of `reach` wants it. */
export function meanDerivative(stated: readonly number[], at: number, reach: 1 | 2): number {
  const [before, here, after] = [stated[at - 1], stated[at], stated[at + 1]];
  return reach === 2 ? (before + 3 * here + after) / 5 : (before + 4 * here + after) / 6;
}

/**
 * What `meanDerivative` must be, from the values themselves. The error is a part of what the order of the difference changes: of the fourth
 * against the second, and of the second itself where a line is short.
 */
export function differenceOf(values: readonly number[], at: number, reach: 1 | 2): Difference {
  const second = (values[at + 1] - values[at - 1]) / 2;
  if (reach === 1) {
    const curvature = values[at + 1] - 2 * values[at] + values[at - 1];
    return { value: second, error: 0.1 * (Math.abs(second) + Math.abs(curvature)) };
  }
  const five = values.slice(at - 2, at + 3);
  const range = Math.max(...five) - Math.min(...five);
  const rough = five[0] - 4 * five[1] + 6 * five[2] - 4 * five[3] + five[4];
  const wide = (values[at + 2] - values[at - 2]) / 4;
  const fourth = (4 * second - wide) / 3;
  return {
    value: (14 * second + wide) / 15,
    error: Math.abs(rough) > roughest * range ? Infinity : 0.1 * Math.abs(fourth - second),
  };
}
