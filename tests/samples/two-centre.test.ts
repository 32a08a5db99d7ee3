// two-centre.test.ts: does the two-centre metal have the right levels, derivatives and symmetries?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { rydbergEv } from "../../src/base/constants.js";
import { Fault } from "../../src/base/errors.js";
import type { Triple } from "../../src/grid/grid.js";
import { createEigensolver } from "../../src/kernel/eigen.js";
import type { SampleModel } from "../../src/samples/model.js";
import { twoCentreModel } from "../../src/samples/two-centre.js";
import { readTwoCentreFile } from "../../src/samples/two-centre-file.js";
import { biaxialStrain } from "../../src/samples/two-centre-lattice.js";
import { reciprocal } from "./two-centre-sum.js";

const gold = readTwoCentreFile("data/metals/gold.json");
const demo = readTwoCentreFile("data/demo/parameters.json");
const solve = createEigensolver(18);

function levelsEv(model: SampleModel, k: Triple): Float64Array {
  const values = new Float64Array(18);
  solve(model.at(k).h, values, new Float64Array(648));
  return values;
}

const components = fc.tuple(
  fc.double({ min: -2, max: 2, noNaN: true }),
  fc.double({ min: -2, max: 2, noNaN: true }),
  fc.double({ min: -2, max: 2, noNaN: true }),
);

const largest = (a: Float64Array, b: (index: number) => number): number =>
  a.reduce((most, value, at) => Math.max(most, Math.abs(value - b(at))), 0);

const moved = (k: Triple, axis: number, step: number): Triple =>
  k.map((c, i) => (i === axis ? c + step : c)) as unknown as Triple;

const strained = twoCentreModel(gold, { strain: biaxialStrain(0.02, 1.3) });
const models: [string, SampleModel][] = [
  ["gold", twoCentreModel(gold)],
  ["strained gold", strained],
  ["demo", twoCentreModel(demo)],
];

describe("levels", () => {
  // Gold set of the Mehl-Papaconstantopoulos fits, Phys. Rev. B 54, 4519 (1996); values recomputed by brute force in NumPy.
  it("at the zone centre of gold, with spin-orbit coupling", () => {
    const expected = [
      [-0.44424344, 2],
      [-0.11682475, 4],
      [-0.02428855, 2],
      [0.0680525, 4],
      [1.8400445, 6],
    ] as const;
    const found = levelsEv(twoCentreModel(gold), [0, 0, 0]);
    expected
      .flatMap(([level, times]) => Array<number>(times).fill(level))
      .forEach((level, i) => {
        expect(found[i] / rydbergEv).toBeCloseTo(level, 7);
      });
  });

  it("without spin-orbit coupling the d levels at the zone centre are the cubic three- and two-fold ones", () => {
    const found = levelsEv(twoCentreModel(gold, { spinOrbitEv: 0 }), [0, 0, 0]);
    for (let i = 3; i < 8; i++) expect(found[i]).toBeCloseTo(found[2], 10);
    for (let i = 9; i < 12; i++) expect(found[i]).toBeCloseTo(found[8], 10);
    expect(found[8] - found[7]).toBeGreaterThan(1);
  });

  // First-order splitting of a d(t2g) level in cubic symmetry: four-fold at -xi/2, two-fold at +xi (L -> -1 in t2g).
  it("split by -xi/2 and xi in the t2g level for a weak spin-orbit coupling", () => {
    const found = levelsEv(twoCentreModel(gold, { spinOrbitEv: 1e-4 }), [0, 0, 0]);
    expect(found[6] - found[2]).toBeCloseTo(1.5e-4, 7);
  });
});

