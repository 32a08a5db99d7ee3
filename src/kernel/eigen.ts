// eigen.ts: what are the eigenvalues and eigenvectors of a complex Hermitian matrix?

import { dataFault } from "../base/errors.js";
import { createReduction, type Reduction, tridiagonalise } from "./householder.js";
import { transformBack } from "./reflect.js";
import { createQlStorage, type QlStorage, solveTridiagonal } from "./tridiagonal.js";

/**
 * Solves one matrix. `matrix`: 2 n^2, row-major (bra first), complex interleaved; only its lower triangle is read, and
 * it is destroyed. `values`: n, ascending. `vectors`: 2 n^2, row i the normalised eigenvector of values[i], component j at
 * vectors[2 (i n + j)], interleaved; its overall phase is arbitrary. Throws a Fault where an entry is not finite.
 */
export type Eigensolver = (matrix: Float64Array, values: Float64Array, vectors: Float64Array) => void;

/** Entries beyond these bounds are scaled by a power of two first, so that squares neither overflow nor vanish. */
const largestUnscaled = 2 ** 100;
const smallestUnscaled = 2 ** -100;

/** Largest absolute real or imaginary part in the lower triangle; NaN where an entry is not finite. */
function largestEntry(n: number, matrix: Float64Array): number {
  let largest = 0;
  // A product with zero is zero for every finite number and NaN for all others.
  let poison = 0;
  for (let i = 0; i < n; i++) {
    for (let j = 2 * i * n; j <= 2 * (i * n + i); j++) {
      const size = Math.abs(matrix[j]);
      poison += size * 0;
      if (size > largest) largest = size;
    }
  }
  return largest + poison;
}

/** Order of the values, ascending: insertion sort of indices, stable. */
function sortIndices(n: number, values: Float64Array, order: Int32Array): void {
  for (let i = 0; i < n; i++) {
    const value = values[i];
    let at = i;
    while (at > 0 && values[order[at - 1]] > value) {
      order[at] = order[at - 1];
      at--;
    }
    order[at] = i;
  }
}

/** Writes values in ascending order and the tridiagonal eigenvectors, times their phases, in the same order. */
function writeSorted(
  reduction: Reduction,
  ql: QlStorage,
  order: Int32Array,
  values: Float64Array,
  out: Float64Array,
): void {
  const { n, diagonal, phase } = reduction;
  const { rows, stride } = ql;
  sortIndices(n, diagonal, order);
  for (let i = 0; i < n; i++) {
    const from = order[i] * stride;
    const to = 2 * i * n;
    values[i] = diagonal[order[i]];
    for (let j = 0; j < n; j++) {
      const x = rows[from + j];
      out[to + 2 * j] = x * phase[2 * j];
      out[to + 2 * j + 1] = x * phase[2 * j + 1];
    }
  }
}

/** Multiplies by 2^exponent, in two steps: the whole factor may be beyond the range of doubles. */
function scale(array: Float64Array, exponent: number): void {
  const half = Math.trunc(exponent / 2);
  for (let i = 0; i < array.length; i++) array[i] = array[i] * 2 ** half * 2 ** (exponent - half);
}

/** A solver for matrices of order n with storage of its own; it allocates nothing while solving. See Eigensolver. */
export function createEigensolver(n: number): Eigensolver {
  const reduction = createReduction(n);
  const ql = createQlStorage(n);
  const order = new Int32Array(n);
  return (matrix, values, vectors) => {
    let largest = largestEntry(n, matrix);
    if (Number.isNaN(largest)) {
      throw dataFault(
        `A ${n} x ${n} Hermitian matrix to be diagonalised holds an entry that is not a finite number.`,
        "Look in the stored energies and matrices for NaN or infinite numbers (inspect names the k point) and write them again.",
      );
    }
    const scaled = largest > 0 && (largest > largestUnscaled || largest < smallestUnscaled);
    const exponent = scaled ? Math.floor(Math.log2(largest)) : 0;
    if (scaled) {
      scale(matrix, -exponent);
      largest = largestEntry(n, matrix);
    }
    tridiagonalise(reduction, matrix, largest);
    if (!solveTridiagonal(ql, reduction.diagonal, reduction.subdiagonal, largest)) {
      throw dataFault(
        `The eigenvalues of a ${n} x ${n} Hermitian matrix did not converge.`,
        "Please report this with the matrix: finite Hermitian matrices are expected to converge always.",
      );
    }
    writeSorted(reduction, ql, order, values, vectors);
    transformBack(reduction, matrix, vectors);
    if (scaled) scale(values, exponent);
  };
}
