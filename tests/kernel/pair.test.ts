// pair.test.ts: is the fused pair pass the curvature of its definition, whatever the basis and the number of bands?

import { describe, expect, it } from "vitest";
import type { PointRef, Product } from "../../src/kernel/kernel.js";
import { createPairPass } from "../../src/kernel/pair.js";
import { createRandom, diagonalMatrix, distance, largestOf, randomUnitary, rotate } from "./hermitian.js";
import { allProducts, literalCurvature, mapMatrices, randomPoint, referTo } from "./points.js";

const plain = { degenerateEv: 1e-6, broadenEv: 0 };

function curvatures(point: PointRef, products: readonly Product[], denominator = plain): Float64Array {
  const out = new Float64Array(products.length * point.bands).fill(Number.NaN);
  createPairPass(point.bands, products, denominator).run(point, out);
  return out;
}

const spread = (n: number, random: () => number) => Array.from({ length: n }, (_, i) => i + 0.4 * random());

describe("curvature", () => {
  it("is -2 Im sum <n|j|m><m|v|n> / dE^2, j = (O v + v O) / 2, for 1 to 19 bands and every product", () => {
    const products = allProducts(2, "with charge");
    for (let n = 1; n <= 19; n++) {
      const random = createRandom(n);
      const point = randomPoint(spread(n, random), 2, random);
      const out = curvatures(point, products);
      for (const [index, product] of products.entries()) {
        const expected = literalCurvature(point, product, plain);
        expect(distance(out.subarray(index * n, index * n + n), expected)).toBeLessThan(1e-12);
      }
    }
  });

  it("has the broadened denominator and skips close pairs, coinciding ones also without a tolerance", () => {
    const point = randomPoint([-1, -0.9995, 0, 0, 0.2, 1, 1.1], 1, createRandom(2));
    const products = allProducts(1, "with charge");
    for (const denominator of [
      { degenerateEv: 0.01, broadenEv: 0 },
      { degenerateEv: 0.01, broadenEv: 0.3 },
      { degenerateEv: 0, broadenEv: 0.3 },
    ]) {
      const out = curvatures(point, products, denominator);
      for (const [index, product] of products.entries()) {
        const expected = literalCurvature(point, product, denominator);
        expect(distance(out.subarray(index * 7, index * 7 + 7), expected)).toBeLessThan(1e-11);
      }
    }
    expect(curvatures(point, products, { degenerateEv: 0, broadenEv: 0 }).every(Number.isFinite)).toBe(true);
  });

  it("of a massive Dirac fermion is -+ m v^2 / 2 (m^2 + v^2 k^2)^(3/2) in the upper and lower band", () => {
    // H = v (kx sx + ky sy) + m sz. With Omega = -2 Im <n|dx|m><m|dy|n>/dE^2 the lower band has + m v^2 / 2 e^3
    // (Xiao, Chang and Niu, Rev. Mod. Phys. 82, 1959 (2010), eq. 1.19, up to their sign of Omega).
    const [v, m, kx] = [1.3, 0.4, 0.9];
    const e = Math.hypot(m, v * kx);
    // Eigenvectors at ky = 0: real rotation by theta/2 about y, tan theta = v kx / m.
    const half = Math.atan2(v * kx, m) / 2;
    const [c, s] = [Math.cos(half), Math.sin(half)];
    const vectors = new Float64Array([-s, 0, c, 0, c, 0, s, 0]);
    const sx = rotate(2, new Float64Array([0, 0, v, 0, v, 0, 0, 0]), vectors);
    const sy = rotate(2, new Float64Array([0, 0, 0, -v, 0, v, 0, 0]), vectors);
    const point: PointRef = {
      bands: 2,
      energyEv: new Float64Array([-e, e]),
      energyOffset: 0,
      velocity: [referTo(sx), referTo(sy), undefined],
      moments: [],
      hessian: undefined,
    };
    const out = curvatures(point, [{ moment: -1, flow: 0, field: 1 }]);
    const expected = (m * v * v) / (2 * e ** 3);
    expect(out[0]).toBeCloseTo(expected, 13);
    expect(out[1]).toBeCloseTo(-expected, 13);
  });

  it("of a conserved moment s sums to zero over all bands and is s times the charge's within its own bands", () => {
    // O = +-1/2 on two decoupled sets: the definition gives O times the charge curvature of each set.
    const n = 8;
    const random = createRandom(11);
    const sign = (i: number) => (i % 2 === 0 ? 0.5 : -0.5);
    const decouple = (a: Float64Array) =>
      a.map((x, at) => (Math.floor(at / 2 / n) % 2 === Math.floor(at / 2) % 2 ? x : 0));
    const base = mapMatrices(randomPoint(spread(n, random), 0, random), decouple);
    const spin = referTo(diagonalMatrix(Array.from({ length: n }, (_, i) => sign(i))));
    const point = { ...base, moments: [spin] };
    const out = curvatures(point, [
      { moment: -1, flow: 0, field: 1 },
      { moment: 0, flow: 0, field: 1 },
    ]);
    for (let band = 0; band < n; band++) expect(out[n + band]).toBeCloseTo(sign(band) * out[band], 13);
    expect(Math.abs(out.subarray(n).reduce((sum, x) => sum + x, 0))).toBeLessThan(1e-13);
  });
});

