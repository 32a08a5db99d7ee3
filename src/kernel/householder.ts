// householder.ts: how is a complex Hermitian matrix brought to real tridiagonal form?
//
// Reflectors I - tau v v^H with real tau (Wilkinson, The Algebraic Eigenvalue Problem, ch. 5) act on the lower
// triangle, last row first, so every inner loop runs along a row. Two rows share each load: memory traffic, not
// arithmetic, is what these loops wait for. Functions exceed 40 lines because the tiles are written out.

/** Below this times the squared largest entry, a squared norm has lost digits to underflow and counts as zero. */
const underflowGuard = 1e-240;

/** Storage of one reduction, reused call after call. */
export interface Reduction {
  /** Order of the matrix. */
  readonly n: number;
  /** n diagonal entries of the tridiagonal matrix. */
  readonly diagonal: Float64Array;
  /** subdiagonal[i] couples i and i + 1; n entries, the last one zero. Never negative. */
  readonly subdiagonal: Float64Array;
  /** Complex unit factor of each tridiagonal basis vector, interleaved. */
  readonly phase: Float64Array;
  /** tau of the reflector kept in row k; 0: none. */
  readonly tau: Float64Array;
  /** Scratch: conjugate of the product of matrix and reflector. */
  readonly product: Float64Array;
  /** Scratch: product of two neighbouring reflector vectors. */
  readonly overlap: Float64Array;
}

/** Storage for matrices of order n. */
export function createReduction(n: number): Reduction {
  const real = () => new Float64Array(n);
  const complex = () => new Float64Array(2 * n);
  const overlap = new Float64Array(2);
  return { n, diagonal: real(), subdiagonal: real(), phase: complex(), tau: real(), product: complex(), overlap };
}

/**
 * Turns row k of `a` (entries 0..k-1) into the conjugate of its reflector vector and returns tau; writes the entry
 * left at (k, k-1) to `product` [2k, 2k + 1], which the reduction no longer needs there.
 */
function makeReflector(reduction: Reduction, a: Float64Array, k: number, guard: number): number {
  const row = 2 * k * reduction.n;
  const last = row + 2 * k - 2;
  const product = reduction.product;
  let head = 0;
  for (let j = row; j < last; j++) head += a[j] * a[j];
  const re = a[last];
  const im = a[last + 1];
  product[2 * k] = re;
  product[2 * k + 1] = im;
  if (head <= guard) return 0;
  const own = re * re + im * im;
  const norm = Math.sqrt(head + own);
  const size = Math.sqrt(own);
  const unitRe = own > guard ? re / size : 1;
  const unitIm = own > guard ? im / size : 0;
  a[last] = re + unitRe * norm;
  a[last + 1] = im + unitIm * norm;
  product[2 * k] = -unitRe * norm;
  product[2 * k + 1] = -unitIm * norm;
  // |v|^2 / 2 = norm^2 + norm |x_last|; with own below the guard the unit factor is 1 and only re adds.
  return 1 / (norm * (norm + (own > guard ? size : re)));
}

/** product_j (j < k) = conj(A v)_j, A the leading k x k block held in its lower triangle, w = conj(v) in row k. */
function multiply(n: number, a: Float64Array, k: number, product: Float64Array): void {
  const w = 2 * k * n;
  for (let j = 0; j < 2 * k; j++) product[j] = 0;
  let i = 0;
  for (; i + 1 < k; i += 2) {
    const upper = 2 * i * n;
    const lower = upper + 2 * n;
    const w0re = a[w + 2 * i];
    const w0im = a[w + 2 * i + 1];
    const w1re = a[w + 2 * i + 2];
    const w1im = a[w + 2 * i + 3];
    let s0re = 0;
    let s0im = 0;
    let s1re = 0;
    let s1im = 0;
    for (let j = 0; j < 2 * i; j += 2) {
      const a0re = a[upper + j];
      const a0im = a[upper + j + 1];
      const a1re = a[lower + j];
      const a1im = a[lower + j + 1];
      const wre = a[w + j];
      const wim = a[w + j + 1];
      s0re += a0re * wre + a0im * wim;
      s0im += a0re * wim - a0im * wre;
      s1re += a1re * wre + a1im * wim;
      s1im += a1re * wim - a1im * wre;
      product[j] += a0re * w0re - a0im * w0im + (a1re * w1re - a1im * w1im);
      product[j + 1] += a0re * w0im + a0im * w0re + (a1re * w1im + a1im * w1re);
    }
    const cre = a[lower + 2 * i];
    const cim = a[lower + 2 * i + 1];
    const d0 = a[upper + 2 * i];
    const d1 = a[lower + 2 * i + 2];
    product[2 * i] += s0re + d0 * w0re + (cre * w1re - cim * w1im);
    product[2 * i + 1] += s0im + d0 * w0im + (cre * w1im + cim * w1re);
    product[2 * i + 2] += s1re + d1 * w1re + (cre * w0re + cim * w0im);
    product[2 * i + 3] += s1im + d1 * w1im + (cre * w0im - cim * w0re);
  }
  if (i < k) multiplyLastRow(n, a, k, product);
}

