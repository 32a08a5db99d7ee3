// boxes.test.ts: is the spread of a band over its cell the closed form of convolved boxes, at a cost that does not grow with it?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { occupiedWeight, weightDensity } from "../../src/curves/occupation.js";
import type { NodeAxis } from "../../src/spectrum/axis.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../../src/spectrum/boxes.js";
import { convolvedBoxesBelow, spreadVariance } from "./closed-form.js";

const axis: NodeAxis = { startEv: -2, stepEv: 0.01, count: 401 };

interface Spread {
  readonly energyEv: number;
  readonly widths: readonly number[];
}

/** Widths of 2 or 3 edges whose sum is log-uniform between two powers of ten (eV); some edges may be flat. */
function spreads(fromPower: number, toPower: number, reachEv = 1): fc.Arbitrary<Spread> {
  const share = fc.oneof(fc.double({ min: 0.01, max: 1, noNaN: true }), fc.constant(0));
  return fc
    .record({
      energyEv: fc.double({ min: -reachEv, max: reachEv, noNaN: true }),
      power: fc.double({ min: fromPower, max: toPower, noNaN: true }),
      shares: fc.array(share, { minLength: 2, maxLength: 3 }).filter((list) => list.some((x) => x > 0)),
    })
    .map(({ energyEv, power, shares }) => {
      const sum = shares.reduce((a, b) => a + b, 0);
      return { energyEv, widths: shares.map((x) => (x / sum) * 10 ** power) };
    });
}

const totalOf = (widths: readonly number[]): number => widths.reduce((a, b) => a + b, 0);

/** One unit of weight deposited on an axis; the step of the copy that it was kept on. */
function deposited({ energyEv, widths }: Spread) {
  const store = createBoxStore(axis, 1);
  const shape = createBoxShaper(axis)(energyEv, Float64Array.from(widths));
  depositShape(store, shape, Float64Array.of(1));
  const keptStepEv = axis.stepEv * 2 ** shape.copy;
  settleBoxes(store);
  return { base: store.base, nodes: store.copies[0], keptStepEv };
}

/** Weight below a level at T = 0. */
function below(spread: Spread): { at: (levelEv: number) => number; keptStepEv: number } {
  const { base, nodes, keptStepEv } = deposited(spread);
  const sampler = occupiedWeight({ axis, columns: 1, base, nodes });
  const out = new Float64Array(1);
  const at = (levelEv: number): number => {
    sampler(levelEv, 0, out);
    return out[0];
  };
  return { at, keptStepEv };
}

const levels = Array.from({ length: 131 }, (_, i) => -1.9 + i * 0.0291);

/**
 * Bound of the error in weight: lags, interpolation and hat move the weight by a random amount of zero mean and of variance up to
 * 1/12 per box + 1/4 + 1/6 squared steps, and so change what lies below a level by at most (largest density) * (mean size / 2).
 */
function weightBound(widths: readonly number[], keptStepEv: number): number {
  const boxes = widths.filter((width) => width > 0).length;
  return (Math.sqrt((boxes + 5) / 12) / 2) * (keptStepEv / Math.max(...widths));
}

/** Bound of how far weight may move: half a step per box, one for the interpolation, one for the hat. */
const reachOf = (widths: readonly number[], keptStepEv: number): number => (widths.length / 2 + 2) * keptStepEv;

function expectClosedForm(spread: Spread): void {
  const { energyEv, widths } = spread;
  const { at, keptStepEv } = below(spread);
  const exact = (levelEv: number): number => convolvedBoxesBelow(levelEv - energyEv, widths);
  const reach = reachOf(widths, keptStepEv);
  for (const level of levels) {
    expect(at(level)).toBeLessThanOrEqual(exact(level + reach) + 1e-12);
    expect(at(level)).toBeGreaterThanOrEqual(exact(level - reach) - 1e-12);
    expect(Math.abs(at(level) - exact(level))).toBeLessThan(weightBound(widths, keptStepEv));
  }
}

