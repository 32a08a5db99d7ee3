// product.ts: what is the product of two complex matrices?

/**
 * out = a b for `size` x `size` complex matrices, row-major interleaved, each at its own offset; size is even (odd
 * bands are padded with zeros). `out` must not overlap a or b. With `lower` the matrix a is lower triangular and what
 * lies above its diagonal is taken to be zero there, at half the cost.
 *
 * Two rows and two columns at a time: eight sums stay in registers, the best of all tiles and unrollings measured in
 * JavaScript. It stays one function of more than 40 lines so that it is compiled as one loop nest.
 */
export function multiplyInto(
  size: number,
  shape: "full" | "lower",
  a: Float64Array,
  aOffset: number,
  b: Float64Array,
  bOffset: number,
  out: Float64Array,
  outOffset: number,
): void {
  const step = 2 * size;
  for (let i = 0; i < size; i += 2) {
    const length = shape === "full" ? step : 2 * i + 4;
    const row = aOffset + i * step;
    const end = row + length;
    for (let j = 0; j < step; j += 4) {
      let re00 = 0;
      let im00 = 0;
      let re01 = 0;
      let im01 = 0;
      let re10 = 0;
      let im10 = 0;
      let re11 = 0;
      let im11 = 0;
      let q = bOffset + j;
      for (let p = row; p < end; p += 2) {
        const a0re = a[p];
        const a0im = a[p + 1];
        const a1re = a[p + step];
        const a1im = a[p + step + 1];
        const b0re = b[q];
        const b0im = b[q + 1];
        re00 = re00 + a0re * b0re - a0im * b0im;
        im00 = im00 + a0re * b0im + a0im * b0re;
        re10 = re10 + a1re * b0re - a1im * b0im;
        im10 = im10 + a1re * b0im + a1im * b0re;
        const b1re = b[q + 2];
        const b1im = b[q + 3];
        re01 = re01 + a0re * b1re - a0im * b1im;
        im01 = im01 + a0re * b1im + a0im * b1re;
        re11 = re11 + a1re * b1re - a1im * b1im;
        im11 = im11 + a1re * b1im + a1im * b1re;
        q += step;
      }
      const at = outOffset + i * step + j;
      out[at] = re00;
      out[at + 1] = im00;
      out[at + 2] = re01;
      out[at + 3] = im01;
      out[at + step] = re10;
      out[at + step + 1] = im10;
      out[at + step + 2] = re11;
      out[at + step + 3] = im11;
    }
  }
}

/** Copies a `bands` x `bands` complex matrix into one of `size` x `size`, size >= bands, whose other entries are zero already. */
export function copyPadded(
  bands: number,
  size: number,
  from: Float64Array,
  fromOffset: number,
  out: Float64Array,
  outOffset: number,
): void {
  for (let i = 0; i < bands; i++) {
    const source = fromOffset + 2 * i * bands;
    const target = outOffset + 2 * i * size;
    for (let j = 0; j < 2 * bands; j++) out[target + j] = from[source + j];
  }
}
