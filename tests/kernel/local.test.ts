// local.test.ts: does the local k.p model follow a Hamiltonian of second order exactly, in every basis and dimension?

import { describe, expect, it } from "vitest";
import type { HessianKind } from "../../src/grid/grid.js";
import type { PointRef, Product } from "../../src/kernel/kernel.js";
import { createLocalModel } from "../../src/kernel/local.js";
import { createPairPass } from "../../src/kernel/pair.js";
import {
  adjoint,
  combine,
  createRandom,
  diagonalMatrix,
  distance,
  largestOf,
  multiply,
  randomUnitary,
  rotate,
} from "./hermitian.js";
import { allProducts, literalCurvature, mapMatrices, matrixOf, randomPoint } from "./points.js";
import { hamiltonianAt, pointAt, randomPolynomial } from "./polynomial.js";

const kinds: readonly HessianKind[] = ["none", "free-electron", "array"];
const denominators = [
  { degenerateEv: 1e-5, broadenEv: 0 },
  { degenerateEv: 1e-5, broadenEv: 0.3 },
];
const one: readonly Product[] = [
  { moment: -1, flow: 0, field: 1 },
  { moment: 0, flow: 0, field: 1 },
  { moment: 1, flow: 0, field: 1 },
];

function modelOf(point: PointRef, hessian: HessianKind, products: readonly Product[], directions = [0, 1, 2]) {
  const model = createLocalModel({ bands: point.bands, hessian, products, denominators, directions });
  model.load(point);
  const curvature = new Float64Array(2 * products.length * point.bands);
  return { ...model, curvature, go: (q: readonly number[]) => model.evaluate(q[0], q[1], q[2], curvature) };
}

/** Largest error relative to the largest value. */
const relative = (found: Float64Array, expected: Float64Array) => distance(found, expected) / largestOf(expected);

function literalAll(point: PointRef, products: readonly Product[]): Float64Array {
  return Float64Array.from(
    denominators.flatMap((d) => products.flatMap((p) => Array.from(literalCurvature(point, p, d)))),
  );
}

function slopesOf(point: PointRef, products: readonly Product[]): Float64Array {
  const out = new Float64Array(3 * point.bands);
  createPairPass(point.bands, products, denominators[0]).slopes(point, out);
  return out;
}

describe("a Hamiltonian of second order", () => {
  for (const kind of kinds) {
    it(`is followed exactly from k0 to k0 + q ("${kind}")`, () => {
      for (const n of [1, 2, 5, 8, 13]) {
        const random = createRandom(n);
        const polynomial = randomPolynomial(n, kind, 2, random);
        const k = [0.2, -0.1, 0.3];
        const q = [0.07, 0.11, -0.05];
        const there = pointAt(polynomial, [k[0] + q[0], k[1] + q[1], k[2] + q[2]]);
        for (const products of [one, allProducts(2, "with charge"), one.slice(0, 1), one.slice(1, 2), []]) {
          const model = modelOf(pointAt(polynomial, k), kind, products);
          model.go(q);
          expect(distance(model.energyEv, there.energyEv)).toBeLessThan(1e-12);
          expect(distance(model.slopes, slopesOf(there, products))).toBeLessThan(1e-12);
          if (products.length === 0 || n === 1) continue;
          expect(relative(model.curvature, literalAll(there, products))).toBeLessThan(1e-10);
        }
      }
    });

    it(`in a layer: only x and y are read ("${kind}")`, () => {
      const polynomial = randomPolynomial(6, kind, 2, createRandom(31));
      const there = pointAt(polynomial, [0.05, 0.02, 0.4]);
      const point = pointAt(polynomial, [0, 0, 0.4]);
      const hessian = point.hessian?.map((ref, i) =>
        i === 2 || i === 3 || i === 4 ? { data: new Float64Array(0), offset: 0 } : ref,
      );
      const layer = { ...point, velocity: [point.velocity[0], point.velocity[1], undefined], hessian };
      const model = modelOf(layer, kind, one, [0, 1]);
      model.go([0.05, 0.02, 0]);
      expect(distance(model.energyEv, there.energyEv)).toBeLessThan(1e-13);
      expect(relative(model.curvature, literalAll(there, one))).toBeLessThan(1e-11);
      const slopes = slopesOf({ ...there, velocity: [there.velocity[0], there.velocity[1], undefined] }, one);
      expect(distance(model.slopes, slopes)).toBeLessThan(1e-13);
    });

    it(`has slopes that are the derivatives of its energies ("${kind}")`, () => {
      const n = 7;
      const model = modelOf(pointAt(randomPolynomial(n, kind, 2, createRandom(12)), [0.1, 0.2, -0.3]), kind, one);
      const q = [0.05, -0.08, 0.02];
      const h = 1e-4;
      for (let a = 0; a < 3; a++) {
        const at = (steps: number) => {
          model.go(q.map((x, b) => x + (a === b ? steps * h : 0)));
          return model.energyEv.slice();
        };
        // Fourth-order difference (Abramowitz and Stegun 25.3.6).
        const found = combine(
          [1 / 12, -2 / 3, 2 / 3, -1 / 12].map((x) => x / h),
          [-2, -1, 1, 2].map(at),
        );
        model.go(q);
        for (let band = 0; band < n; band++)
          expect(Math.abs(model.slopes[3 * band + a] - found[band])).toBeLessThan(1e-8);
      }
    });
  }

  it("keeps its states: U of the model turns the stored H(k0 + q) diagonal, and v is the derivative of H", () => {
    const n = 6;
    const polynomial = randomPolynomial(n, "array", 2, createRandom(13));
    const point = pointAt(polynomial, [0.1, 0, 0]);
    const model = modelOf(point, "array", one);
    const q = [0.1, 0.2, 0.3];
    model.go(q);
    const inBands = combine(
      [1, ...q, 0.005, 0.02, 0.045, 0.06, 0.03, 0.02],
      [
        diagonalMatrix(Array.from(point.energyEv)),
        ...point.velocity.map((ref) => matrixOf(n, ref as NonNullable<typeof ref>)),
        ...(point.hessian ?? []).map((ref) => matrixOf(n, ref)),
      ],
    );
    // Row i of `vectors` is the state: diag = conj(vectors) H vectors^T.
    const rows = model.vectors.map((x, i) => (i % 2 === 1 ? -x : x));
    const turned = multiply(n, rows, multiply(n, inBands, adjoint(n, rows)));
    expect(distance(turned, diagonalMatrix(Array.from(model.energyEv)))).toBeLessThan(1e-13);
    const h = 1e-3;
    const difference = combine(
      [0.5 / h, -0.5 / h],
      [h, -h].map((x) => hamiltonianAt(polynomial, [0.1 + x, 0, 0])),
    );
    const energies = new Float64Array(n).map((_, i) => point.velocity[0]?.data[4 + 2 * (i * n + i)] as number);
    const trace = (a: Float64Array) => Array.from({ length: n }, (_, i) => a[2 * (i * n + i)]).reduce((s, x) => s + x);
    expect(energies.reduce((s, x) => s + x)).toBeCloseTo(trace(difference), 10);
  });
});

