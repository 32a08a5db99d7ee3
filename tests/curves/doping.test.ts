// doping.test.ts: is mu(T) at fixed doping that of closed forms, in a metal, in a gap, and for few carriers?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { carriersOf, dopingAt, dopingCurve, levelAt, neutralElectrons, responseAt } from "../../src/curves/doping.js";
import { ascending, ascendingSlopes } from "../../src/curves/interpolate.js";
import type { CurvesResult } from "../../src/curves/result.js";

const kB = 8.617333262e-5;

/** A result with these electrons (neutral: `neutral`) at levels and temperatures; states by differences of the closed form. */
function curvesOf(
  electrons: (levelEv: number, temperatureK: number) => number,
  options: { from: number; to: number; points: number; temperaturesK: number[]; neutral: number },
): CurvesResult {
  const { from, to, points, temperaturesK, neutral } = options;
  const level_eV = Array.from({ length: points }, (_, i) => from + ((to - from) * i) / (points - 1));
  const table = (f: (e: number, t: number) => number): number[][] =>
    temperaturesK.map((t) => level_eV.map((e) => f(e, t)));
  const h = 1e-5;
  return {
    format: "tidegauge.curves/1",
    version: "0",
    grid: { title: "", sha256: "", bands: 1, divisions: [1, 1, 1], periodic: 3, points: 1 },
    job: {},
    reference_eV: 0,
    level_eV,
    temperature_K: temperaturesK,
    electrons_per_cell: table(electrons),
    doping_per_cell: table((e, t) => electrons(e, t) - neutral),
    doping_density: table((e, t) => 1e22 * (electrons(e, t) - neutral)),
    doping_density_unit: "per_cm3",
    states_per_eV: table((e, t) => (electrons(e + h, t) - electrons(e - h, t)) / (2 * h)),
    responses: [],
    sampling: { method: "refine", stored: 1, samples: 1, deepest: 0 },
    notes: [],
  };
}

/** Two flat bands of states, one up to -g/2 and one from g/2 on, each of `density` states per eV: electrons in closed form. */
const gapped =
  (gapEv: number, density: number) =>
  (mu: number, temperatureK: number): number => {
    const scale = temperatureK * kB;
    const soft = (x: number): number =>
      scale === 0 ? Math.max(0, x) : scale * Math.log1p(Math.exp(-Math.abs(x) / scale)) + Math.max(0, x);
    // Lower band: full minus holes; upper band: electrons.
    return density * (soft(mu - gapEv / 2) - soft(-gapEv / 2 - mu));
  };

describe("a metal of constant density of states", () => {
  const curves = curvesOf((mu) => 5 + 1.3 * mu, { from: -1, to: 1, points: 41, temperaturesK: [0, 300], neutral: 5 });

  it("keeps its level at every temperature: doping over density", () => {
    for (const t of [0, 1])
      for (const doping of [-1.2, -0.3, 0, 0.65, 1.3])
        expect(levelAt(dopingCurve(curves, t), doping)).toBeCloseTo(doping / 1.3, 9);
    expect(neutralElectrons(curves)).toBeCloseTo(5, 12);
    expect(carriersOf(curves)).toEqual({ few: false, neutralEv: [0, 0] });
  });

  it("has no level for what the window does not hold", () => {
    expect(levelAt(dopingCurve(curves, 0), -1.31)).toBeUndefined();
    expect(levelAt(dopingCurve(curves, 1), 1.31)).toBeUndefined();
  });
});

describe("a gap of 0.4 eV between flat bands", () => {
  const electrons = gapped(0.4, 2);
  const options = { from: -0.5, to: 0.5, points: 101, temperaturesK: [0, 77, 300, 500], neutral: 0 };
  const curves = curvesOf(electrons, options);

  it("has its neutral level in the middle and counts as few carriers, from edge to edge", () => {
    for (const t of [0, 1, 2, 3]) expect(levelAt(dopingCurve(curves, t), 0)).toBeCloseTo(0, 6);
    const { few, neutralEv } = carriersOf(curves);
    expect(few).toBe(true);
    expect(neutralEv[0]).toBeCloseTo(-0.2, 6);
    expect(neutralEv[1]).toBeCloseTo(0.2, 6);
  });

  it("moves its level with the temperature as the closed form does, over decades of holes", () => {
    for (const [t, temperatureK] of [
      [1, 77],
      [2, 300],
      [3, 500],
    ] as const) {
      const scale = temperatureK * kB;
      // A cubic with exact slopes errs by (h / kT)^4 / 384 of an exponential, that is kT times as much in the level; levels every 10 meV.
      const worst = 1.5 * scale * ((0.01 / scale) ** 4 / 384);
      for (const holes of [1e-1, 1e-2, 1e-3, 1e-4, 1e-5, 1e-6]) {
        let [low, high] = [-1, 0];
        for (let step = 0; step < 60; step++) {
          const middle = (low + high) / 2;
          if (electrons(middle, temperatureK) < -holes) low = middle;
          else high = middle;
        }
        const level = levelAt(dopingCurve(curves, t), -holes) as number;
        expect(Math.abs(level - high)).toBeLessThan(worst);
      }
    }
  });

  it("inverts itself: the doping of the level of a doping", () => {
    const doping = fc.double({ min: -0.55, max: 0.55, noNaN: true });
    fc.assert(
      fc.property(doping, fc.constantFrom(1, 2, 3), (perCell, t) => {
        const curve = dopingCurve(curves, t);
        expect(Math.abs(dopingAt(curve, levelAt(curve, perCell) as number) - perCell)).toBeLessThan(1e-9);
      }),
    );
  });
});

describe("between samples", () => {
  it("a smooth response is met to the fourth digit of its range", () => {
    const levels = Array.from({ length: 101 }, (_, i) => -1 + i / 50);
    const value = levels.map((e) => Math.sin(4 * e));
    const error = levels.map((e) => 0.1 + 0.01 * e);
    for (const e of [-0.777, -0.111, 0.005, 0.4999]) {
      const read = responseAt(levels, value, error, e);
      expect(Math.abs(read.value - Math.sin(4 * e))).toBeLessThan(1e-4);
      expect(read.error).toBeCloseTo(0.1 + 0.01 * e, 9);
    }
  });

  it("the ascending curve nearest to any numbers ascends, keeps their sum, and leaves ascending ones alone", () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 1, maxLength: 50 }), (numbers) => {
        const pooled = ascending(numbers);
        expect(pooled.every((value, i) => i === 0 || value >= pooled[i - 1])).toBe(true);
        const sum = (list: number[]): number => list.reduce((total, value) => total + value, 0);
        expect(sum(pooled)).toBeCloseTo(sum(numbers), 9);
        const sorted = [...numbers].sort((a, b) => a - b);
        expect(ascending(sorted)).toEqual(sorted);
        const x = numbers.map((_, i) => i);
        expect(
          ascendingSlopes(
            { x, y: pooled },
            x.map(() => -5),
          ).every((slope) => slope === 0),
        ).toBe(true);
      }),
    );
  });
});
