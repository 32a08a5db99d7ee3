// numbers.test.ts: the short form of a number with its error, by table (usage of metrology: JCGM 100:2008, 7.2.2) and by property.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { grouped, plain, withError } from "../../src/report/numbers.js";

describe("withError", () => {
  const cases: [number, number, string][] = [
    [257.4123, 0.5, "257.4(5)"],
    [257.4123, 0.12, "257.41(12)"],
    [257.4, 0.012, "257.400(12)"],
    [-257.4123, 0.5, "-257.4(5)"],
    [1047.8, 12, "1048(12)"],
    [1047.8, 30, "1050(30)"],
    [12345, 230, "12300(200)"],
    [10.34, 1.2, "10.3(1.2)"],
    [10.34, 1.949, "10.3(1.9)"],
    [10.34, 1.96, "10(2)"],
    [10.34, 0.96, "10.3(1.0)"],
    [10.34, 0.095, "10.34(10)"],
    [10.34, 1, "10.3(1.0)"],
    [10.34, 0.1, "10.34(10)"],
    [999.97, 0.5, "1000.0(5)"],
    [0.3, 12, "0(12)"],
    [-0.3, 12, "0(12)"],
    [-0.04, 0.5, "0.0(5)"],
    [0, 0.5, "0.0(5)"],
    [0, 0, "0(0)"],
    [257.4, 0, "257.4(0)"],
    [257.4123, Number.NaN, "257.4(?)"],
    [257.4, Number.POSITIVE_INFINITY, "257.4(?)"],
    [257.4, -1, "257.4(?)"],
    [Number.NaN, 0.5, "n/a"],
    [Number.NEGATIVE_INFINITY, 0.5, "n/a"],
    [2.574e-7, 5e-10, "2.574(5)e-7"],
    [2.5e21, 3e19, "2.50(3)e21"],
    [1e-9, 2e-5, "0(2)e-5"],
    [1e-320, 1e-321, "1.00(10)e-320"],
    [1.7e308, 1e306, "1.700(10)e308"],
  ];
  it.each(cases)("%d with %d is %s", (value, error, text) => expect(withError(value, error)).toBe(text));

  /** Reads the short form back: brackets with a point are absolute, without they count in the last place. */
  function readBack(text: string): { value: number; error: number; step: number } {
    const [, digits, bar, power] = /^(-?\d+(?:\.\d+)?)\((\d+(?:\.\d+)?)\)(?:e(-?\d+))?$/.exec(text) ?? [];
    const tens = 10 ** Number(power ?? 0);
    const decimals = digits.split(".")[1]?.length ?? 0;
    const step = 10 ** -decimals;
    const error = bar.includes(".") || decimals === 0 ? Number(bar) : Number(bar) * step;
    return { value: Number(digits) * tens, error: error * tens, step: step * tens };
  }

  it("reads back to the value within half of the last place, and to the error within its rounding", () => {
    const number = fc.tuple(
      fc.double({ min: 1, max: 10, noNaN: true, maxExcluded: true }),
      fc.integer({ min: -30, max: 30 }),
    );
    fc.assert(
      fc.property(
        number,
        fc.double({ min: -7, max: 3, noNaN: true }),
        fc.boolean(),
        ([lead, power], ratio, negative) => {
          const value = (negative ? -1 : 1) * lead * 10 ** power;
          const error = Math.abs(value) * 10 ** ratio;
          const back = readBack(withError(value, error));
          // One significant digit above 1.95 rounds by at most 0.5/2.5 of the error; the value by less than 0.26 of it.
          expect(Math.abs(back.error - error)).toBeLessThanOrEqual(0.26 * error);
          expect(Math.abs(back.value - value)).toBeLessThanOrEqual(0.26 * error * (1 + 1e-9));
        },
      ),
      { seed: 7, numRuns: 2000 },
    );
  });

  it("never shows a negative zero", () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1, max: 0, noNaN: true }),
        fc.double({ min: 1e-3, max: 1e3, noNaN: true }),
        (value, error) => {
          expect(withError(value, error)).not.toMatch(/^-0(\.0*)?\(/);
        },
      ),
      { seed: 7 },
    );
  });
});

describe("plain", () => {
  it.each([
    [257.4, "257.4"],
    [0.1 + 0.2, "0.3"],
    [-0, "0"],
    [1e-4, "0.0001"],
    [2.1e-7, "2.1e-7"],
    [9999999.9, "1e7"],
    [1.5e21, "1.5e21"],
    [Number.NaN, "n/a"],
  ])("%d is %s", (value, text) => expect(plain(value)).toBe(text));
});

it("groups digits in threes", () => {
  expect([0, 999, 1000, 13824, 412345, 1234567].map(grouped)).toEqual([
    "0",
    "999",
    "1,000",
    "13,824",
    "412,345",
    "1,234,567",
  ]);
});
