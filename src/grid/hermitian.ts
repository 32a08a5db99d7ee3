// hermitian.ts: is a complex matrix finite, and how far is it from Hermitian? Knows no arrays and no k points.

/** What one pass over a matrix finds. */
export interface MatrixScan {
  /** Sum of |Re| + |Im|; NaN or infinite when an element is. */
  sum: number;
  /** Largest |Re| or |Im| of the upper triangle. */
  largest: number;
  /** Largest |Re M_ij - Re M_ji| or |Im M_ij + Im M_ji|. */
  deviation: number;
}

/**
 * Kernel, one pass over the n x n matrix (bra major, complex interleaved) at data[offset] into `out`. It walks tiles, so that
 * the rows and columns of a large matrix stay in the cache; the loops must not be split for that.
 */
export function scanMatrix(data: Float64Array, offset: number, n: number, out: MatrixScan): void {
  const tile = 32;
  let sum = 0;
  let largest = 0;
  let deviation = 0;
  for (let rows = 0; rows < n; rows += tile) {
    const rowEnd = rows + tile < n ? rows + tile : n;
    for (let columns = rows; columns < n; columns += tile) {
      const columnEnd = columns + tile < n ? columns + tile : n;
      for (let i = rows; i < rowEnd; i++) {
        for (let j = i > columns ? i : columns; j < columnEnd; j++) {
          const upper = offset + 2 * (i * n + j);
          const lower = offset + 2 * (j * n + i);
          const re = data[upper];
          const im = data[upper + 1];
          const sizeRe = Math.abs(re);
          const sizeIm = Math.abs(im);
          const lowerRe = data[lower];
          const lowerIm = data[lower + 1];
          sum += sizeRe + sizeIm + Math.abs(lowerRe) + Math.abs(lowerIm);
          const deviationRe = Math.abs(re - lowerRe);
          const deviationIm = Math.abs(im + lowerIm);
          if (deviationRe > deviation) deviation = deviationRe;
          if (deviationIm > deviation) deviation = deviationIm;
          if (sizeRe > largest) largest = sizeRe;
          if (sizeIm > largest) largest = sizeIm;
        }
      }
    }
  }
  out.sum = sum;
  out.largest = largest;
  out.deviation = deviation;
}

/** Bra and ket (bra <= ket) of the element that deviates most from Hermiticity. */
export function worstElement(data: Float64Array, offset: number, n: number): [number, number] {
  let worst = -1;
  let place: [number, number] = [0, 0];
  for (let bra = 0; bra < n; bra++) {
    for (let ket = bra; ket < n; ket++) {
      const at = offset + 2 * (bra * n + ket);
      const mirror = offset + 2 * (ket * n + bra);
      const deviation = Math.max(Math.abs(data[at] - data[mirror]), Math.abs(data[at + 1] + data[mirror + 1]));
      if (deviation <= worst) continue;
      worst = deviation;
      place = [bra, ket];
    }
  }
  return place;
}

/** Bra and ket of the first element that is NaN or infinite; undefined where there is none. */
export function firstNotFinite(data: Float64Array, offset: number, n: number): [number, number] | undefined {
  for (let element = 0; element < n * n; element++) {
    const at = offset + 2 * element;
    if (!Number.isFinite(data[at]) || !Number.isFinite(data[at + 1])) return [Math.floor(element / n), element % n];
  }
  return undefined;
}
