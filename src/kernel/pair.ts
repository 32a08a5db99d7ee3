// pair.ts: what is the curvature of every band at a stored k point, for every product asked for?
//
// O moment, V = v_flow, w = v_field / ((E_n - E_m)^2 + eta^2), zero for pairs that are skipped, M = O V.
// j = (M + M^H) / 2 is never formed: -2 Im sum_m j_nm conj(w_nm) = colsum_n - rowsum_n of Im(M conj(w)), because w is
// Hermitian. Every entry is added to one band and taken from another, so a full pair cancels.

import { fillInverse } from "./denominators.js";
import type { Denominator, MatrixRef, PointRef, Product } from "./kernel.js";
import { copyPadded } from "./product.js";

/** The pair sum at one point after another; scratch is kept inside, so one pass serves one thread. */
export interface PairPass {
  /**
   * Curvature of every product and band, out[product * bands + band], angstrom^2 times the moment:
   * Omega_n = -2 Im sum_m <n|j|m><m|v_field|n> / ((E_n - E_m)^2 + eta^2). Matrices are taken to be Hermitian; the
   * velocities and moments that the products name must be there.
   */
  run(point: PointRef, out: Float64Array): void;
  /** The function `slopes` of this file. */
  slopes(point: PointRef, out: Float64Array): void;
}

/** Products that share M = O V: which field each meets, and where its curvature goes. */
interface Group {
  readonly moment: number;
  readonly flow: number;
  /** For each product, its field's place among the weights (0, 1, 2) and its place among the products. */
  readonly members: Int32Array;
}

/** Products in groups of equal moment and flow, charge apart. */
function groupProducts(products: readonly Product[]): Group[] {
  const groups = new Map<string, { moment: number; flow: number; members: number[] }>();
  for (const [index, { moment, flow, field }] of products.entries()) {
    if (moment < 0) continue;
    const key = `${moment}/${flow}`;
    const group = groups.get(key) ?? { moment, flow, members: [] };
    group.members.push(field, index);
    groups.set(key, group);
  }
  return Array.from(groups.values(), (group) => ({ ...group, members: Int32Array.from(group.members) }));
}

/**
 * Adds Im(M conj(w)) to its column's band and takes it from its row's band, for every member (pairs of weight and
 * product). One tile of M at a time, in registers, meets all weights; longer than 40 lines so that it is one loop nest.
 */
function contract(
  size: number,
  o: Float64Array,
  oOffset: number,
  v: Float64Array,
  vOffset: number,
  weights: Float64Array,
  members: Int32Array,
  omega: Float64Array,
): void {
  const step = 2 * size;
  const count = members.length;
  for (let n = 0; n < size; n += 2) {
    const row = oOffset + n * step;
    const end = row + step;
    for (let m = 0; m < size; m += 2) {
      let re00 = 0;
      let im00 = 0;
      let re01 = 0;
      let im01 = 0;
      let re10 = 0;
      let im10 = 0;
      let re11 = 0;
      let im11 = 0;
      let q = vOffset + 2 * m;
      for (let p = row; p < end; p += 2) {
        const o0re = o[p];
        const o0im = o[p + 1];
        const o1re = o[p + step];
        const o1im = o[p + step + 1];
        const v0re = v[q];
        const v0im = v[q + 1];
        re00 = re00 + o0re * v0re - o0im * v0im;
        im00 = im00 + o0re * v0im + o0im * v0re;
        re10 = re10 + o1re * v0re - o1im * v0im;
        im10 = im10 + o1re * v0im + o1im * v0re;
        const v1re = v[q + 2];
        const v1im = v[q + 3];
        re01 = re01 + o0re * v1re - o0im * v1im;
        im01 = im01 + o0re * v1im + o0im * v1re;
        re11 = re11 + o1re * v1re - o1im * v1im;
        im11 = im11 + o1re * v1im + o1im * v1re;
        q += step;
      }
      for (let member = 0; member < count; member += 2) {
        const w = members[member] * size * step + n * step + 2 * m;
        const to = members[member + 1] * size;
        const t00 = im00 * weights[w] - re00 * weights[w + 1];
        const t01 = im01 * weights[w + 2] - re01 * weights[w + 3];
        const t10 = im10 * weights[w + step] - re10 * weights[w + step + 1];
        const t11 = im11 * weights[w + step + 2] - re11 * weights[w + step + 3];
        omega[to + m] += t00 + t10;
        omega[to + m + 1] += t01 + t11;
        omega[to + n] -= t00 + t01;
        omega[to + n + 1] -= t10 + t11;
      }
    }
  }
}