/** The share of row k - 1 in `multiply`, where the number of rows is odd. */
function multiplyLastRow(n: number, a: Float64Array, k: number, product: Float64Array): void {
  const i = k - 1;
  const row = 2 * i * n;
  const w = 2 * k * n;
  const w0re = a[w + 2 * i];
  const w0im = a[w + 2 * i + 1];
  let sre = 0;
  let sim = 0;
  for (let j = 0; j < 2 * i; j += 2) {
    const are = a[row + j];
    const aim = a[row + j + 1];
    const wre = a[w + j];
    const wim = a[w + j + 1];
    sre += are * wre + aim * wim;
    sim += are * wim - aim * wre;
    product[j] += are * w0re - aim * w0im;
    product[j + 1] += are * w0im + aim * w0re;
  }
  product[2 * i] += sre + a[row + 2 * i] * w0re;
  product[2 * i + 1] += sim + a[row + 2 * i] * w0im;
}

/** product becomes conj(q), q = tau A v - (tau^2 v^H A v / 2) v, which makes H A H = A - v q^H - q v^H. */
function centre(a: Float64Array, w: number, k: number, tau: number, product: Float64Array): void {
  let overlap = 0;
  for (let j = 0; j < 2 * k; j++) overlap += product[j] * a[w + j];
  // In this order: tau squared may overflow.
  const share = 0.5 * tau * (tau * overlap);
  for (let j = 0; j < 2 * k; j++) product[j] = tau * product[j] - share * a[w + j];
}

/** A - v q^H - q v^H in the lower triangle of the leading k x k block; w = conj(v) in row k, r = conj(q). */
function update(n: number, a: Float64Array, k: number, r: Float64Array): void {
  const w = 2 * k * n;
  // Where k is odd the second row of the last pair would be row k itself, the reflector: row 0 goes alone instead.
  let i = k & 1;
  if (i === 1) a[0] -= 2 * (a[w] * r[0] + a[w + 1] * r[1]);
  for (; i < k; i += 2) {
    const upper = 2 * i * n;
    const lower = upper + 2 * n;
    const w0re = a[w + 2 * i];
    const w0im = a[w + 2 * i + 1];
    const w1re = a[w + 2 * i + 2];
    const w1im = a[w + 2 * i + 3];
    const r0re = r[2 * i];
    const r0im = r[2 * i + 1];
    const r1re = r[2 * i + 2];
    const r1im = r[2 * i + 3];
    // One column past the diagonal of the upper row is written too: the upper triangle is never read.
    for (let j = 0; j < 2 * i + 4; j += 2) {
      const wre = a[w + j];
      const wim = a[w + j + 1];
      const rre = r[j];
      const rim = r[j + 1];
      a[upper + j] -= w0re * rre + w0im * rim + (r0re * wre + r0im * wim);
      a[upper + j + 1] -= w0re * rim - w0im * rre + (r0re * wim - r0im * wre);
      a[lower + j] -= w1re * rre + w1im * rim + (r1re * wre + r1im * wim);
      a[lower + j + 1] -= w1re * rim - w1im * rre + (r1re * wim - r1im * wre);
    }
  }
}

/**
 * Reduces the Hermitian matrix `a` (2 n^2, row-major, interleaved; only the lower triangle and the real part of the
 * diagonal are read) to the real tridiagonal matrix in `reduction`. `a` is left holding the reflectors.
 * `largest` is the largest absolute entry of `a`; it must be far from overflow when squared.
 */
export function tridiagonalise(reduction: Reduction, a: Float64Array, largest: number): void {
  const { n, diagonal, subdiagonal, phase, tau, product } = reduction;
  const guard = underflowGuard * largest * largest;
  for (let k = n - 1; k > 0; k--) {
    diagonal[k] = a[2 * (k * n + k)];
    const factor = makeReflector(reduction, a, k, guard);
    tau[k] = factor;
    if (factor === 0) continue;
    multiply(n, a, k, product);
    centre(a, 2 * k * n, k, factor, product);
    update(n, a, k, product);
  }
  diagonal[0] = a[0];
  tau[0] = 0;
  subdiagonal[n - 1] = 0;
  // Each basis vector k takes the phase that makes its coupling to k - 1 real.
  phase[0] = 1;
  phase[1] = 0;
  for (let k = 1; k < n; k++) {
    const re = product[2 * k];
    const im = product[2 * k + 1];
    const square = re * re + im * im;
    const size = square > guard ? Math.sqrt(square) : 0;
    subdiagonal[k - 1] = size;
    const unitRe = size > 0 ? re / size : 1;
    const unitIm = size > 0 ? im / size : 0;
    phase[2 * k] = phase[2 * k - 2] * unitRe - phase[2 * k - 1] * unitIm;
    phase[2 * k + 1] = phase[2 * k - 2] * unitIm + phase[2 * k - 1] * unitRe;
  }
}
