// continuum.ts: continuum (k.p) Hamiltonians, polynomials of second order in k, cut to a box around the origin.
import { hessianPairs, type Triple } from "../grid/grid.js";
import { zeroMatrix } from "./matrix.js";
import type { ComplexMatrix, HamiltonianAtK } from "./model.js";

/**
 * `H(k) = constant + sum_a linear[a] k_a + (1/2) sum_ab second_ab k_a k_b`; all Hermitian; eV, eV angstrom,
 * eV angstrom^2. `second` is d2H in the pair order xx, yy, zz, yz, zx, xy.
 */
export interface PolynomialHamiltonian {
  readonly constant: ComplexMatrix;
  readonly linear: readonly [ComplexMatrix, ComplexMatrix, ComplexMatrix];
  readonly second: readonly ComplexMatrix[];
}

/**
 * Lattice vectors (angstrom) whose reciprocal cell is the box -K <= k_a < K, K = `halfWidth` in 1/angstrom; a layer
 * (`periodic` 2) gets a3 along z with the length 1 angstrom.
 */
export function boxVectors(halfWidth: number, periodic: 2 | 3): [Triple, Triple, Triple] {
  const a = Math.PI / halfWidth;
  return [
    [a, 0, 0],
    [0, a, 0],
    [0, 0, periodic === 3 ? a : 1],
  ];
}

/**
 * k moved by reciprocal vectors of the box into -K <= k_a < K. A mesh lists k from 0 to 2K, while a continuum model lives
 * around the origin. Meshes with even divisions and offset 0.5 are symmetric about the origin and miss it, the face -K is
 * hit by none of their points: the advisable choice.
 */
export function foldIntoBox(k: Triple, halfWidth: number, periodic: 2 | 3): Triple {
  const fold = (x: number): number => x - 2 * halfWidth * Math.floor(x / (2 * halfWidth) + 0.5);
  return [fold(k[0]), fold(k[1]), periodic === 3 ? fold(k[2]) : k[2]];
}

function addScaled(out: ComplexMatrix, m: ComplexMatrix, factor: number): void {
  for (let i = 0; i < out.length; i++) out[i] += factor * m[i];
}

/** H, dH/dk and d2H/dk2 of a polynomial Hamiltonian at k (1/angstrom, not folded); fresh matrices. */
export function polynomialAt(p: PolynomialHamiltonian, n: number, k: Triple): HamiltonianAtK {
  const h = p.constant.slice();
  const dh: [ComplexMatrix, ComplexMatrix, ComplexMatrix] = [zeroMatrix(n), zeroMatrix(n), zeroMatrix(n)];
  for (let a = 0; a < 3; a++) {
    addScaled(h, p.linear[a], k[a]);
    addScaled(dh[a], p.linear[a], 1);
  }
  hessianPairs.forEach(([a, b], pair) => {
    addScaled(h, p.second[pair], a === b ? (k[a] * k[a]) / 2 : k[a] * k[b]);
    addScaled(dh[a], p.second[pair], k[b]);
    if (a !== b) addScaled(dh[b], p.second[pair], k[a]);
  });
  return { h, dh, d2h: p.second.map((m) => m.slice()) };
}
