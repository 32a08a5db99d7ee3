// pair.ts: what is the curvature of every band at a stored k point, for every product asked for?
//
// j = (O v + v O) / 2 is the Hermitian part of the one product O v, formed once for all products with that moment and
// flow direction; the charge current needs none. The matrix product is where the time goes.

import type { Denominator, MatrixRef, PointRef, Product } from "./kernel.js";
import { addPairs, fillInverse, packHermitian, pairCount, weighPairs, writePairs } from "./pairs.js";
import { copyPadded, multiplyInto } from "./product.js";

/** The pair sum at one point after another; scratch is kept inside, so one pass serves one thread. */
export interface PairPass {
  /**
   * Curvature of every product and band, out[product * bands + band], angstrom^2 times the moment:
   * Omega_n = -2 Im sum_m <n|j|m><m|v_field|n> / ((E_n - E_m)^2 + eta^2). Matrices are taken to be Hermitian; the
   * velocities and moments that the products name must be there.
   */
  run(point: PointRef, out: Float64Array): void;
  /** What each pair n < m adds to the curvature of n and takes from that of m, out[product * pairCount + pair]; see pairs.ts. */
  pairs(point: PointRef, out: Float64Array): void;
  /** The function `slopes` of this file. */
  slopes(point: PointRef, out: Float64Array): void;
}

/** Products that share a current: which field each meets, and where its curvature goes. */
interface Group {
  readonly moment: number;
  readonly flow: number;
  /** For each product, its field direction and its place among the products. */
  readonly members: readonly number[];
}

/** Products in groups of equal moment and flow. */
function groupProducts(products: readonly Product[]): Group[] {
  const groups = new Map<string, { moment: number; flow: number; members: number[] }>();
  for (const [index, { moment, flow, field }] of products.entries()) {
    const key = `${moment}/${flow}`;
    const group = groups.get(key) ?? { moment, flow, members: [] };
    group.members.push(field, index);
    groups.set(key, group);
  }
  return [...groups.values()];
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

/** Returns the function that writes the pairs of O v; odd bands are padded with a zero for the matrix product. */
function createCurrent(bands: number) {
  const size = bands + (bands & 1);
  const length = 2 * size * size;
  const [left, right, product] = [0, 0, 0].map(() => new Float64Array(length));
  return (o: MatrixRef, v: MatrixRef, out: Float64Array): void => {
    if (size === bands) {
      multiplyInto(size, "full", o.data, o.offset, v.data, v.offset, product, 0);
    } else {
      copyPadded(bands, size, o.data, o.offset, left, 0);
      copyPadded(bands, size, v.data, v.offset, right, 0);
      multiplyInto(size, "full", left, 0, right, 0, product, 0);
    }
    packHermitian(bands, size, product, 0, out, 0);
  };
}

/** A pair pass for points of `bands` bands. Nothing is allocated per point. */
export function createPairPass(bands: number, products: readonly Product[], denominator: Denominator): PairPass {
  const count = pairCount(bands);
  const inverse = new Float64Array(count);
  const elements = new Float64Array(2 * count);
  const weights = new Float64Array(3 * 2 * count);
  const groups = groupProducts(products);
  const fields = [...new Set(products.map((product) => product.field))];
  const formCurrent = createCurrent(bands);

  type Take = (product: number, weightOffset: number) => void;
  /** Forms the pairs of every product's current and field, one after another, for `take` to multiply. */
  const visit = (point: PointRef, take: Take) => {
    fillInverse(bands, point.energyEv, point.energyOffset, denominator, inverse, 0);
    for (const field of fields) {
      const { data, offset } = point.velocity[field] as MatrixRef;
      packHermitian(bands, bands, data, offset, elements, 0);
      weighPairs(count, elements, 0, inverse, 0, weights, field * 2 * count);
    }
    for (const { moment, flow, members } of groups) {
      const v = point.velocity[flow] as MatrixRef;
      if (moment < 0) packHermitian(bands, bands, v.data, v.offset, elements, 0);
      else formCurrent(point.moments[moment], v, elements);
      for (let i = 0; i < members.length; i += 2) take(members[i + 1], members[i] * 2 * count);
    }
  };
  const run = (point: PointRef, out: Float64Array) => {
    out.fill(0, 0, products.length * bands);
    visit(point, (product, at) => addPairs(bands, elements, 0, weights, at, out, product * bands));
  };
  const pairs = (point: PointRef, out: Float64Array) =>
    visit(point, (product, at) => writePairs(count, elements, 0, weights, at, out, product * count));
  return { run, pairs, slopes };
}
