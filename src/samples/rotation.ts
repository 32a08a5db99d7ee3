// rotation.ts: what is a Hermitian matrix of the fixed basis in the basis of the eigenvectors, C* M C^T, for many M at one k?
import type { ComplexMatrix } from "./model.js";

/** Turns the matrices of one k point after another into an eigenbasis; the memory is taken once. */
export interface Rotation {
  /** Takes the eigenvectors of the next k point: rows C, complex interleaved, n each; those beyond the kept ones are not read. */
  setVectors(vectors: Float64Array): void;
  /** out <- C* M C^T (kept x kept), M Hermitian; exactly Hermitian, diagonal exactly real. `out` must not be M. */
  rotate(m: ComplexMatrix, out: ComplexMatrix): void;
}

/**
 * For n x n matrices into the first `kept` eigenvectors. An odd `kept` is padded with a band of zeros, so that the kernels may
 * take two at a time.
 */
export function createRotation(n: number, kept = n): Rotation {
  const size = kept + (kept % 2);
  const [conjugates, columns, half] = [0, 1, 2].map(() => new Float64Array(2 * n * size));
  return {
    setVectors(vectors) {
      for (let band = 0; band < kept; band++) {
        for (let j = 0; j < n; j++) {
          const re = vectors[2 * (band * n + j)];
          const im = vectors[2 * (band * n + j) + 1];
          conjugates[2 * (band * n + j)] = re;
          conjugates[2 * (band * n + j) + 1] = -im;
          columns[2 * (j * size + band)] = re;
          columns[2 * (j * size + band) + 1] = im;
        }
      }
    },
    rotate(m, out) {
      timesColumns(n, size, m, columns, half);
      upperProduct(n, kept, conjugates, half, out);
    },
  };
}

/**
 * half <- M C^T, row by row of M. The matrices of models are sparse and often real: a zero costs nothing, a real
 * number half. One function, so that the innermost loops are compiled where they are called.
 */
function timesColumns(n: number, size: number, m: ComplexMatrix, columns: Float64Array, half: Float64Array): void {
  const step = 2 * size;
  half.fill(0);
  for (let i = 0; i < n; i++) {
    const start = i * step;
    const end = start + step;
    for (let j = 0; j < n; j++) {
      const re = m[2 * (i * n + j)];
      const im = m[2 * (i * n + j) + 1];
      let from = j * step;
      if (im === 0) {
        if (re === 0) continue;
        for (let to = start; to < end; to++) half[to] += re * columns[from++];
        continue;
      }
      for (let to = start; to < end; to += 2) {
        const c = columns[from];
        const s = columns[from + 1];
        half[to] += re * c - im * s;
        half[to + 1] += re * s + im * c;
        from += 2;
      }
    }
  }
}

/**
 * out <- C* (M C^T): the upper triangle, mirrored. Tiles of two rows and two columns keep eight sums in registers (see
 * kernel/product.ts, which computes the whole square); one loop nest of more than 40 lines for that reason.
 */
function upperProduct(n: number, kept: number, a: Float64Array, b: Float64Array, out: ComplexMatrix): void {
  const step = 2 * n;
  const down = 2 * (kept + (kept % 2));
  for (let bra = 0; bra < kept; bra += 2) {
    const row = bra * step;
    for (let ket = bra; ket < kept; ket += 2) {
      let re00 = 0;
      let im00 = 0;
      let re01 = 0;
      let im01 = 0;
      let re10 = 0;
      let im10 = 0;
      let re11 = 0;
      let im11 = 0;
      let q = 2 * ket;
      for (let p = row; p < row + step; p += 2) {
        const a0re = a[p];
        const a0im = a[p + 1];
        const a1re = a[p + step];
        const a1im = a[p + step + 1];
        const b0re = b[q];
        const b0im = b[q + 1];
        const b1re = b[q + 2];
        const b1im = b[q + 3];
        re00 = re00 + a0re * b0re - a0im * b0im;
        im00 = im00 + a0re * b0im + a0im * b0re;
        re01 = re01 + a0re * b1re - a0im * b1im;
        im01 = im01 + a0re * b1im + a0im * b1re;
        re10 = re10 + a1re * b0re - a1im * b0im;
        im10 = im10 + a1re * b0im + a1im * b0re;
        re11 = re11 + a1re * b1re - a1im * b1im;
        im11 = im11 + a1re * b1im + a1im * b1re;
        q += down;
      }
      putPair(kept, bra, ket, re00, im00, out);
      if (ket + 1 < kept) putPair(kept, bra, ket + 1, re01, im01, out);
      if (bra + 1 < kept && ket > bra) putPair(kept, bra + 1, ket, re10, im10, out);
      if (bra + 1 < kept && ket + 1 < kept) putPair(kept, bra + 1, ket + 1, re11, im11, out);
    }
  }
}

/** Writes one element and its mirror image; an element of the diagonal without its imaginary round-off. */
function putPair(n: number, bra: number, ket: number, re: number, im: number, out: ComplexMatrix): void {
  const up = 2 * (bra * n + ket);
  const down = 2 * (ket * n + bra);
  out[up] = re;
  out[up + 1] = bra === ket ? 0 : im;
  out[down] = re;
  out[down + 1] = bra === ket ? 0 : -im;
}
