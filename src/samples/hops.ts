// hops.ts: H(k) of a tight-binding crystal as a Fourier sum over hops, with exact first and second derivatives.
import { hessianPairs, type Triple } from "../grid/grid.js";
import { zeroMatrix } from "./matrix.js";
import type { ComplexMatrix, HamiltonianAtK } from "./model.js";

/** One hop: `amplitude` e^{i k . vectorA} plus its Hermitian adjoint. */
export interface Hop {
  /** angstrom, Cartesian. */
  readonly vectorA: Triple;
  /** eV. */
  readonly amplitude: ComplexMatrix;
}

function addTo(out: ComplexMatrix, term: ComplexMatrix, re: number, im: number): void {
  if (re === 0 && im === 0) return;
  for (let i = 0; i < out.length; i += 2) {
    out[i] += re * term[i] - im * term[i + 1];
    out[i + 1] += re * term[i + 1] + im * term[i];
  }
}

/** m <- m + adjoint(m), in place: exactly Hermitian whatever the rounding. */
function addAdjoint(m: ComplexMatrix, n: number): void {
  for (let i = 0; i < n; i++) {
    for (let j = i; j < n; j++) {
      const a = 2 * (i * n + j);
      const b = 2 * (j * n + i);
      const re = m[a] + m[b];
      const im = m[a + 1] - m[b + 1];
      m[a] = re;
      m[b] = re;
      m[a + 1] = im;
      m[b + 1] = -im;
    }
  }
}

/**
 * A function k -> H, dH/dk, d2H/dk2 of `H(k) = onsite + sum over hops (amplitude e^{i k . vector} + adjoint)`.
 * `onsite` must be Hermitian, n x n, eV; k in 1/angstrom. Every call returns fresh matrices.
 */
export function fourierHamiltonian(
  onsite: ComplexMatrix,
  n: number,
  hops: readonly Hop[],
): (k: Triple) => HamiltonianAtK {
  return (k) => {
    const h = zeroMatrix(n);
    const dh: [ComplexMatrix, ComplexMatrix, ComplexMatrix] = [zeroMatrix(n), zeroMatrix(n), zeroMatrix(n)];
    const d2h = hessianPairs.map(() => zeroMatrix(n));
    addTo(h, onsite, 0.5, 0);
    for (const { vectorA: d, amplitude } of hops) {
      const phase = k[0] * d[0] + k[1] * d[1] + k[2] * d[2];
      const re = Math.cos(phase);
      const im = Math.sin(phase);
      addTo(h, amplitude, re, im);
      for (let a = 0; a < 3; a++) addTo(dh[a], amplitude, -d[a] * im, d[a] * re);
      hessianPairs.forEach(([a, b], pair) => {
        addTo(d2h[pair], amplitude, -d[a] * d[b] * re, -d[a] * d[b] * im);
      });
    }
    for (const m of [h, ...dh, ...d2h]) addAdjoint(m, n);
    return { h, dh, d2h };
  };
}