describe("q = 0", () => {
  it("gives back the stored point, also with coinciding levels", () => {
    const products = allProducts(2, "with charge");
    for (const levels of [
      [-1, 0, 0.3, 1, 2.2],
      [0, 0, 1, 1, 1, 2],
    ]) {
      const point = randomPoint(levels, 2, createRandom(levels.length));
      const model = modelOf(point, "none", products);
      model.go([0, 0, 0]);
      const n = point.bands;
      const expected = new Float64Array(products.length * n);
      for (const [d, denominator] of denominators.entries()) {
        createPairPass(n, products, denominator).run(point, expected);
        const part = model.curvature.subarray(d * products.length * n, (d + 1) * products.length * n);
        expect(relative(part, expected)).toBeLessThan(1e-14);
      }
      expect(Array.from(model.energyEv)).toEqual(levels);
      expect(distance(model.slopes, slopesOf(point, products))).toBeLessThan(1e-14);
    }
  });
});

describe("choice of basis", () => {
  it("changes nothing: phases, and unitary mixing inside coinciding levels", () => {
    const sets = [0, 0, 1, 2, 2, 2, 3.5];
    const n = sets.length;
    const random = createRandom(41);
    const polynomial = randomPolynomial(n, "array", 2, random, diagonalMatrix(sets));
    const point = pointAt(polynomial, [0, 0, 0]);
    const mix = new Float64Array(2 * n * n);
    for (const [start, end] of [
      [0, 2],
      [2, 3],
      [3, 6],
      [6, 7],
    ]) {
      const block = randomUnitary(end - start, random);
      for (let i = start; i < end; i++) {
        const from = 2 * (i - start) * (end - start);
        mix.set(block.subarray(from, from + 2 * (end - start)), 2 * (i * n + start));
      }
    }
    const products = allProducts(2, "with charge");
    const [first, second] = [point, mapMatrices(point, (a) => rotate(n, a, mix))].map((p) => {
      const model = modelOf(p, "array", products);
      model.go([0.2, -0.15, 0.1]);
      return model;
    });
    expect(distance(first.energyEv, second.energyEv)).toBeLessThan(1e-14 * 10);
    expect(distance(first.slopes, second.slopes)).toBeLessThan(1e-12);
    expect(relative(first.curvature, second.curvature)).toBeLessThan(1e-11);
  });
});

describe("a cubic Hamiltonian", () => {
  it("is missed by an energy of third order in q", () => {
    const n = 5;
    const random = createRandom(51);
    const base = randomPolynomial(n, "array", 2, random, diagonalMatrix([0, 2, 4, 6, 8]));
    const cubic = randomPolynomial(n, "none", 0, random).constant;
    const point = pointAt(base, [0, 0, 0]);
    const model = modelOf(point, "array", one);
    const errorAt = (s: number) => {
      const extended = { ...base, constant: combine([1, s ** 3], [base.constant, cubic]) };
      model.go([s, 0, 0]);
      return distance(model.energyEv, pointAt(extended, [s, 0, 0]).energyEv);
    };
    expect(Math.log2(errorAt(0.04) / errorAt(0.02))).toBeCloseTo(3, 0);
  });
});
