// two-centre-orthogonal.ts: H~ = S^(-1/2) H S^(-1/2) with exact first and second derivatives, real symmetric 9 x 9.
import { hessianPairs } from "../grid/grid.js";
import { orders } from "./two-centre-bloch.js";
import { diagonaliseReal9 } from "./two-centre-jacobi.js";

const n = 9;
const size = 81;

/** Scratch of one orthogonaliser; matrices row major 9 x 9, in the eigenbasis of S unless said otherwise. */
interface Workspace {
  /** Rows: eigenvectors of S; and the transpose. */
  readonly vectors: Float64Array;
  readonly back: Float64Array;
  /** x_i, the root of the i-th eigenvalue of S; and 1 / x_i. */
  readonly root: Float64Array;
  readonly inverse: Float64Array;
  /** H and S by order (two-centre-bloch.ts). */
  readonly h: Float64Array;
  readonly s: Float64Array;
  /** Divided differences of s^(-1/2): first[i][j], second[i][j][l]. */
  readonly first: Float64Array;
  readonly second: Float64Array;
  /** dA_a and dA_a H, a = x, y, z. */
  readonly da: Float64Array;
  readonly daH: Float64Array;
  readonly d2a: Float64Array;
  readonly sum: Float64Array;
  readonly scratch: Float64Array;
}

/**
 * Returns a function (h, s, count) -> smallest eigenvalue of S, which replaces the first `count` orders (1, 4 or 10; layout of
 * two-centre-bloch.ts) of H by those of H~. Where the returned number is not positive, h is left as it was.
 *
 * In the eigenbasis of S, with x_i the root of its eigenvalue: (dA)_ij = (dS)_ij f_ij and
 * (d2A)_ij = (d2S)_ij f_ij + sum_l [(dS_a)_il (dS_b)_lj + (dS_b)_il (dS_a)_lj] f_ilj for A = S^(-1/2) (Daleckii and Krein). The divided
 * differences of s^(-1/2) are written without any difference, so that equal eigenvalues need no care:
 * f_ij = -1 / (x_i x_j (x_i + x_j)), f_ijl = (x_i + x_j + x_l) / (x_i x_j x_l (x_i + x_j) (x_j + x_l) (x_l + x_i)).
 */
export function createOrthogonaliser(): (h: Float64Array, s: Float64Array, count: number) => number {
  const matrix = (count = 1): Float64Array => new Float64Array(count * size);
  const w: Workspace = {
    vectors: matrix(),
    back: matrix(),
    root: new Float64Array(n),
    inverse: new Float64Array(n),
    h: matrix(orders),
    s: matrix(orders),
    first: matrix(),
    second: matrix(n),
    da: matrix(3),
    daH: matrix(3),
    d2a: matrix(),
    sum: matrix(),
    scratch: matrix(),
  };
  return (h, s, count) => {
    const smallest = diagonalise(w, s);
    if (!(smallest > 0)) return smallest;
    conjugate(w.vectors, w.back, h, w.h, w.scratch, count);
    conjugate(w.vectors, w.back, s, w.s, w.scratch, count);
    dividedDifferences(w, count > 4);
    w.sum.fill(0);
    assemble(w, 0, undefined, h);
    for (let axis = 0; axis < 3 && count > 1; axis++) firstOrder(w, axis, h);
    for (let pair = 0; pair < 6 && count > 4; pair++) secondOrder(w, pair, h);
    conjugate(w.back, w.vectors, h, h, w.scratch, count);
    return smallest;
  };
}

/** Fills vectors, back, root and inverse from S; returns its smallest eigenvalue (NaN where S is not finite). */
function diagonalise(w: Workspace, s: Float64Array): number {
  const diagonal = w.scratch;
  diagonal.set(s.subarray(0, size));
  if (!diagonaliseReal9(diagonal, w.vectors)) return Number.NaN;
  let smallest = Number.POSITIVE_INFINITY;
  for (let i = 0; i < n; i++) {
    smallest = Math.min(smallest, diagonal[(n + 1) * i]);
    w.root[i] = Math.sqrt(diagonal[(n + 1) * i]);
    w.inverse[i] = 1 / w.root[i];
    for (let j = 0; j < n; j++) w.back[n * j + i] = w.vectors[n * i + j];
  }
  return smallest;
}

