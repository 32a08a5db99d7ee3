// points.test.ts: does the plain mesh sum keep exact Fermi factors and exact steps, also for pairs that nearly cancel?
import { describe, expect, it } from "vitest";
import { type RandomStream, randomStream } from "../../src/base/random.js";
import { occupiedWeight, steppedWeight } from "../../src/curves/occupation.js";
import { type LevelAxis, planAxis } from "../../src/spectrum/axis.js";
import { createPointDeposit, createPointStore } from "../../src/spectrum/points.js";

const boltzmannEvPerK = 8.617333262e-5; // CODATA 2022

/** The Fermi function as it is defined. */
const fermi = (energyEv: number, levelEv: number, temperatureK: number): number =>
  1 / (1 + Math.exp((energyEv - levelEv) / (boltzmannEvPerK * temperatureK)));

/** Weighted energies, one column. */
type Lines = readonly (readonly [energyEv: number, weight: number])[];

function deposited(axis: LevelAxis, lines: Lines) {
  const store = createPointStore(axis, 1);
  const deposit = createPointDeposit(store);
  for (const [energyEv, weight] of lines) deposit(energyEv, Float64Array.of(weight));
  return store;
}

function warmCurve(axis: LevelAxis, lines: Lines): (levelEv: number, temperatureK: number) => number {
  const { base, nodes } = deposited(axis, lines);
  const sampler = occupiedWeight({ axis: axis.nodes, columns: 1, base, nodes });
  const out = new Float64Array(1);
  return (levelEv, temperatureK) => {
    sampler(levelEv, temperatureK, out);
    return out[0];
  };
}

const coldCurve = (axis: LevelAxis, lines: Lines): number[] => {
  const { base, steps } = deposited(axis, lines);
  return steppedWeight(base, steps, 1).map((row) => row[0]);
};

const between = (random: RandomStream, low: number, high: number): number => low + (high - low) * random.uniform();

function randomLines(random: RandomStream, count: number, low: number, high: number): Lines {
  return Array.from({ length: count }, () => [between(random, low, high), random.normal()] as const);
}

describe("T > 0: exact Fermi factors through anterpolation", () => {
  for (const temperatures of [[10, 300], [300], [77, 1000], [300, 3000], [10]])
    it(`to 1e-11 of the weight at ${temperatures.join(" and ")} K, energies inside and far outside the window`, () => {
      const random = randomStream(temperatures[0]);
      const axis = planAxis({ fromEv: 3.2, toEv: 4.1, points: 61 }, temperatures);
      const lines: Lines = [
        ...randomLines(random, 300, 2.9, 4.4),
        ...randomLines(random, 100, -9, 17),
        ...randomLines(random, 20, -900, 900),
        [axis.levelsEv[7], 1],
        [axis.nodes.startEv, 1],
        [axis.nodes.startEv + axis.nodes.stepEv * (axis.nodes.count - 1), 1],
      ];
      const weight = lines.reduce((sum, [, w]) => sum + Math.abs(w), 0);
      const curve = warmCurve(axis, lines);
      for (const temperature of temperatures) {
        const anywhere = Array.from({ length: 40 }, () => between(random, 3.2, 4.1));
        for (const level of [...axis.levelsEv, ...anywhere]) {
          const exact = lines.reduce((sum, [energy, w]) => sum + w * fermi(energy, level, temperature), 0);
          expect(Math.abs(curve(level, temperature) - exact)).toBeLessThan(1e-11 * weight);
        }
      }
    });

  it("a single line to 1e-12, wherever it lies between two nodes", () => {
    const axis = planAxis({ fromEv: -0.5, toEv: 0.5, points: 11 }, [300]);
    const random = randomStream(4);
    for (let trial = 0; trial < 400; trial++) {
      const [energy, level] = [between(random, -0.6, 0.6), between(random, -0.5, 0.5)];
      const found = warmCurve(axis, [[energy, 1]])(level, 300);
      expect(Math.abs(found - fermi(energy, level, 300))).toBeLessThan(1e-12);
    }
  });

  it("a pair of +-B split by d keeps B (f - f') to 1e-11 of B d / kT and the rounding of B", () => {
    const axis = planAxis({ fromEv: -0.5, toEv: 0.5, points: 11 }, [300]);
    const random = randomStream(5);
    const thermalEv = 300 * boltzmannEvPerK;
    for (const splitEv of [1e-2, 1e-3, 1e-5, 1e-7])
      for (let trial = 0; trial < 60; trial++) {
        const big = 1 / splitEv ** 2;
        const [energy, level] = [between(random, -0.2, 0.2), between(random, -0.2, 0.2)];
        const found = warmCurve(axis, [
          [energy, big],
          [energy + splitEv, -big],
        ])(level, 300);
        // f(x) - f(y) = sinh((y - x) / 2) / (2 cosh(x / 2) cosh(y / 2)), without the cancellation.
        const [x, y] = [(energy - level) / thermalEv, (energy + splitEv - level) / thermalEv];
        // The split that the energies as stored really have.
        const split = (energy + splitEv - energy) / thermalEv;
        const exact = (big * Math.sinh(split / 2)) / (2 * Math.cosh(x / 2) * Math.cosh(y / 2));
        expect(Math.abs(found - exact)).toBeLessThan(big * ((1e-11 * splitEv) / thermalEv + 3e-15));
      }
  });

  it("a full pair deep below the window cancels exactly", () => {
    const axis = planAxis({ fromEv: 0, toEv: 1, points: 11 }, [0, 300]);
    const lines: Lines = [
      [-30, 1e12],
      [-30 + 1e-6, -1e12],
      [50, 1e12],
    ];
    expect(warmCurve(axis, lines)(0.5, 300)).toBe(0);
    expect(coldCurve(axis, lines)).toEqual(new Array(11).fill(0));
  });
});

