// models.test.ts: are H, dH/dk, d2H/dk2 and the moments of every sample Hermitian, consistent, symmetric and periodic as they must be?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import { hessianPairs } from "../../src/grid/grid.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { adjointOf, identity, kroneckerOf, pauli, productOf, scaled, sumOf } from "../../src/samples/matrix.js";
import type { ComplexMatrix, SampleModel } from "../../src/samples/model.js";
import { curvature, jacobiEigen, reciprocal } from "./naive.js";

type Case = readonly [name: string, parameters: Readonly<Record<string, string>>];

const cases: readonly Case[] = [
  ["dirac", {}],
  ["haldane", { phi: "0.7" }],
  ["kane-mele", {}],
  ["rashba", { alpha: "0.7", mass: "1.3" }],
  ["luttinger", { exx: "-0.01", eyy: "-0.007", ezz: "0.0092711" }],
  ["sp-square", {}],
  ["sp-square", { spin: "explicit" }],
  ["random", {}],
  ["random", { periodic: "2", range: "2", bands: "4", symmetry: "time-reversal" }],
  ["random", { symmetry: "inversion", bands: "4" }],
  ["random", { symmetry: "both", bands: "4" }],
];
const lattice = cases.filter(([name]) => !["dirac", "rashba", "luttinger"].includes(name));

/** Fractional coordinates inside the first cell around the origin, clear of the box faces where continuum models jump. */
const fraction = fc.double({ min: -0.45, max: 0.45, noNaN: true });
const fractions = fc.tuple(fraction, fraction, fraction);

function cartesian(model: SampleModel, f: readonly number[]): Triple {
  const b = reciprocal(model.vectorsA);
  const last = model.periodic === 3 ? f[2] : 0;
  return [0, 1, 2].map((x) => f[0] * b[0][x] + f[1] * b[1][x] + last * b[2][x]) as unknown as Triple;
}

const moved = (k: Triple, axis: number, step: number): Triple =>
  k.map((x, i) => (i === axis ? x + step : x)) as unknown as Triple;
const reversed = (k: Triple): Triple => [-k[0], -k[1], -k[2]];

const largest = (m: ArrayLike<number>): number => Array.from(m).reduce((a, b) => Math.max(a, Math.abs(b)), 0);
const distance = (a: ComplexMatrix, b: ComplexMatrix): number => largest(sumOf(a, scaled(b, -1)));
const levels = (model: SampleModel, k: Triple): readonly number[] => jacobiEigen(model.at(k).h).values;
const spread = (a: readonly number[], b: readonly number[]): number => largest(a.map((x, i) => x - b[i]));

/** Fourth-order central difference; its error is of the order step^4 times the fifth derivative. */
function differenced(f: (step: number) => ComplexMatrix, step: number): ComplexMatrix {
  const near = sumOf(f(step), scaled(f(-step), -1));
  const far = sumOf(f(2 * step), scaled(f(-2 * step), -1));
  return sumOf(scaled(near, 8 / (12 * step)), scaled(far, -1 / (12 * step)));
}

const forAll = (check: (f: [number, number, number]) => void): void => {
  fc.assert(fc.property(fractions, check), { numRuns: 25, seed: 7 });
};

describe.each(cases)("%s %j", (...sample: Case) => {
  const model = buildSample(...sample);

  it("has Hermitian matrices of the declared size, and finite ones", () => {
    forAll((f) => {
      const at = model.at(cartesian(model, f));
      const moments = [...model.moments.values(), ...(at.moments?.values() ?? [])].flat();
      for (const m of [at.h, ...at.dh, ...(at.d2h ?? []), ...moments]) {
        expect(m).toHaveLength(2 * model.bands ** 2);
        expect(m.every(Number.isFinite)).toBe(true);
        expect(distance(m, adjointOf(m))).toBeLessThan(1e-14 * (1 + largest(m)));
      }
      expect(at.d2h).toHaveLength(6);
    });
  });

  it("has dH/dk and d2H/dk2 equal to finite differences of H and dH/dk", () => {
    forAll((f) => {
      const k = cartesian(model, f);
      const { dh, d2h = [] } = model.at(k);
      // Continuum models are exact at any step; lattice vectors reach some 15 angstrom: (15e-3)^4 times the hops.
      const step = 1e-3;
      for (let a = 0; a < model.periodic; a++) {
        const slope = differenced((s) => model.at(moved(k, a, s)).h, step);
        expect(distance(slope, dh[a])).toBeLessThan(3e-8 * (1 + largest(dh[a])));
        hessianPairs.forEach(([p, q], pair) => {
          if (p !== a) return;
          const bend = differenced((s) => model.at(moved(k, a, s)).dh[q], step);
          expect(distance(bend, d2h[pair])).toBeLessThan(3e-8 * (1 + largest(d2h[pair])));
        });
      }
    });
  });
});

