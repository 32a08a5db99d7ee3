// two-centre-integrals.ts: the 9 x 9 block of two-centre integrals between two atoms, from ten radial integrals and a direction.
import type { Triple } from "../grid/grid.js";
import { firstD, firstP, quadraticForms } from "./two-centre-orbitals.js";

/** The ten two-centre integrals: shells of the two orbitals, then the component (s sigma, p pi, d delta) along the bond. */
export const integralNames = ["sss", "sps", "pps", "ppp", "sds", "pds", "pdp", "dds", "ddp", "ddd"] as const;
export type IntegralName = (typeof integralNames)[number];

/**
 * <i at the origin|H|j at distance along n> for all 9 x 9 real orbitals, row (i) major, in the unit of the integrals.
 * `n` is a unit vector. sps is <s|H|p_z> with the p orbital at +z; swapping the centres gives the sign (-1)^(l + l').
 * Equal to the table of Slater and Koster, Phys. Rev. 94, 1498 (1954), written without a local frame: with the forms
 * M_m of the d orbitals, Y_m = n.M_m.n is the sigma component, and g_m = (2 M_m n - 2 n Y_m)/sqrt(3), a vector normal to
 * n, holds the two pi components; what is left of the unit matrix is delta.
 */
export function bondBlock(integrals: Readonly<Record<IntegralName, number>>, n: Triple): Float64Array {
  const v = integrals;
  const block = new Float64Array(81);
  const sigma = quadraticForms.map((m) => dot(n, times(m, n)));
  const pi = quadraticForms.map((m, i) =>
    times(m, n).map((component, axis) => (2 / Math.sqrt(3)) * (component - n[axis] * sigma[i])),
  );
  const set = (i: number, j: number, value: number, swapSign: number): void => {
    block[9 * i + j] = value;
    block[9 * j + i] = swapSign * value;
  };
  block[0] = v.sss;
  for (let a = 0; a < 3; a++) {
    set(0, firstP + a, v.sps * n[a], -1);
    for (let b = a; b < 3; b++)
      set(firstP + a, firstP + b, v.pps * n[a] * n[b] + v.ppp * ((a === b ? 1 : 0) - n[a] * n[b]), 1);
    for (let m = 0; m < 5; m++) set(firstP + a, firstD + m, v.pds * n[a] * sigma[m] + v.pdp * pi[m][a], -1);
  }
  for (let m = 0; m < 5; m++) {
    set(0, firstD + m, v.sds * sigma[m], 1);
    for (let q = m; q < 5; q++) {
      const ss = sigma[m] * sigma[q];
      const pp = dot(pi[m], pi[q]);
      set(firstD + m, firstD + q, v.dds * ss + v.ddp * pp + v.ddd * ((m === q ? 1 : 0) - ss - pp), 1);
    }
  }
  return block;
}

const dot = (a: readonly number[], b: readonly number[]): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

/** Row-major 3 x 3 form times a vector. */
const times = (m: readonly number[], n: readonly number[]): number[] =>
  [0, 1, 2].map((row) => m[3 * row] * n[0] + m[3 * row + 1] * n[1] + m[3 * row + 2] * n[2]);
