// sums.test.ts: does the compensated sum keep what a plain sum drops?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { compensatedRow, compensatedSum, sumOf } from "../../src/base/sums.js";

/** The exact sum of integers times 2^-40, by big integers. */
const exactSum = (integers: readonly bigint[]): number =>
  Number(integers.reduce((sum, each) => sum + each, 0n)) / 2 ** 40;

describe("the compensated sum", () => {
  it("gets Neumaier's example right, where a plain sum and Kahan's give 0", () => {
    // A. Neumaier, Z. Angew. Math. Mech. 54, 39 (1974)
    expect(sumOf([1, 1e100, 1, -1e100])).toBe(2);
  });

  it("keeps ten million tenths to the last digit, where the plain sum is off by 1e-4", () => {
    const sum = compensatedSum();
    let plain = 0;
    for (let i = 0; i < 1e7; i++) {
      sum.add(0.1);
      plain += 0.1;
    }
    // 0.1 as stored is 0.1 + 5.55e-18, ten million of which are 5.55e-11: below the spacing of doubles at 1e6 (1.2e-10)
    expect(sum.total()).toBe(1e6);
    expect(Math.abs(plain - 1e6)).toBeGreaterThan(1e-4);
  });

  it("agrees with exact integer arithmetic to one rounding, for any signs and sizes", () => {
    const term = fc.bigInt({ min: -(2n ** 52n), max: 2n ** 52n });
    fc.assert(
      fc.property(fc.array(term, { maxLength: 300 }), (integers) => {
        const values = integers.map((each) => Number(each) / 2 ** 40);
        const exact = exactSum(integers);
        const size = values.reduce((sum, value) => sum + Math.abs(value), 0);
        const bound = Math.abs(exact) * 2 ** -52 + values.length * 2 ** -104 * size;
        expect(Math.abs(sumOf(values) - exact)).toBeLessThanOrEqual(bound);
      }),
      { seed: 7 },
    );
  });

  it("lets infinities and NaN through, and starts at zero", () => {
    expect(sumOf([])).toBe(0);
    expect(sumOf([1, Number.POSITIVE_INFINITY, 3])).toBe(Number.POSITIVE_INFINITY);
    expect(sumOf([1, Number.NaN])).toBeNaN();
  });
});

describe("a row of compensated sums", () => {
  it("is the sum of each column by itself", () => {
    const column = fc.double({ noNaN: true, noDefaultInfinity: true, min: -1e200, max: 1e200 });
    fc.assert(
      fc.property(fc.array(fc.tuple(column, column, column), { maxLength: 40 }), (rows) => {
        const row = compensatedRow(3);
        for (const each of rows) row.add(Float64Array.from(each));
        expect([...row.total()]).toEqual([0, 1, 2].map((c) => sumOf(rows.map((each) => each[c]!))));
      }),
      { seed: 11 },
    );
  });

  it("writes into the row it is given and refuses one of another length", () => {
    const row = compensatedRow(2);
    row.add(Float64Array.of(1, 2));
    const out = new Float64Array(2);
    expect(row.total(out)).toBe(out);
    expect([...out]).toEqual([1, 2]);
    expect(() => row.add(new Float64Array(3))).toThrow(RangeError);
  });
});