describe("mass, mean and variance of a spread", () => {
  it("mass and mean are exact, nothing is negative, variance is right to the square of a step", () => {
    fc.assert(
      fc.property(spreads(-4, 0), (spread) => {
        const { base, nodes, keptStepEv } = deposited(spread);
        expect(base[0]).toBe(0);
        const moment = (power: number): number =>
          nodes.reduce((sum, w, i) => sum + w * (axis.startEv + i * axis.stepEv - spread.energyEv) ** power, 0);
        expect(Math.abs(moment(0) - 1)).toBeLessThan(1e-13);
        expect(Math.abs(moment(1))).toBeLessThan(1e-13);
        expect(Math.min(...nodes)).toBeGreaterThan(-1e-14);
        const excess = (moment(2) - spreadVariance(spread.widths)) / keptStepEv ** 2;
        expect(Math.abs(excess)).toBeLessThan(0.6);
      }),
      { numRuns: 500 },
    );
  });

  it("every column gets its own multiple", () => {
    const store = createBoxStore(axis, 3);
    const shape = createBoxShaper(axis)(0.1, Float64Array.of(0.3, 0.02, 0.11));
    depositShape(store, shape, Float64Array.of(1, -2.5, 0));
    settleBoxes(store);
    for (let i = 0; i < axis.count; i++) {
      const [one, two, none] = store.copies[0].subarray(3 * i, 3 * i + 3);
      expect(two).toBeCloseTo(-2.5 * one, 15);
      expect(none).toBe(0);
    }
  });
});

describe("cumulative weight against the closed form of convolved boxes", () => {
  for (const [from, to, what] of [
    [-4, -2, "narrower than a step"],
    [-2, -0.6, "of 1 to 25 steps"],
    [-0.6, 0.3, "on coarser copies"],
  ] as const)
    it(`spreads ${what}`, () => {
      fc.assert(fc.property(spreads(from, to), (spread) => expectClosedForm(spread)));
    });

  it("spreads that stick out of the axis on either side or both", () => {
    fc.assert(fc.property(spreads(-1, 4, 3), (spread) => expectClosedForm(spread)));
  });

  it("a spread that lies below the axis counts at every level, one above at none", () => {
    fc.assert(
      fc.property(spreads(-3, 1, 0.001), (spread) => {
        const half = totalOf(spread.widths) / 2;
        for (const [energyEv, weight] of [
          [axis.startEv - half - 1e-6, 1],
          [axis.startEv + axis.stepEv * (axis.count - 1) + half + 1e-6, 0],
        ]) {
          const { base, nodes } = deposited({ ...spread, energyEv });
          expect(base[0]).toBe(weight);
          expect(nodes.every((value) => value === 0)).toBe(true);
        }
      }),
    );
  });

  it("is even about the centre of the spread", () => {
    fc.assert(
      fc.property(spreads(-3, 0), ({ widths }) => {
        const { at, keptStepEv } = below({ energyEv: 0, widths });
        for (const level of levels)
          expect(Math.abs(at(level) + at(-level) - 1)).toBeLessThan(2 * weightBound(widths, keptStepEv));
      }),
    );
  });

  it("a mesh of cells gives the density of a linear band, E = v k on (-1/2, 1/2): 1 / v without ripples", () => {
    const store = createBoxStore(axis, 1);
    const shaper = createBoxShaper(axis);
    const cells = 17;
    for (let i = 0; i < cells; i++) {
      const k = (i + 0.5) / cells - 0.5;
      depositShape(store, shaper(2.4 * k, Float64Array.of(2.4 / cells, 0, 0)), Float64Array.of(1 / cells));
    }
    settleBoxes(store);
    const weights = { axis, columns: 1, base: store.base, nodes: store.copies[0] };
    const out = new Float64Array(1);
    for (let level = -1.1; level < 1.1; level += 0.013) {
      occupiedWeight(weights)(level, 0, out);
      expect(Math.abs(out[0] - (level / 2.4 + 0.5))).toBeLessThan(weightBound([2.4 / cells], axis.stepEv) / cells);
      weightDensity(weights, 0.2)(level, 0, out);
      if (Math.abs(level) < 0.9) expect(Math.abs(out[0] * 2.4 - 1)).toBeLessThan(0.01);
    }
  });
});

describe("cost", () => {
  it("is at most 27 nodes, and more than 12 once the axis is too fine for the spread", () => {
    const shaper = createBoxShaper(axis);
    fc.assert(
      fc.property(spreads(-4, 5.9), ({ energyEv, widths }) => {
        const { entries, copy, side } = shaper(energyEv, Float64Array.from(widths));
        expect(side).toBe(0);
        expect(entries).toBeLessThanOrEqual(27);
        if (copy > 0) expect(entries).toBeGreaterThan(12);
        expect(totalOf(widths)).toBeLessThanOrEqual(24 * axis.stepEv * 2 ** copy);
      }),
      { numRuns: 1000 },
    );
  });

  it("a spread of more than 10^8 steps is a data Fault that suspects the unit of the velocity", () => {
    const shaper = createBoxShaper(axis);
    for (const width of [1.1e6, Number.POSITIVE_INFINITY, Number.NaN])
      try {
        shaper(0, Float64Array.of(width, 0, 0));
        throw new Error("accepted");
      } catch (error) {
        if (!isFault(error)) throw error;
        expect(error.kind).toBe("data");
        expect(error.cure).toContain("unit of the velocity");
      }
  });
});
