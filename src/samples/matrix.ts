// matrix.ts: builds the small complex matrices of the sample models (interleaved, row major); no k, no physics.
import type { ComplexMatrix } from "./model.js";

/** A number, or a (real, imaginary) pair. */
export type Entry = number | readonly [number, number];

/** The zero matrix of size n x n. */
export const zeroMatrix = (n: number): ComplexMatrix => new Float64Array(2 * n * n);

/** The matrix with these rows (bra first); rows must be square. */
export function matrixOf(rows: readonly (readonly Entry[])[]): ComplexMatrix {
  const n = rows.length;
  const out = zeroMatrix(n);
  rows.forEach((row, bra) => {
    row.forEach((entry, ket) => {
      const [re, im] = typeof entry === "number" ? [entry, 0] : entry;
      out[2 * (bra * n + ket)] = re;
      out[2 * (bra * n + ket) + 1] = im;
    });
  });
  return out;
}

/** The size n of an n x n matrix. */
export const sizeOf = (m: ComplexMatrix): number => Math.round(Math.sqrt(m.length / 2));

/** The identity of size n. */
export function identity(n: number): ComplexMatrix {
  const out = zeroMatrix(n);
  for (let i = 0; i < n; i++) out[2 * (i * n + i)] = 1;
  return out;
}

/** factor * m, a new matrix; the factor may be complex. */
export function scaled(m: ComplexMatrix, factor: Entry): ComplexMatrix {
  const [re, im] = typeof factor === "number" ? [factor, 0] : factor;
  const out = new Float64Array(m.length);
  for (let i = 0; i < m.length; i += 2) {
    out[i] = re * m[i] - im * m[i + 1];
    out[i + 1] = re * m[i + 1] + im * m[i];
  }
  return out;
}

/** The sum of matrices of one size, a new matrix. */
export function sumOf(...terms: readonly ComplexMatrix[]): ComplexMatrix {
  const out = new Float64Array(terms[0].length);
  for (const term of terms) for (let i = 0; i < out.length; i++) out[i] += term[i];
  return out;
}

/** The product a b, a new matrix. */
export function productOf(a: ComplexMatrix, b: ComplexMatrix): ComplexMatrix {
  const n = sizeOf(a);
  const out = zeroMatrix(n);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const re = a[2 * (i * n + k)];
      const im = a[2 * (i * n + k) + 1];
      for (let j = 0; j < n; j++) {
        const b0 = b[2 * (k * n + j)];
        const b1 = b[2 * (k * n + j) + 1];
        out[2 * (i * n + j)] += re * b0 - im * b1;
        out[2 * (i * n + j) + 1] += re * b1 + im * b0;
      }
    }
  }
  return out;
}

/** The Hermitian adjoint, a new matrix. */
export function adjointOf(m: ComplexMatrix): ComplexMatrix {
  const n = sizeOf(m);
  const out = zeroMatrix(n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      out[2 * (i * n + j)] = m[2 * (j * n + i)];
      out[2 * (i * n + j) + 1] = -m[2 * (j * n + i) + 1];
    }
  }
  return out;
}

/** The Kronecker product: row index = row of a * size(b) + row of b. */
export function kroneckerOf(a: ComplexMatrix, b: ComplexMatrix): ComplexMatrix {
  const na = sizeOf(a);
  const nb = sizeOf(b);
  const n = na * nb;
  const out = zeroMatrix(n);
  for (let row = 0; row < n; row++) {
    for (let column = 0; column < n; column++) {
      const ia = 2 * (Math.floor(row / nb) * na + Math.floor(column / nb));
      const ib = 2 * ((row % nb) * nb + (column % nb));
      out[2 * (row * n + column)] = a[ia] * b[ib] - a[ia + 1] * b[ib + 1];
      out[2 * (row * n + column) + 1] = a[ia] * b[ib + 1] + a[ia + 1] * b[ib];
    }
  }
  return out;
}

/** The Pauli matrices sx, sy, sz. */
export const pauli: readonly [ComplexMatrix, ComplexMatrix, ComplexMatrix] = [
  matrixOf([
    [0, 1],
    [1, 0],
  ]),
  matrixOf([
    [0, [0, -1]],
    [[0, 1], 0],
  ]),
  matrixOf([
    [1, 0],
    [0, -1],
  ]),
];

/** Angular momentum matrices Jx, Jy, Jz of quantum number `j`, units of hbar, basis m = j, j - 1, ..., -j (Condon and Shortley). */
export function angularMomentum(j: number): readonly [ComplexMatrix, ComplexMatrix, ComplexMatrix] {
  const n = Math.round(2 * j + 1);
  const [x, y, z] = [zeroMatrix(n), zeroMatrix(n), zeroMatrix(n)];
  for (let i = 0; i < n; i++) z[2 * (i * n + i)] = j - i;
  for (let i = 0; i + 1 < n; i++) {
    const m = j - i - 1;
    const half = Math.sqrt(j * (j + 1) - m * (m + 1)) / 2;
    x[2 * (i * n + i + 1)] = half;
    x[2 * ((i + 1) * n + i)] = half;
    y[2 * (i * n + i + 1) + 1] = -half;
    y[2 * ((i + 1) * n + i) + 1] = half;
  }
  return [x, y, z];
}
