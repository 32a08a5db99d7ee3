// reflect.ts: how do eigenvectors come back from the tridiagonal matrix to the one that householder.ts reduced?

import type { Reduction } from "./householder.js";

/** v_{k+1}^H v_k of the reflectors in rows k and k + 1, written to out[0], out[1]. */
function overlapOfNeighbours(n: number, a: Float64Array, k: number, out: Float64Array): void {
  const first = 2 * k * n;
  const second = first + 2 * n;
  let re = 0;
  let im = 0;
  for (let j = 0; j < 2 * k; j += 2) {
    re += a[first + j] * a[second + j] + a[first + j + 1] * a[second + j + 1];
    im += a[first + j] * a[second + j + 1] - a[first + j + 1] * a[second + j];
  }
  out[0] = re;
  out[1] = im;
}

/**
 * Turns the eigenvectors of the tridiagonal matrix (rows of `vectors`, 2 n^2, already times `phase`, interleaved)
 * into those of the matrix that `tridiagonalise` reduced. `a` holds the reflectors and its diagonal is overwritten.
 * Two reflectors act on two vectors at a time.
 */
export function transformBack(reduction: Reduction, a: Float64Array, vectors: Float64Array): void {
  const { n, tau } = reduction;
  // Rows are as long as their index: a zero where the partner row has one entry more.
  for (let k = 0; k < n; k++) {
    a[2 * (k * n + k)] = 0;
    a[2 * (k * n + k) + 1] = 0;
  }
  // Row 1 never holds a reflector, so pairs start where they end with row n - 1.
  for (let k = 2 - (n & 1); k + 1 < n; k += 2) {
    if (tau[k] === 0 && tau[k + 1] === 0) continue;
    overlapOfNeighbours(n, a, k, reduction.overlap);
    for (let i = 0; i < n; i += 2) reflectPair(reduction, a, k, vectors, 2 * i * n, i + 1 < n ? 2 * n : 0);
  }
}

/** Applies reflectors k, then k + 1, to the vectors at `first` and at first + step (step 0: one vector only). */
function reflectPair(r: Reduction, a: Float64Array, k: number, z: Float64Array, first: number, step: number): void {
  const { n, tau, overlap } = r;
  const v = 2 * k * n;
  const u = v + 2 * n;
  const length = 2 * k + 2;
  const second = first + step;
  let v0re = 0;
  let v0im = 0;
  let v1re = 0;
  let v1im = 0;
  let u0re = 0;
  let u0im = 0;
  let u1re = 0;
  let u1im = 0;
  for (let j = 0; j < length; j += 2) {
    const vre = a[v + j];
    const vim = a[v + j + 1];
    const ure = a[u + j];
    const uim = a[u + j + 1];
    const z0re = z[first + j];
    const z0im = z[first + j + 1];
    const z1re = z[second + j];
    const z1im = z[second + j + 1];
    v0re += vre * z0re - vim * z0im;
    v0im += vre * z0im + vim * z0re;
    v1re += vre * z1re - vim * z1im;
    v1im += vre * z1im + vim * z1re;
    u0re += ure * z0re - uim * z0im;
    u0im += ure * z0im + uim * z0re;
    u1re += ure * z1re - uim * z1im;
    u1im += ure * z1im + uim * z1re;
  }
  // The second reflector sees the vector after the first: its overlap changes by -tau_k (v^H z) (u^H v).
  const t = tau[k];
  const tt = tau[k + 1];
  const ore = overlap[0];
  const oim = overlap[1];
  v0re *= t;
  v0im *= t;
  v1re *= t;
  v1im *= t;
  u0re = tt * (u0re - (v0re * ore - v0im * oim));
  u0im = tt * (u0im - (v0re * oim + v0im * ore));
  u1re = tt * (u1re - (v1re * ore - v1im * oim));
  u1im = tt * (u1im - (v1re * oim + v1im * ore));
  for (let j = 0; j < length; j += 2) {
    const vre = a[v + j];
    const vim = a[v + j + 1];
    const ure = a[u + j];
    const uim = a[u + j + 1];
    z[first + j] -= v0re * vre + v0im * vim + (u0re * ure + u0im * uim);
    z[first + j + 1] -= v0im * vre - v0re * vim + (u0im * ure - u0re * uim);
    if (step !== 0) {
      z[second + j] -= v1re * vre + v1im * vim + (u1re * ure + u1im * uim);
      z[second + j + 1] -= v1im * vre - v1re * vim + (u1im * ure - u1re * uim);
    }
  }
}
