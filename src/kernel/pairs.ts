// pairs.ts: what does each pair of bands n < m give to the curvature of its two bands?
//
// Pairs are packed row by row: (0,1), (0,2) ... (1,2) ...; complex elements interleaved. A pair is added to one band and
// taken from the other as the same number, so a pair of which both bands are full or both are empty cancels.

import type { Denominator } from "./kernel.js";

/** Number of pairs of `bands` bands. */
export const pairCount = (bands: number): number => (bands * (bands - 1)) / 2;

/**
 * Writes 1 / ((E_n - E_m)^2 + eta^2) of every pair to out[offset + pair], 1/eV^2; zero for pairs closer than
 * degenerateEv, and for coinciding levels without broadening.
 */
export function fillInverse(
  bands: number,
  energyEv: Float64Array,
  energyOffset: number,
  denominator: Denominator,
  out: Float64Array,
  offset: number,
): void {
  const { degenerateEv, broadenEv } = denominator;
  const eta = broadenEv * broadenEv;
  let to = offset;
  for (let n = 0; n < bands; n++) {
    const level = energyEv[energyOffset + n];
    for (let m = n + 1; m < bands; m++) {
      const gap = energyEv[energyOffset + m] - level;
      const square = gap * gap + eta;
      out[to++] = Math.abs(gap) < degenerateEv || square === 0 ? 0 : 1 / square;
    }
  }
}

/**
 * Writes the elements <n|A|m> of every pair, A the Hermitian part (C + C^H) / 2 of the matrix C that lies at `offset`
 * with row length `size`.
 */
export function packHermitian(
  bands: number,
  size: number,
  matrix: Float64Array,
  offset: number,
  out: Float64Array,
  outOffset: number,
): void {
  const step = 2 * size;
  let to = outOffset;
  for (let n = 0; n < bands; n++) {
    let x = offset + n * step + 2 * n + 2;
    let y = offset + (n + 1) * step + 2 * n;
    for (let m = n + 1; m < bands; m++) {
      out[to] = 0.5 * (matrix[x] + matrix[y]);
      out[to + 1] = 0.5 * (matrix[x + 1] - matrix[y + 1]);
      to += 2;
      x += 2;
      y += step;
    }
  }
}

/** As packHermitian, for the B of C = A + i B with A and B Hermitian: B = (C - C^H) / 2i. */
export function packAntiHermitian(
  bands: number,
  size: number,
  matrix: Float64Array,
  offset: number,
  out: Float64Array,
  outOffset: number,
): void {
  const step = 2 * size;
  let to = outOffset;
  for (let n = 0; n < bands; n++) {
    let x = offset + n * step + 2 * n + 2;
    let y = offset + (n + 1) * step + 2 * n;
    for (let m = n + 1; m < bands; m++) {
      out[to] = 0.5 * (matrix[x + 1] + matrix[y + 1]);
      out[to + 1] = 0.5 * (matrix[y] - matrix[x]);
      to += 2;
      x += 2;
      y += step;
    }
  }
}

/** out = elements of a matrix times the inverse denominators, pair by pair, `count` pairs. */
export function weighPairs(
  count: number,
  elements: Float64Array,
  elementOffset: number,
  inverse: Float64Array,
  inverseOffset: number,
  out: Float64Array,
  outOffset: number,
): void {
  for (let pair = 0; pair < count; pair++) {
    const factor = inverse[inverseOffset + pair];
    out[outOffset + 2 * pair] = elements[elementOffset + 2 * pair] * factor;
    out[outOffset + 2 * pair + 1] = elements[elementOffset + 2 * pair + 1] * factor;
  }
}

/**
 * Adds -2 Im(<n|j|m> conj(<n|w|m>)) of every pair to omega[at + n] and takes it from omega[at + m]: the curvature of
 * the current j with w = v_field / ((E_n - E_m)^2 + eta^2).
 */
export function addPairs(
  bands: number,
  current: Float64Array,
  currentOffset: number,
  weight: Float64Array,
  weightOffset: number,
  omega: Float64Array,
  at: number,
): void {
  let j = currentOffset;
  let w = weightOffset;
  for (let n = 0; n < bands; n++) {
    let own = 0;
    for (let m = n + 1; m < bands; m++) {
      const pair = 2 * (current[j] * weight[w + 1] - current[j + 1] * weight[w]);
      own += pair;
      omega[at + m] -= pair;
      j += 2;
      w += 2;
    }
    omega[at + n] += own;
  }
}

/**
 * Writes what addPairs would add to band n and take from band m, pair by pair: out[at + pair] = -2 Im(<n|j|m> conj(<n|w|m>)), so that
 * the curvature of a band is the sum of its row less the sum of its column.
 */
export function writePairs(
  count: number,
  current: Float64Array,
  currentOffset: number,
  weight: Float64Array,
  weightOffset: number,
  out: Float64Array,
  at: number,
): void {
  for (let pair = 0; pair < count; pair++) {
    const j = currentOffset + 2 * pair;
    const w = weightOffset + 2 * pair;
    out[at + pair] = 2 * (current[j] * weight[w + 1] - current[j + 1] * weight[w]);
  }
}
