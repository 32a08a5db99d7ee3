// sets.ts: which bands coincide, and what is the square of a velocity in a set of them, whatever basis the set comes in?
//
// v_a v_a of a set of bands is the trace of its block, sum over n, m of the set of |<n|v_a|m>|^2; each band of the set gets an equal part.

import type { MatrixRef, PointRef } from "./kernel.js";

/** End (exclusive) of the set that begins with band `first`: each band closer to the one before it than `togetherEv`. */
export function setEnd(
  energyEv: Float64Array,
  offset: number,
  bands: number,
  first: number,
  togetherEv: number,
): number {
  let end = first + 1;
  while (end < bands && energyEv[offset + end] - energyEv[offset + end - 1] < togetherEv) end++;
  return end;
}

/** Gives the bands of every set the mean of their values, values[band * 3 + direction], in place. */
export function averageOverSets(energyEv: Float64Array, values: Float64Array, togetherEv: number): void {
  const bands = energyEv.length;
  for (let first = 0, end = 0; first < bands; first = end) {
    end = setEnd(energyEv, 0, bands, first, togetherEv);
    if (end - first === 1) continue;
    for (let a = 0; a < 3; a++) {
      let sum = 0;
      for (let n = first; n < end; n++) sum += values[3 * n + a];
      for (let n = first; n < end; n++) values[3 * n + a] = sum / (end - first);
    }
  }
}

/** Squares of the velocities of a stored point, out[band * 3 + direction], (eV angstrom)^2; zero for one that was not read. */
export function storedSquares(point: PointRef, togetherEv: number, out: Float64Array): void {
  const { bands, energyEv, energyOffset } = point;
  for (let first = 0, end = 0; first < bands; first = end) {
    end = setEnd(energyEv, energyOffset, bands, first, togetherEv);
    for (let a = 0; a < 3; a++) {
      const matrix = point.velocity[a];
      const mean = matrix === undefined ? 0 : blockSquare(matrix, bands, first, end) / (end - first);
      for (let n = first; n < end; n++) out[3 * n + a] = mean;
    }
  }
}

function blockSquare({ data, offset }: MatrixRef, bands: number, first: number, end: number): number {
  let sum = 0;
  for (let n = first; n < end; n++)
    for (let m = first; m < end; m++) {
      const at = offset + 2 * (n * bands + m);
      sum += data[at] * data[at] + data[at + 1] * data[at + 1];
    }
  return sum;
}

/** squares[3 band + direction] of the Hermitian part of `rotated` (`second`: of -i times its anti-Hermitian part). `ends` as of `fillEnds`. */
export function rotatedSquares(
  size: number,
  rotated: Float64Array,
  second: boolean,
  ends: Int32Array,
  direction: number,
  squares: Float64Array,
): void {
  for (let first = 0; first < ends.length; first = ends[first]) {
    const end = ends[first];
    let sum = 0;
    for (let n = first; n < end; n++)
      for (let m = first; m < end; m++) {
        const x = 2 * (n * size + m);
        const y = 2 * (m * size + n);
        const even = second ? rotated[x + 1] + rotated[y + 1] : rotated[x] + rotated[y];
        const odd = second ? rotated[y] - rotated[x] : rotated[x + 1] - rotated[y + 1];
        sum += 0.25 * (even * even + odd * odd);
      }
    for (let n = first; n < end; n++) squares[3 * n + direction] = sum / (end - first);
  }
}

/**
 * squares[3 band + direction] of a velocity that came as its lower triangle L with half the diagonal: <n|v|m> = <n|L|m> + conj <m|L|n>;
 * `moved` is L times the states, `columns` the states.
 */
export function lowerSquares(
  size: number,
  columns: Float64Array,
  moved: Float64Array,
  ends: Int32Array,
  direction: number,
  squares: Float64Array,
): void {
  for (let first = 0; first < ends.length; first = ends[first]) {
    const end = ends[first];
    let sum = 0;
    for (let n = first; n < end; n++)
      for (let m = first; m < end; m++) {
        let re = 0;
        let im = 0;
        for (let j = 0; j < ends.length; j++) {
          const x = 2 * (j * size + n);
          const y = 2 * (j * size + m);
          re +=
            columns[x] * moved[y] +
            columns[x + 1] * moved[y + 1] +
            columns[y] * moved[x] +
            columns[y + 1] * moved[x + 1];
          im +=
            columns[x] * moved[y + 1] -
            columns[x + 1] * moved[y] -
            columns[y] * moved[x + 1] +
            columns[y + 1] * moved[x];
        }
        sum += re * re + im * im;
      }
    for (let n = first; n < end; n++) squares[3 * n + direction] = sum / (end - first);
  }
}

/** ends[first] of every set. */
export function fillEnds(energyEv: Float64Array, togetherEv: number, ends: Int32Array): void {
  for (let first = 0; first < ends.length; first = ends[first])
    ends[first] = setEnd(energyEv, 0, ends.length, first, togetherEv);
}