describe("T = 0: exact steps", () => {
  it("at every level the sum of what lies at or below it", () => {
    for (let trial = 0; trial < 40; trial++) {
      const random = randomStream(trial);
      const points = trial < 5 ? 1 : 2 + random.integer(60);
      const from = between(random, -5, 5);
      const axis = planAxis({ fromEv: from, toEv: points === 1 ? from : from + between(random, 0.01, 4), points }, [0]);
      const lines: Lines = [
        ...randomLines(random, 60, from - 0.5, from + 4),
        ...randomLines(random, 10, -200, 200),
        ...Array.from(axis.levelsEv, (level) => [level, random.normal()] as const),
      ];
      const curve = coldCurve(axis, lines);
      expect(curve).toHaveLength(points);
      for (const [i, level] of axis.levelsEv.entries()) {
        const exact = lines.reduce((sum, [energy, w]) => sum + (energy <= level ? w : 0), 0);
        expect(Math.abs(curve[i] - exact)).toBeLessThan(1e-12);
      }
    }
  });

  it("an energy that equals a level counts as filled there, the next number above it does not", () => {
    const axis = planAxis({ fromEv: 0.1, toEv: 0.7, points: 7 }, [0]);
    for (const [i, level] of axis.levelsEv.entries()) {
      const above = level * (1 + Number.EPSILON);
      const rising = (first: number): number[] => Array.from({ length: 7 }, (_, j) => (j >= first ? 1 : 0));
      expect(coldCurve(axis, [[level, 1]])).toEqual(rising(i));
      expect(coldCurve(axis, [[above, 1]])).toEqual(rising(i + 1));
    }
  });

  it("a pair split across a level shows there alone, at its full size", () => {
    const axis = planAxis({ fromEv: -1, toEv: 1, points: 21 }, [0, 300]);
    const level = axis.levelsEv[10];
    const curve = coldCurve(axis, [
      [level - 1e-9, 1e15],
      [level + 1e-9, -1e15],
    ]);
    expect(curve).toEqual(Array.from({ length: 21 }, (_, i) => (i === 10 ? 1e15 : 0)));
  });
});