function dividedDifferences({ root, inverse, first, second }: Workspace, withSecond: boolean): void {
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      const outer = (inverse[i] * inverse[j]) / (root[i] + root[j]);
      first[n * i + j] = -outer;
      for (let l = 0; l < n && withSecond; l++)
        second[n * (n * i + j) + l] =
          (outer * inverse[l] * (root[i] + root[j] + root[l])) / ((root[i] + root[l]) * (root[l] + root[j]));
    }
}

/** dA_a, dA_a H and d_a H~ = dA H A + (dA H A)^T + A (dH) A. */
function firstOrder(w: Workspace, axis: number, out: Float64Array): void {
  const at = axis * size;
  for (let e = 0; e < size; e++) w.da[at + e] = w.s[size + at + e] * w.first[e];
  multiply(w.da, at, w.h, 0, w.daH, at);
  for (let e = 0; e < size; e++) w.sum[e] = w.daH[at + e];
  assemble(w, 1 + axis, undefined, out);
}

/** d_ab H~ = X A + (X A)^T + Y + Y^T + A (d2H) A with X = d2A H + dA_a dH_b + dA_b dH_a and Y = dA_a H dA_b. */
function secondOrder(w: Workspace, pair: number, out: Float64Array): void {
  const [a, b] = hessianPairs[pair];
  fillSecondDerivativeOfRoot(w, pair);
  multiply(w.d2a, 0, w.h, 0, w.sum, 0);
  multiply(w.da, a * size, w.h, (1 + b) * size, w.scratch, 0);
  for (let e = 0; e < size; e++) w.sum[e] += w.scratch[e];
  multiply(w.da, b * size, w.h, (1 + a) * size, w.scratch, 0);
  for (let e = 0; e < size; e++) w.sum[e] += w.scratch[e];
  multiply(w.daH, a * size, w.da, b * size, w.scratch, 0);
  assemble(w, 4 + pair, w.scratch, out);
}

function fillSecondDerivativeOfRoot({ s, first, second, d2a }: Workspace, pair: number): void {
  const [a, b] = hessianPairs[pair];
  const sa = (1 + a) * size;
  const sb = (1 + b) * size;
  for (let i = 0; i < n; i++)
    for (let j = i; j < n; j++) {
      let value = s[(4 + pair) * size + n * i + j] * first[n * i + j];
      // dS is symmetric: row j is read in place of column j.
      for (let l = 0; l < n; l++)
        value +=
          (s[sa + n * i + l] * s[sb + n * j + l] + s[sb + n * i + l] * s[sa + n * j + l]) * second[n * (n * i + j) + l];
      d2a[n * i + j] = value;
      d2a[n * j + i] = value;
    }
}

/** out[order] = X A + (X A)^T + Y + Y^T + A h[order] A, X in `sum`, A the diagonal `inverse`. */
function assemble(w: Workspace, order: number, y: Float64Array | undefined, out: Float64Array): void {
  const { inverse, sum, h } = w;
  const at = order * size;
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++) {
      let value = sum[n * i + j] * inverse[j] + sum[n * j + i] * inverse[i];
      if (y) value += y[n * i + j] + y[n * j + i];
      out[at + n * i + j] = value + inverse[i] * h[at + n * i + j] * inverse[j];
    }
}

/** to = left m right for the first `count` orders; `to` may be `from`. */
function conjugate(
  left: Float64Array,
  right: Float64Array,
  from: Float64Array,
  to: Float64Array,
  scratch: Float64Array,
  count: number,
): void {
  for (let order = 0; order < count; order++) {
    multiply(left, 0, from, order * size, scratch, 0);
    multiply(scratch, 0, right, 0, to, order * size);
  }
}

/** out = a b, 9 x 9 at the given offsets; the sum over the inner index is written out, which is what makes it fast. */
function multiply(a: Float64Array, aAt: number, b: Float64Array, bAt: number, out: Float64Array, outAt: number): void {
  for (let i = 0; i < n; i++) {
    const row = aAt + n * i;
    const a0 = a[row];
    const a1 = a[row + 1];
    const a2 = a[row + 2];
    const a3 = a[row + 3];
    const a4 = a[row + 4];
    const a5 = a[row + 5];
    const a6 = a[row + 6];
    const a7 = a[row + 7];
    const a8 = a[row + 8];
    for (let j = 0; j < n; j++) {
      const at = bAt + j;
      const low = a0 * b[at] + a1 * b[at + 9] + a2 * b[at + 18] + a3 * b[at + 27] + a4 * b[at + 36];
      out[outAt + n * i + j] = low + a5 * b[at + 45] + a6 * b[at + 54] + a7 * b[at + 63] + a8 * b[at + 72];
    }
  }
}