describe.each(models)("%s", (_, model) => {
  it("has exact first and second derivatives in k (central differences)", () => {
    fc.assert(
      fc.property(components, (k) => {
        const { dh, d2h } = model.at(k);
        const pairs = [
          [0, 0],
          [1, 1],
          [2, 2],
          [1, 2],
          [2, 0],
          [0, 1],
        ];
        const step = 1e-4;
        for (let a = 0; a < 3; a++) {
          const up = model.at(moved(k, a, step));
          const down = model.at(moved(k, a, -step));
          expect(largest(dh[a], (i) => (up.h[i] - down.h[i]) / (2 * step))).toBeLessThan(5e-6);
          pairs.forEach(([p, q], at) => {
            if (p !== a) return;
            const slope = (i: number): number => (up.dh[q][i] - down.dh[q][i]) / (2 * step);
            expect(largest(d2h?.[at] ?? new Float64Array(0), slope)).toBeLessThan(5e-5);
          });
        }
        expect(d2h).toHaveLength(6);
      }),
      { numRuns: 15 },
    );
  });

  it("is Hermitian in every matrix", () => {
    fc.assert(
      fc.property(components, (k) => {
        const { h, dh, d2h } = model.at(k);
        let most = 0;
        for (const matrix of [h, ...dh, ...(d2h ?? []), ...[...model.moments.values()].flat()])
          for (let i = 0; i < 18; i++)
            for (let j = 0; j <= i; j++) {
              const here = 2 * (18 * i + j);
              const there = 2 * (18 * j + i);
              most = Math.max(most, Math.abs(matrix[here] - matrix[there]));
              most = Math.max(most, Math.abs(matrix[here + 1] + matrix[there + 1]));
            }
        expect(most).toBeLessThan(1e-10);
      }),
      { numRuns: 5 },
    );
  });

  it("has Kramers pairs at every k", () => {
    fc.assert(
      fc.property(components, (k) => {
        const levels = levelsEv(model, k);
        for (let i = 0; i < 18; i += 2) expect(levels[i + 1] - levels[i]).toBeLessThan(1e-9);
      }),
      { numRuns: 30 },
    );
  });

  it("repeats with every reciprocal vector, matrices included", () => {
    const [b1, b2, b3] = reciprocal(model.vectorsA);
    fc.assert(
      fc.property(
        components,
        fc.array(fc.integer({ min: -2, max: 2 }), { minLength: 3, maxLength: 3 }),
        (k, [i, j, l]) => {
          const other = k.map((c, axis) => c + i * b1[axis] + j * b2[axis] + l * b3[axis]) as unknown as Triple;
          const here = model.at(k);
          const there = model.at(other);
          expect(largest(here.h, (at) => there.h[at])).toBeLessThan(1e-9);
          expect(largest(here.dh[1], (at) => there.dh[1][at])).toBeLessThan(1e-8);
          expect(largest(here.d2h?.[5] ?? new Float64Array(1), (at) => there.d2h?.[5][at] ?? 1)).toBeLessThan(1e-7);
        },
      ),
      { numRuns: 15 },
    );
  });
});

it("has the point group of the cube, and under biaxial strain that of the square", () => {
  fc.assert(
    fc.property(components, ([x, y, z]) => {
      const square: Triple[] = [
        [y, x, z],
        [-y, x, z],
        [x, y, -z],
        [-x, -y, -z],
      ];
      const cube: Triple[] = [...square, [y, z, x], [x, z, -y]];
      for (const [model, images] of [
        [models[0][1], cube],
        [models[2][1], cube],
        [strained, square],
      ] as const) {
        const levels = levelsEv(model, [x, y, z]);
        for (const image of images) expect(largest(levelsEv(model, image), (i) => levels[i])).toBeLessThan(1e-9);
      }
    }),
    { numRuns: 10 },
  );
  expect(largest(levelsEv(strained, [0.3, 0.5, 1]), (i) => levelsEv(strained, [0.5, 1, 0.3])[i])).toBeGreaterThan(0.01);
});

it("leaves the second derivatives out on request, with the same first ones", () => {
  const lean = twoCentreModel(gold, { secondDerivatives: false });
  const k: Triple = [0.3, -0.4, 0.9];
  expect(lean.hessian).toBe("none");
  expect(lean.at(k).d2h).toBeUndefined();
  const full = twoCentreModel(gold).at(k);
  expect(largest(lean.at(k).dh[2], (i) => full.dh[2][i])).toBe(0);
  expect(lean.fermiEv).toBeDefined();
});

it("gives the file's reference level only for the file as it stands", () => {
  expect((twoCentreModel(gold).fermiEv ?? 0) / rydbergEv).toBeCloseTo(0.290343, 9);
  for (const overrides of [{ latticeConstantA: 3.924 }, { electrons: 10 }, { spinOrbitEv: 0.55 }, { cOverA: 1.01 }])
    expect(twoCentreModel(gold, overrides).fermiEv).toBeUndefined();
  expect(twoCentreModel(gold, { electrons: 10 }).electrons).toBe(10);
  expect(twoCentreModel(gold, { electrons: 10 }).title).toContain("electrons 10");
});

it("says where the overlap is not positive, and refuses impossible overrides", () => {
  const table = gold.S ?? gold.H;
  const bad = { ...gold, S: { ...table, sss: { ...table.sss, a: -500 } } };
  expect(() => twoCentreModel(bad).at([0, 0, 0.1])).toThrow(
    /S\(k\).*not positive at k = \(0\.0000, 0\.0000, 0\.1000\)/,
  );
  expect(() => twoCentreModel(gold, { electrons: 19 })).toThrow(Fault);
  expect(() => twoCentreModel(gold, { latticeConstantA: -1 })).toThrow(/lattice constant must be a positive/);
  expect(() => twoCentreModel(gold, { latticeConstantA: 40 })).toThrow(/no neighbour within the cutoff/);
  expect(() => twoCentreModel(gold, { latticeConstantA: 0.4 })).toThrow(/thousands of neighbours/);
});
