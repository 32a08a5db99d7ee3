// indicator.test.ts: is the norm of a difference of spectra its largest occupied weight in parts of the tolerance?
import { describe, expect, it } from "vitest";
import { createSpectralNorm } from "../../src/refine/indicator.js";
import type { NodeAxis } from "../../src/spectrum/axis.js";

const axis: NodeAxis = { startEv: 0, stepEv: 0.1, count: 21 };
const none = new Float64Array(2);
const all = (tolerance: readonly number[]) => createSpectralNorm(axis, Float64Array.from(tolerance), 0, axis.count - 1);

describe("the norm", () => {
  it("of equal spectra is 0, also when they were added in another order", () => {
    const norm = all([0.1, 0.2]);
    const values = Float64Array.of(1, 2, 3, 4);
    norm.add(0.5, none, -1, values, 0);
    norm.add(1.2, none, -1, values, 2);
    norm.add(1.2, none, 1, values, 2);
    norm.add(0.5, none, 1, values, 0);
    expect(norm.take()).toBeLessThan(1e-14);
  });

  it("of weight moved from one energy to another is that weight over its tolerance: the worst column", () => {
    const norm = all([0.1, 0.5]);
    norm.add(0.5, none, -2, Float64Array.of(9, 0.03, 0.3), 1);
    norm.add(1.2, none, 2, Float64Array.of(9, 0.03, 0.3), 1);
    expect(norm.take()).toBeCloseTo(0.6 / 0.5, 12); // 0.06 / 0.1 in the other column
  });

  it("is that of the running sum, not of single deposits: pairs of both signs cancel, likes add up", () => {
    const norm = all([1]);
    for (const [energy, value] of [
      [0.3, 1],
      [0.6, 1],
      [0.9, -3],
      [1.2, 1],
    ])
      norm.add(energy, none, 1, Float64Array.of(value), 0);
    expect(norm.take()).toBeCloseTo(2, 12);
  });

  it("counts what lies below the axis at every level, and what lies above it nowhere", () => {
    const norm = all([1]);
    norm.add(-5, none, 1, Float64Array.of(0.25), 0);
    norm.add(7, none, 1, Float64Array.of(100), 0);
    expect(norm.take()).toBeCloseTo(0.25, 12);
  });

  it("compares the asked nodes alone", () => {
    const norm = createSpectralNorm(axis, Float64Array.of(1), 8, 12);
    norm.add(0.2, none, 1, Float64Array.of(5), 0);
    norm.add(0.6, none, 1, Float64Array.of(-5), 0);
    norm.add(1.5, none, 1, Float64Array.of(7), 0);
    expect(norm.take()).toBeLessThan(1e-12);
    norm.add(0.2, none, 1, Float64Array.of(5), 0);
    norm.add(1, none, 1, Float64Array.of(-5), 0);
    expect(norm.take()).toBeCloseTo(5, 12);
  });

  it("of a spread against its halves is what their shapes differ by, and 0 where they agree", () => {
    const norm = createSpectralNorm({ startEv: -2, stepEv: 0.01, count: 401 }, Float64Array.of(1), 0, 400);
    // One box of 1 eV and the two halves that a linear band has in it: the same density. A spread is kept in steps of at
    // most 1/12 of its span; a hat of one step blunts the kink of a running sum by 1/6 of a step.
    norm.add(0, Float64Array.of(1, 0), -1, Float64Array.of(1), 0);
    for (const side of [-0.25, 0.25]) norm.add(side, Float64Array.of(0.5, 0), 0.5, Float64Array.of(1), 0);
    expect(norm.take()).toBeLessThan(1 / 72);
    // A box of 1 eV against everything at its centre: half the weight at most.
    norm.add(0, Float64Array.of(1, 0), -1, Float64Array.of(1), 0);
    norm.add(0, Float64Array.of(0, 0), 1, Float64Array.of(1), 0);
    expect(Math.abs(norm.take() - 0.5)).toBeLessThan(0.02);
  });

  it("forgets what was taken", () => {
    const norm = all([1]);
    norm.add(0.5, none, 1, Float64Array.of(3), 0);
    norm.take();
    expect(norm.take()).toBe(0);
  });
});

describe("squares", () => {
  it("are the running sums taken last, squared, and add up; differences that were not kept leave no trace", () => {
    const norm = createSpectralNorm(axis, Float64Array.of(1, 1), 2, 10);
    const expected = new Float64Array(axis.count * 2);
    for (const [energy, first, second, kept] of [
      [0.5, 2, -1, true],
      [0.3, 9, 9, false],
      [0.8, -3, 0.5, true],
    ] as const) {
      norm.add(energy, none, 1, Float64Array.of(first, second), 0);
      norm.take();
      if (!kept) continue;
      norm.keepSquares();
      for (let node = Math.max(2, Math.round(energy / 0.1)); node <= 10; node++) {
        expected[2 * node] += first ** 2;
        expected[2 * node + 1] += second ** 2;
      }
    }
    for (const [at, square] of norm.squares.entries()) expect(square).toBeCloseTo(expected[at], 10);
  });
});
