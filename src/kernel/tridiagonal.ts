// tridiagonal.ts: what are the eigenvalues and eigenvectors of a real symmetric tridiagonal matrix?
//
// Implicit QL with Wilkinson's shift (Dubrulle, Martin and Wilkinson, Numer. Math. 12, 377 (1968)). One sweep's
// rotations are kept and then applied together, down strips of four columns, so that each row is read and written once.

/** Sweeps allowed per eigenvalue; a handful is usual, and two on average. */
const sweepsPerValue = 60;
const epsilon = Number.EPSILON;

/** Storage of one solve, reused call after call. */
export interface QlStorage {
  readonly n: number;
  /** Row length of `rows`: n rounded up to a multiple of two. */
  readonly stride: number;
  /** Row i: eigenvector of values[i], n real components. */
  readonly rows: Float64Array;
  readonly cosine: Float64Array;
  readonly sine: Float64Array;
}

/** Storage for matrices of order n. */
export function createQlStorage(n: number): QlStorage {
  const stride = n + (n & 1);
  return { n, stride, rows: new Float64Array(n * stride), cosine: new Float64Array(n), sine: new Float64Array(n) };
}

/** First index m >= start whose coupling to m + 1 is negligible. */
function splitFrom(start: number, n: number, d: Float64Array, e: Float64Array, floor: number): number {
  let m = start;
  while (m < n - 1 && Math.abs(e[m]) > epsilon * (Math.abs(d[m]) + Math.abs(d[m + 1])) + floor) m++;
  return m;
}

/** One implicit QL sweep over the block l..m; records the rotation of rows i and i + 1 at index i. */
function sweep(l: number, m: number, d: Float64Array, e: Float64Array, cosine: Float64Array, sine: Float64Array): void {
  const half = (d[l + 1] - d[l]) / (2 * e[l]);
  const root = Math.sqrt(half * half + 1);
  let g = d[m] - d[l] + e[l] / (half >= 0 ? half + root : half - root);
  let s = 1;
  let c = 1;
  let p = 0;
  for (let i = m - 1; i >= l; i--) {
    const f = s * e[i];
    const b = c * e[i];
    const size = Math.sqrt(f * f + g * g);
    if (i + 1 < m) e[i + 1] = size;
    if (size > 0) {
      s = f / size;
      c = g / size;
    } else {
      // Nothing to rotate away: the chase ends, and goes on below without a shift.
      s = 0;
      c = 1;
    }
    const base = d[i + 1] - p;
    const r = (d[i] - base) * s + 2 * c * b;
    p = s * r;
    d[i + 1] = base + p;
    g = c * r - b;
    cosine[i] = c;
    sine[i] = s;
  }
  d[l] -= p;
  e[l] = g;
}

/** Applies the rotations m - 1 down to l to the rows, four columns (at the end two) at a time. */
function rotateRows(storage: QlStorage, l: number, m: number): void {
  const { stride, rows, cosine, sine } = storage;
  let j = 0;
  for (; j + 3 < stride; j += 4) {
    let at = m * stride + j;
    let x0 = rows[at];
    let x1 = rows[at + 1];
    let x2 = rows[at + 2];
    let x3 = rows[at + 3];
    for (let i = m - 1; i >= l; i--) {
      const c = cosine[i];
      const s = sine[i];
      const from = at - stride;
      const y0 = rows[from];
      const y1 = rows[from + 1];
      const y2 = rows[from + 2];
      const y3 = rows[from + 3];
      rows[at] = s * y0 + c * x0;
      rows[at + 1] = s * y1 + c * x1;
      rows[at + 2] = s * y2 + c * x2;
      rows[at + 3] = s * y3 + c * x3;
      x0 = c * y0 - s * x0;
      x1 = c * y1 - s * x1;
      x2 = c * y2 - s * x2;
      x3 = c * y3 - s * x3;
      at = from;
    }
    rows[at] = x0;
    rows[at + 1] = x1;
    rows[at + 2] = x2;
    rows[at + 3] = x3;
  }
  if (j < stride) rotateLastColumns(storage, l, m, j);
}

/** The last two columns of `rotateRows`. */
function rotateLastColumns(storage: QlStorage, l: number, m: number, j: number): void {
  const { stride, rows, cosine, sine } = storage;
  let at = m * stride + j;
  let x0 = rows[at];
  let x1 = rows[at + 1];
  for (let i = m - 1; i >= l; i--) {
    const c = cosine[i];
    const s = sine[i];
    const from = at - stride;
    const y0 = rows[from];
    const y1 = rows[from + 1];
    rows[at] = s * y0 + c * x0;
    rows[at + 1] = s * y1 + c * x1;
    x0 = c * y0 - s * x0;
    x1 = c * y1 - s * x1;
    at = from;
  }
  rows[at] = x0;
  rows[at + 1] = x1;
}

/**
 * Eigenvalues (unsorted, in `diagonal`) and eigenvectors (rows of storage.rows) of the tridiagonal matrix with
 * couplings subdiagonal[i] between i and i + 1; both arrays are overwritten. `largest`: the size of the matrix, below
 * whose epsilon squared a coupling counts as zero. Returns false where the iteration does not converge.
 */
export function solveTridiagonal(
  storage: QlStorage,
  diagonal: Float64Array,
  subdiagonal: Float64Array,
  largest: number,
): boolean {
  const { n, stride, rows, cosine, sine } = storage;
  const floor = epsilon * epsilon * largest;
  rows.fill(0);
  for (let i = 0; i < n; i++) rows[i * stride + i] = 1;
  for (let l = 0; l < n; l++) {
    for (let sweeps = 0; ; sweeps++) {
      const m = splitFrom(l, n, diagonal, subdiagonal, floor);
      if (m === l) break;
      if (sweeps === sweepsPerValue) return false;
      sweep(l, m, diagonal, subdiagonal, cosine, sine);
      rotateRows(storage, l, m);
    }
  }
  return true;
}