describe.each(lattice)("lattice model %s %j", (...sample: Case) => {
  const model = buildSample(...sample);

  it("is periodic in the reciprocal lattice: levels and curvatures", () => {
    const b = reciprocal(model.vectorsA);
    const response = model.moments.has("orbital")
      ? ({ flow: 0, field: 1, moment: "orbital", g: 2 } as const)
      : ({ flow: 0, field: 1 } as const);
    forAll((f) => {
      const k = cartesian(model, f);
      const there = [0, 1, 2].map((x) => k[x] + 2 * b[0][x] - b[1][x]) as unknown as Triple;
      const here = curvature(model, k, response);
      const shifted = curvature(model, there, response);
      expect(spread(here.energies, shifted.energies)).toBeLessThan(1e-12);
      // Only the sum below a gap is independent of the basis inside a touching or twofold set.
      const below = here.energies.findIndex((e, n) => n > 0 && e - here.energies[n - 1] > 1e-3);
      const total = (omega: readonly number[]): number => omega.slice(0, below).reduce((x, y) => x + y, 0);
      expect(Math.abs(total(here.omega) - total(shifted.omega))).toBeLessThan(1e-9 * (1 + largest(here.omega)));
    });
  });
});

describe("time reversal i sy K", () => {
  const kept: readonly Case[] = [
    ["kane-mele", {}],
    ["rashba", {}],
    ["sp-square", { spin: "explicit" }],
    ["random", { symmetry: "time-reversal" }],
    ["random", { symmetry: "both", bands: "4" }],
  ];

  it.each(kept)("%s %j: sy H(-k)* sy = H(k), moments change sign", (...sample: Case) => {
    const model = buildSample(...sample);
    const turn = kroneckerOf(identity(model.bands / 2), pauli[1]);
    const reverse = (m: ComplexMatrix): ComplexMatrix =>
      productOf(
        productOf(
          turn,
          m.map((x, i) => (i % 2 ? -x : x)),
        ),
        turn,
      );
    forAll((f) => {
      const k = cartesian(model, f);
      const there = model.at(reversed(k));
      expect(distance(reverse(there.h), model.at(k).h)).toBeLessThan(1e-13);
      for (const [name, components] of model.moments) {
        const here = model.at(k).moments?.get(name) ?? components;
        const back = there.moments?.get(name) ?? components;
        here.forEach((m, g) => {
          expect(distance(reverse(back[g]), scaled(m, -1))).toBeLessThan(1e-13);
        });
      }
    });
  });

  it.each(kept)("%s %j: levels in pairs where k = -k", (...sample: Case) => {
    const model = buildSample(...sample);
    for (const f of [
      [0, 0, 0],
      ...(sample[0] === "rashba"
        ? []
        : [
            [0.5, 0, 0],
            [0.5, 0.5, 0],
            [0, 0.5, 0.5],
          ]),
    ]) {
      const e = levels(model, cartesian(model, f));
      for (let n = 0; n < e.length; n += 2) expect(e[n + 1] - e[n]).toBeLessThan(1e-12);
    }
  });

  it.each<Case>([
    ["luttinger", { exx: "-0.01", eyy: "-0.01", ezz: "0.0092711" }],
    ["random", { symmetry: "both", bands: "6" }],
  ])("%s %j: twofold bands everywhere, with inversion", (...sample) => {
    const model = buildSample(...sample);
    forAll((f) => {
      const e = levels(model, cartesian(model, f));
      for (let n = 0; n < e.length; n += 2) expect(e[n + 1] - e[n]).toBeLessThan(1e-12);
    });
  });

  it.each<Case>([
    ["haldane", { phi: "0.7" }],
    ["random", {}],
  ])("%s %j: is broken, E(k) differs from E(-k)", (...sample) => {
    const model = buildSample(...sample);
    const k = cartesian(model, [0.21, 0.13, 0.08]);
    expect(spread(levels(model, k), levels(model, reversed(k)))).toBeGreaterThan(1e-3);
  });
});

describe("inversion", () => {
  it.each<Case>([
    ["dirac", {}],
    ["luttinger", {}],
    ["random", { symmetry: "inversion" }],
  ])("%s %j: E(k) = E(-k)", (...sample) => {
    const model = buildSample(...sample);
    forAll((f) => {
      const k = cartesian(model, f);
      expect(spread(levels(model, k), levels(model, reversed(k)))).toBeLessThan(1e-12);
    });
  });
});

describe("random crystals", () => {
  it("are the same for the same seed and others for another", () => {
    const k: Triple = [0.1, 0.2, 0.3];
    const h = (seed: string): ComplexMatrix => buildSample("random", { seed }).at(k).h;
    expect(h("5")).toEqual(h("5"));
    expect(distance(h("5"), h("6"))).toBeGreaterThan(0.1);
  });

  it("have no charge curvature with both symmetries (pairs summed) but a spin one", () => {
    const model = buildSample("random", { symmetry: "both", bands: "4", periodic: "2" });
    const k = cartesian(model, [0.21, 0.13, 0]);
    const sum = (omega: readonly number[]): number => omega[0] + omega[1];
    expect(Math.abs(sum(curvature(model, k, { flow: 0, field: 1 }).omega))).toBeLessThan(1e-10);
    expect(Math.abs(sum(curvature(model, k, { flow: 0, field: 1, moment: "spin", g: 2 }).omega))).toBeGreaterThan(1e-4);
  });
});
