// sections.test.ts: are partial spectra added array by array, in the order in which they come?
import { describe, expect, it } from "vitest";
import { addSections, type Sections } from "../../src/spectrum/sections.js";

describe("adding sections", () => {
  it("sums arrays of one name and takes over new ones as copies", () => {
    const total: Sections = {};
    const first = { a: Float64Array.of(1, 2), b: Float64Array.of(5) };
    addSections(total, first);
    addSections(total, { a: Float64Array.of(10, 20) });
    addSections(total, { c: Float64Array.of(7) });
    expect(total).toEqual({ a: Float64Array.of(11, 22), b: Float64Array.of(5), c: Float64Array.of(7) });
    expect(first).toEqual({ a: Float64Array.of(1, 2), b: Float64Array.of(5) });
  });

  it("rounds as ((1 + 2) + 3) does: the order of calls is the order of the sum", () => {
    const parts = [1, 1e16, -1e16, 3].map((value): Sections => ({ a: Float64Array.of(value) }));
    const sumOf = (list: readonly Sections[]): number => {
      const total: Sections = {};
      for (const part of list) addSections(total, part);
      return total.a[0];
    };
    expect(sumOf(parts)).toBe(1 + 1e16 - 1e16 + 3);
    expect(sumOf([...parts].reverse())).toBe(3 - 1e16 + 1e16 + 1);
    expect(sumOf(parts)).not.toBe(sumOf([...parts].reverse()));
  });
});