describe("invariance", () => {
  it("sums to zero over all bands, for every product", () => {
    const point = randomPoint(spread(18, createRandom(1)), 2, createRandom(21));
    const products = allProducts(2, "with charge");
    const out = curvatures(point, products);
    for (let index = 0; index < products.length; index++) {
      const part = out.subarray(18 * index, 18 * index + 18);
      expect(Math.abs(part.reduce((sum, x) => sum + x, 0))).toBeLessThan(1e-12 * Math.max(1, largestOf(part)));
    }
  });

  it("does not depend on phases, nor on the basis inside degenerate sets (summed over each set)", () => {
    const sets = [0, 0, 1, 2, 2, 2, 3.5, 4, 4];
    const n = sets.length;
    const random = createRandom(4);
    const point = randomPoint(sets, 2, random);
    const mix = new Float64Array(2 * n * n);
    for (let start = 0; start < n; ) {
      let end = start;
      while (end < n && sets[end] === sets[start]) end++;
      const block = randomUnitary(end - start, random);
      for (let i = start; i < end; i++) {
        const from = 2 * (i - start) * (end - start);
        mix.set(block.subarray(from, from + 2 * (end - start)), 2 * (i * n + start));
      }
      start = end;
    }
    const mixed = mapMatrices(point, (a) => rotate(n, a, mix));
    const products = allProducts(2, "with charge");
    const sums = (p: PointRef) => {
      const out = curvatures(p, products);
      const levels = [...new Set(sets)];
      return Float64Array.from(
        products.flatMap((_, k) =>
          levels.map((level) => sets.reduce((sum, e, band) => sum + (e === level ? out[k * n + band] : 0), 0)),
        ),
      );
    };
    expect(distance(sums(point), sums(mixed))).toBeLessThan(1e-12);
  });

  it("takes slopes from the diagonals and leaves a missing direction at zero", () => {
    const point = randomPoint([0, 1, 2], 0, createRandom(5));
    const flat = { ...point, velocity: [point.velocity[0], point.velocity[1], undefined] };
    const out = new Float64Array(9).fill(Number.NaN);
    createPairPass(3, [], plain).slopes(flat, out);
    for (let band = 0; band < 3; band++) {
      const at = 6 + 2 * (band * 3 + band);
      expect(out[3 * band]).toBe(point.velocity[0]?.data[at]);
      expect(out[3 * band + 1]).toBe(point.velocity[1]?.data[at]);
      expect(out[3 * band + 2]).toBe(0);
    }
  });
});