/** Adds the charge curvature, -2 Im(v_flow conj(w)) for every pair, at omega[at + band]. */
function contractCharge(
  bands: number,
  size: number,
  flow: MatrixRef,
  weights: Float64Array,
  weightOffset: number,
  omega: Float64Array,
  at: number,
): void {
  const { data, offset } = flow;
  for (let n = 0; n < bands; n++) {
    const v = offset + 2 * n * bands;
    const w = weightOffset + 2 * n * size;
    let own = 0;
    for (let m = n + 1; m < bands; m++) {
      const pair = 2 * (data[v + 2 * m] * weights[w + 2 * m + 1] - data[v + 2 * m + 1] * weights[w + 2 * m]);
      own += pair;
      omega[at + m] -= pair;
    }
    omega[at + n] += own;
  }
}

/** weights = matrix * inverse, entry by entry, for a stored matrix and a padded real one. */
function weigh(bands: number, size: number, matrix: MatrixRef, inverse: Float64Array, out: Float64Array, at: number) {
  const { data, offset } = matrix;
  for (let n = 0; n < bands; n++) {
    const from = offset + 2 * n * bands;
    const to = at + 2 * n * size;
    for (let m = 0; m < bands; m++) {
      const factor = inverse[n * size + m];
      out[to + 2 * m] = data[from + 2 * m] * factor;
      out[to + 2 * m + 1] = data[from + 2 * m + 1] * factor;
    }
  }
}

/** Band slopes dE/dk, eV angstrom, out[band * 3 + direction]; zero for a velocity that was not read. */
export function slopes(point: PointRef, out: Float64Array): void {
  for (let direction = 0; direction < 3; direction++) {
    const matrix = point.velocity[direction];
    for (let n = 0; n < point.bands; n++) {
      out[3 * n + direction] = matrix === undefined ? 0 : matrix.data[matrix.offset + 2 * (n * point.bands + n)];
    }
  }
}

/** A pair pass for points of `bands` bands. Nothing is allocated per point. */
export function createPairPass(bands: number, products: readonly Product[], denominator: Denominator): PairPass {
  const size = bands + (bands & 1);
  const padded = size !== bands;
  const inverse = new Float64Array(size * size);
  const weights = new Float64Array(3 * 2 * size * size);
  const moment = new Float64Array(padded ? 2 * size * size : 0);
  const flow = new Float64Array(padded ? 2 * size * size : 0);
  const omega = new Float64Array(products.length * size);
  const groups = groupProducts(products);
  const fields = [...new Set(products.map((product) => product.field))];

  const addGroup = (point: PointRef, group: Group) => {
    const o = point.moments[group.moment];
    const v = point.velocity[group.flow] as MatrixRef;
    if (!padded) return contract(size, o.data, o.offset, v.data, v.offset, weights, group.members, omega);
    copyPadded(bands, size, o.data, o.offset, moment, 0);
    copyPadded(bands, size, v.data, v.offset, flow, 0);
    contract(size, moment, 0, flow, 0, weights, group.members, omega);
  };

  const run = (point: PointRef, out: Float64Array) => {
    fillInverse(bands, size, point.energyEv, point.energyOffset, denominator, inverse, 0);
    for (const field of fields) {
      weigh(bands, size, point.velocity[field] as MatrixRef, inverse, weights, field * 2 * size * size);
    }
    omega.fill(0);
    for (const group of groups) addGroup(point, group);
    for (let index = 0; index < products.length; index++) {
      const product = products[index];
      if (product.moment < 0) {
        const matrix = point.velocity[product.flow] as MatrixRef;
        contractCharge(bands, size, matrix, weights, product.field * 2 * size * size, omega, index * size);
      }
      for (let n = 0; n < bands; n++) out[index * bands + n] = omega[index * size + n];
    }
  };
  return { run, slopes };
}
