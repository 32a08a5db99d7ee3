// hamiltonian.ts: what is the Hamiltonian a small step q away from a stored k point, in the stored bands?

import type { HessianKind } from "../grid/grid.js";
import type { MatrixRef, PointRef } from "./kernel.js";

/** Place of d^2H/dk_a dk_b among xx, yy, zz, yz, zx, xy. */
export const hessianIndex = (a: number, b: number): number => (a === b ? a : 6 - a - b);

/** out[at + i] += factor * from[offset + i], `length` numbers. */
export function addMultiple(
  length: number,
  factor: number,
  from: Float64Array,
  offset: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = 0; i < length; i++) out[at + i] += factor * from[offset + i];
}

/** H(q) of the point loaded last. */
export interface LocalHamiltonian {
  /** Takes energies, velocities along the directions and, for "array", second derivatives among them; copies all. */
  load(point: PointRef): void;
  /**
   * diag(E) + q_a v_a + (1/2) q_a q_b W_ab, eV, row-major interleaved, without the shift of a free-electron second
   * derivative. The caller may destroy what it gets: it is written anew each time.
   */
  at(q: Float64Array): Float64Array;
}

/** H(q) for points of `bands` bands, q along `directions`. Nothing is allocated per point or step. */
export function createHamiltonian(
  bands: number,
  hessian: HessianKind,
  directions: readonly number[],
): LocalHamiltonian {
  const length = 2 * bands * bands;
  const seconds: [number, number][] = [];
  if (hessian === "array") for (const a of directions) for (const b of directions) if (a <= b) seconds.push([a, b]);
  const energyEv = new Float64Array(bands);
  const first = new Float64Array(directions.length * length);
  const second = new Float64Array(seconds.length * length);
  const matrix = new Float64Array(length);

  const copy = (from: MatrixRef, out: Float64Array, at: number) => {
    for (let i = 0; i < length; i++) out[at + i] = from.data[from.offset + i];
  };
  const load = (point: PointRef) => {
    for (let n = 0; n < bands; n++) energyEv[n] = point.energyEv[point.energyOffset + n];
    for (const [i, direction] of directions.entries()) copy(point.velocity[direction] as MatrixRef, first, i * length);
    for (const [i, [a, b]] of seconds.entries()) {
      copy((point.hessian as readonly MatrixRef[])[hessianIndex(a, b)], second, i * length);
    }
  };
  const at = (q: Float64Array): Float64Array => {
    matrix.fill(0);
    for (let i = 0; i < directions.length; i++) addMultiple(length, q[directions[i]], first, i * length, matrix, 0);
    for (let i = 0; i < seconds.length; i++) {
      const [a, b] = seconds[i];
      addMultiple(length, (a === b ? 0.5 : 1) * q[a] * q[b], second, i * length, matrix, 0);
    }
    for (let n = 0; n < bands; n++) matrix[2 * (n * bands + n)] += energyEv[n];
    return matrix;
  };
  return { load, at };
}
