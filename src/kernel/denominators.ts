// denominators.ts: with which energy denominator does each pair of bands count?

import type { Denominator } from "./kernel.js";

/**
 * Writes 1 / ((E_n - E_m)^2 + eta^2) to out[offset + n * size + m], both orders, 1/eV^2; zero on the diagonal, for
 * pairs closer than degenerateEv, and for coinciding levels without broadening. Entries beyond `bands` are left alone.
 */
export function fillInverse(
  bands: number,
  size: number,
  energyEv: Float64Array,
  energyOffset: number,
  denominator: Denominator,
  out: Float64Array,
  offset: number,
): void {
  const { degenerateEv, broadenEv } = denominator;
  const eta = broadenEv * broadenEv;
  for (let n = 0; n < bands; n++) {
    const level = energyEv[energyOffset + n];
    out[offset + n * size + n] = 0;
    for (let m = n + 1; m < bands; m++) {
      const gap = energyEv[energyOffset + m] - level;
      const square = gap * gap + eta;
      const inverse = Math.abs(gap) < degenerateEv || square === 0 ? 0 : 1 / square;
      out[offset + n * size + m] = inverse;
      out[offset + m * size + n] = inverse;
    }
  }
}
