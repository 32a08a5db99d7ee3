// gaps.test.ts: is a touching of bands suspected where slopes allow it and an asked level would feel it, and nowhere else?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import { type Closeness, mayTouch } from "../../src/refine/gaps.js";

const closeness: Closeness = {
  fromEv: -1,
  toEv: 1,
  degenerateEv: 1e-5,
  blurEv: 0.01,
  strictness: 100,
  dimension: 2,
};
const square: readonly Triple[] = [
  [0.4, 0, 0],
  [0, 0.4, 0],
];
const cube: readonly Triple[] = [...square, [0, 0, 0.4]];

/** Two cones of speed v (eV angstrom) seen from a sample at a distance q along x from their crossing at `level`. */
function cones(v: number, q: number, level = 0): [Float64Array, Float64Array] {
  return [Float64Array.of(level - v * q, level + v * q), Float64Array.of(-v, 0, 0, v, 0, 0)];
}

describe("a linear crossing", () => {
  it("is suspected from every sample whose box holds it, at every size", () => {
    fc.assert(
      fc.property(
        fc.double({ min: -0.499, max: 0.499, noNaN: true }),
        fc.double({ min: -0.499, max: 0.499, noNaN: true }),
        fc.double({ min: 0.5, max: 5, noNaN: true }),
        fc.integer({ min: 0, max: 5 }),
        (x, y, v, depth) => {
          const size = 2 ** -depth;
          const q = [0.4 * size * x, 0.4 * size * y];
          const distance = Math.hypot(...q);
          fc.pre(2 * v * distance > closeness.degenerateEv);
          const slope = q.map((component) => (v * component) / distance);
          const energy = Float64Array.of(-v * distance, v * distance);
          const slopes = Float64Array.of(-slope[0], -slope[1], 0, slope[0], slope[1], 0);
          expect(mayTouch(energy, slopes, square, size, { ...closeness, blurEv: 1e-6 })).toBe(true);
        },
      ),
    );
  });

  it("is not suspected from outside its box", () => {
    for (const size of [1, 0.5, 0.125]) {
      expect(mayTouch(...cones(2, 0.19 * size), square, size, { ...closeness, blurEv: 1e-6 })).toBe(true);
      expect(mayTouch(...cones(2, 0.21 * size), square, size, { ...closeness, blurEv: 1e-6 })).toBe(false);
    }
  });
});

describe("no touching", () => {
  it("of separated bands, parallel bands and a single band", () => {
    expect(mayTouch(Float64Array.of(-0.5, 0.5), Float64Array.of(-1, 0, 0, 1, 0, 0), square, 1, closeness)).toBe(false);
    const parallel = Float64Array.of(3, 1, 0, 3, 1, 0);
    expect(mayTouch(Float64Array.of(0, 0.001), parallel, square, 1, closeness)).toBe(false);
    expect(mayTouch(Float64Array.of(0), Float64Array.of(9, 9, 9), square, 1, closeness)).toBe(false);
  });

  it("of bands that are one level: degenerate sets are skipped, their neighbours are not", () => {
    const slopes = Float64Array.of(-2, 0, 0, 2, 0, 0);
    expect(mayTouch(Float64Array.of(0, 0.9e-5), slopes, square, 1, closeness)).toBe(false);
    expect(mayTouch(Float64Array.of(0, 1.1e-5), slopes, square, 1, closeness)).toBe(true);
    const three = Float64Array.of(-2, 0, 0, -2, 0, 0, 2, 0, 0);
    expect(mayTouch(Float64Array.of(0, 0, 0.1), three, square, 1, closeness)).toBe(true);
  });
});

describe("worth", () => {
  it("pairs that no asked level splits are left alone: reach of the bands over the box included", () => {
    // Half a box of 0.4 / angstrom at 2 eV angstrom spans 0.4 eV.
    for (const [level, expected] of [
      [0, true],
      [1.3, true],
      [1.5, false],
      [-1.3, true],
      [-1.5, false],
    ] as const)
      expect(mayTouch(...cones(2, 0.01, level), square, 1, closeness)).toBe(expected);
  });

  it("a touching worth less than half of what is tolerated is left alone", () => {
    expect(mayTouch(...cones(2, 0.05), square, 1, { ...closeness, strictness: 0.51 })).toBe(true);
    expect(mayTouch(...cones(2, 0.05), square, 1, { ...closeness, strictness: 0.49 })).toBe(false);
  });

  it("in a crystal it is worth less in proportion to the box, in a layer the same in every box", () => {
    const size = 1 / 64;
    const near = cones(2, 0.05 * size);
    const strict = { ...closeness, blurEv: 1e-6, strictness: 10 };
    expect(mayTouch(...near, square, size, strict)).toBe(true);
    expect(mayTouch(...near, cube, size, { ...strict, dimension: 3 })).toBe(false);
    expect(mayTouch(...near, cube, size, { ...strict, dimension: 3, strictness: 33 })).toBe(true);
  });

  it("bands whose whole difference in the box is far below the blur are left alone", () => {
    const size = 1 / 64;
    const near = cones(2, 0.05 * size);
    const blurred = { ...closeness, strictness: 1 };
    expect(mayTouch(...near, square, size, { ...blurred, blurEv: 0.01 })).toBe(true);
    expect(mayTouch(...near, square, size, { ...blurred, blurEv: 0.1 })).toBe(false);
  });
});
