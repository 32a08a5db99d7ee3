// sets.test.ts: is v_a v_a of a set of bands the trace of its block, at stored points and in local models, in whatever basis?
import { describe, expect, it } from "vitest";
import type { HessianKind } from "../../src/grid/grid.js";
import type { PointRef, Product } from "../../src/kernel/kernel.js";
import { createLocalModel } from "../../src/kernel/local.js";
import { averageOverSets, storedSquares } from "../../src/kernel/sets.js";
import { createRandom, distance, randomUnitary, rotate } from "./hermitian.js";
import { mapMatrices, matrixOf, randomPoint } from "./points.js";
import { pointAt, randomPolynomial } from "./polynomial.js";

/** Literally: trace of |P v P|^2 over the set that holds the band, over its size. */
function literal(point: PointRef, set: (band: number) => readonly number[]): Float64Array {
  const n = point.bands;
  const out = new Float64Array(3 * n);
  for (let a = 0; a < 3; a++) {
    const v = matrixOf(n, point.velocity[a] as NonNullable<(typeof point.velocity)[0]>);
    for (let band = 0; band < n; band++)
      for (const i of set(band))
        for (const j of set(band)) {
          const at = 2 * (i * n + j);
          out[3 * band + a] += (v[at] ** 2 + v[at + 1] ** 2) / set(band).length;
        }
  }
  return out;
}

const storedOf = (point: PointRef): Float64Array => {
  const out = new Float64Array(3 * point.bands);
  storedSquares(point, 1e-5, out);
  return out;
};

const energies = [-2, -1, -1 + 1e-9, 0.5, 0.5, 0.5 + 4e-6, 2];
const sets = [[0], [1, 2], [1, 2], [3, 4, 5], [3, 4, 5], [3, 4, 5], [6]];

describe("squares of velocities", () => {
  it("at a stored point are traces over sets, which a turn of the basis inside a set leaves alone", () => {
    const random = createRandom(3);
    const point = randomPoint(energies, 0, random);
    const found = storedOf(point);
    expect(
      distance(
        found,
        literal(point, (band) => sets[band]),
      ),
    ).toBeLessThan(1e-13);
    const turn = new Float64Array(2 * 49);
    for (const set of [[0], [1, 2], [3, 4, 5], [6]]) {
      const small = randomUnitary(set.length, random);
      for (const [i, n] of set.entries())
        for (const [j, m] of set.entries())
          for (const part of [0, 1]) turn[2 * (n * 7 + m) + part] = small[2 * (i * set.length + j) + part];
    }
    expect(distance(found, storedOf(mapMatrices(point, (a) => rotate(7, a, turn))))).toBeLessThan(1e-12);
  });

  it("are zero for a velocity that was not read", () => {
    const point = randomPoint(energies, 0, createRandom(4));
    const found = storedOf({ ...point, velocity: [point.velocity[0], undefined, undefined] });
    for (const [i, value] of found.entries()) expect(value > 0).toBe(i % 3 === 0);
  });

  const none: Product[] = [];
  const one: Product[] = [{ moment: -1, flow: 0, field: 1 }];
  const all: Product[] = [...one, { moment: 0, flow: 2, field: 0 }];
  for (const kind of ["none", "free-electron", "array"] as readonly HessianKind[])
    it(`of a local model are those of the Hamiltonian there, whichever velocities travel as triangles ("${kind}")`, () => {
      for (const products of [none, one, all]) {
        const polynomial = randomPolynomial(6, kind, 1, createRandom(7));
        const [k, q] = [
          [0.2, -0.1, 0.3],
          [0.07, 0.11, -0.05],
        ];
        const there = pointAt(polynomial, [k[0] + q[0], k[1] + q[1], k[2] + q[2]]);
        // Sets as wide as 1.5 eV: the three lowest bands of this Hamiltonian are one there, as the expectation reads off.
        for (const togetherEv of [0, 1.5]) {
          const model = createLocalModel({
            bands: 6,
            hessian: kind,
            products,
            denominators: [{ degenerateEv: 0, broadenEv: 0.3 }],
            directions: [0, 1, 2],
            togetherEv,
          });
          model.load(pointAt(polynomial, k));
          model.evaluate(q[0], q[1], q[2], new Float64Array(6 * products.length));
          const expected = new Float64Array(18);
          storedSquares(there, togetherEv, expected);
          expect(distance(model.squares, expected)).toBeLessThan(1e-11);
          if (togetherEv === 0)
            for (const [i, square] of model.squares.entries())
              expect(Math.abs(square - model.slopes[i] ** 2)).toBeLessThan(1e-12);
        }
      }
    });

  it("means over sets leave lone bands alone", () => {
    const values = Float64Array.from({ length: 21 }, (_, i) => i);
    averageOverSets(Float64Array.from(energies), values, 1e-5);
    expect([...values]).toEqual([
      0, 1, 2, 4.5, 5.5, 6.5, 4.5, 5.5, 6.5, 12, 13, 14, 12, 13, 14, 12, 13, 14, 18, 19, 20,
    ]);
  });
});
