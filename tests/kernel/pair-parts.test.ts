// pair-parts.test.ts: do the parts that pairs of bands have in a curvature sum to it, for stored points and for local models?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { createLocalModel } from "../../src/kernel/local.js";
import { createPairPass } from "../../src/kernel/pair.js";
import { pairCount } from "../../src/kernel/pairs.js";
import { createRandom, distance, largestOf } from "./hermitian.js";
import { allProducts } from "./points.js";
import { pointAt, randomPolynomial } from "./polynomial.js";

const products = allProducts(2, "with charge");
const denominators = [
  { degenerateEv: 1e-5, broadenEv: 0 },
  { degenerateEv: 0, broadenEv: 0.3 },
];

/** Row sums less column sums of antisymmetric parts: what every band gets. */
function summed(bands: number, parts: Float64Array): Float64Array {
  const out = new Float64Array(products.length * bands);
  for (let p = 0, at = 0; p < products.length; p++)
    for (let n = 0; n < bands; n++)
      for (let m = n + 1; m < bands; m++, at++) {
        out[p * bands + n] += parts[at];
        out[p * bands + m] -= parts[at];
      }
  return out;
}

const anyCase = [fc.integer({ min: 2, max: 9 }), fc.integer({ min: 1, max: 1e6 })] as const;

describe("parts of pairs", () => {
  it("of a stored point sum to its curvature (invariant; fast-check)", () => {
    fc.assert(
      fc.property(...anyCase, (bands, seed) => {
        const point = pointAt(randomPolynomial(bands, "none", 2, createRandom(seed)), [0.1, 0.2, 0.3]);
        const pass = createPairPass(bands, products, denominators[0]);
        const [whole, parts] = [bands, pairCount(bands)].map((size) => new Float64Array(products.length * size));
        pass.run(point, whole);
        pass.pairs(point, parts);
        expect(distance(summed(bands, parts), whole)).toBeLessThanOrEqual(1e-12 * largestOf(parts));
      }),
      { numRuns: 40, seed: 1 },
    );
  });

  it("of a local model sum to its curvature with each denominator (invariant; fast-check)", () => {
    fc.assert(
      fc.property(...anyCase, fc.constantFrom("none", "free-electron", "array"), (bands, seed, hessian) => {
        const point = pointAt(randomPolynomial(bands, hessian, 2, createRandom(seed)), [0.1, 0.2, 0.3]);
        const model = createLocalModel({ bands, hessian, products, denominators, directions: [0, 1, 2] });
        model.load(point);
        const whole = new Float64Array(denominators.length * products.length * bands);
        model.evaluate(0.03, -0.02, 0.05, whole);
        const parts = new Float64Array(products.length * pairCount(bands));
        for (const d of denominators.keys()) {
          model.pairCurvatures(d, parts);
          const own = whole.subarray(d * products.length * bands, (d + 1) * products.length * bands);
          expect(distance(summed(bands, parts), own)).toBeLessThanOrEqual(1e-12 * largestOf(parts));
        }
      }),
      { numRuns: 40, seed: 2 },
    );
  });
});
