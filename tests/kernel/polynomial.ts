// polynomial.ts: test material: H(k) of second order in k, for which a local k.p model is exact, as stored points.

import { hbar2OverMeEvA2 } from "../../src/base/constants.js";
import type { HessianKind } from "../../src/grid/grid.js";
import { createEigensolver } from "../../src/kernel/eigen.js";
import { hessianIndex } from "../../src/kernel/hamiltonian.js";
import type { PointRef } from "../../src/kernel/kernel.js";
import { combine, diagonalMatrix, randomHermitian, rotate } from "./hermitian.js";
import { referTo } from "./points.js";

/** H(k) = constant + k_a linear_a + k_a k_b quadratic_ab / 2, and constant moments, in a fixed basis. */
export interface Polynomial {
  readonly n: number;
  readonly hessian: HessianKind;
  readonly constant: Float64Array;
  readonly linear: readonly Float64Array[];
  /** xx, yy, zz, yz, zx, xy. */
  readonly quadratic: readonly Float64Array[];
  readonly moments: readonly Float64Array[];
}

/** A random polynomial whose second derivative is of the given kind. */
export function randomPolynomial(
  n: number,
  hessian: HessianKind,
  moments: number,
  random: () => number,
  constant = randomHermitian(n, random),
): Polynomial {
  const matrices = (count: number) => Array.from({ length: count }, () => randomHermitian(n, random));
  const unit = diagonalMatrix(new Array(n).fill(1));
  const scaled = (factor: number) => unit.map((x) => factor * x);
  const quadratic =
    hessian === "array"
      ? matrices(6)
      : [0, 1, 2, 3, 4, 5].map((i) => scaled(hessian === "free-electron" && i < 3 ? hbar2OverMeEvA2 : 0));
  return { n, hessian, constant, linear: matrices(3), quadratic, moments: matrices(moments) };
}

/** H(k) in the fixed basis. */
export function hamiltonianAt(p: Polynomial, k: readonly number[]): Float64Array {
  const products = [k[0] * k[0], k[1] * k[1], k[2] * k[2]].map((x) => x / 2);
  const mixed = [k[1] * k[2], k[2] * k[0], k[0] * k[1]];
  return combine([1, ...k, ...products, ...mixed], [p.constant, ...p.linear, ...p.quadratic]);
}

/** dH/dk_a at k in the fixed basis. */
export function velocityAt(p: Polynomial, k: readonly number[], a: number): Float64Array {
  return combine([1, ...k], [p.linear[a], ...[0, 1, 2].map((b) => p.quadratic[hessianIndex(a, b)])]);
}

/** The point at k as a grid would store it, in the eigenbasis there. */
export function pointAt(p: Polynomial, k: readonly number[]): PointRef {
  const { n } = p;
  const energyEv = new Float64Array(n);
  const rows = new Float64Array(2 * n * n);
  createEigensolver(n)(hamiltonianAt(p, k), energyEv, rows);
  const columns = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) columns.set(rows.subarray(2 * (i * n + j), 2 * (i * n + j) + 2), 2 * (j * n + i));
  }
  const store = (a: Float64Array) => referTo(rotate(n, a, columns), 4);
  return {
    bands: n,
    energyEv,
    energyOffset: 0,
    velocity: [0, 1, 2].map((a) => store(velocityAt(p, k, a))),
    moments: p.moments.map(store),
    hessian: p.hessian === "array" ? p.quadratic.map(store) : undefined,
  };
}
