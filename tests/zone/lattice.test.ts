// lattice.test.ts: are the reciprocal vectors dual to the direct ones, and do volume and area belong to them?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import { cellArea, cellVolume, cross, dot, length, reciprocalVectors, type Vectors } from "../../src/zone/lattice.js";

const entry = fc.integer({ min: -5000, max: 5000 }).map((thousandths) => thousandths / 1000);
const triple = fc.tuple(entry, entry, entry);

/** Volume by the rule of Sarrus, written out. */
const determinant = ([a, b, c]: Vectors): number =>
  a[0] * b[1] * c[2] +
  a[1] * b[2] * c[0] +
  a[2] * b[0] * c[1] -
  a[2] * b[1] * c[0] -
  a[1] * b[0] * c[2] -
  a[0] * b[2] * c[1];

/** Cells that are not nearly flat; both hands occur. */
const lattice = fc
  .tuple(triple, triple, triple)
  .filter((rows) => Math.abs(determinant(rows)) > 0.05 * length(rows[0]) * length(rows[1]) * length(rows[2]));

describe("reciprocal vectors", () => {
  it("obey a_i . b_j = 2 pi delta_ij in cells of either hand", () => {
    fc.assert(
      fc.property(lattice, (rows) => {
        const reciprocal = reciprocalVectors(rows);
        for (let i = 0; i < 3; i++)
          for (let j = 0; j < 3; j++) {
            const scale = length(rows[i]) * length(reciprocal[j]);
            expect(Math.abs(dot(rows[i], reciprocal[j]) - (i === j ? 2 * Math.PI : 0))).toBeLessThan(1e-14 * scale);
          }
      }),
    );
  });

  it("span (2 pi)^3 / volume, and are their own dual", () => {
    fc.assert(
      fc.property(lattice, (rows) => {
        const reciprocal = reciprocalVectors(rows);
        expect((cellVolume(reciprocal) * cellVolume(rows)) / (2 * Math.PI) ** 3).toBeCloseTo(1, 11);
        const twice = reciprocalVectors(reciprocal);
        for (let i = 0; i < 3; i++)
          for (let x = 0; x < 3; x++) expect(Math.abs(twice[i][x] - rows[i][x])).toBeLessThan(1e-11);
      }),
    );
  });

  it("are those of the textbooks for fcc (a bcc lattice of edge 4 pi / a)", () => {
    const a = 4.08;
    const reciprocal = reciprocalVectors([
      [0, a / 2, a / 2],
      [a / 2, 0, a / 2],
      [a / 2, a / 2, 0],
    ]);
    const b = (2 * Math.PI) / a;
    const expected = [
      [-b, b, b],
      [b, -b, b],
      [b, b, -b],
    ];
    for (let i = 0; i < 3; i++) for (let x = 0; x < 3; x++) expect(reciprocal[i][x]).toBeCloseTo(expected[i][x], 13);
  });
});

describe("volume and area", () => {
  it("are the determinant's size and a b sin(gamma)", () => {
    fc.assert(
      fc.property(lattice, (rows) => {
        expect(cellVolume(rows)).toBeCloseTo(Math.abs(determinant(rows)), 10);
        const gamma = Math.acos(Math.min(1, Math.max(-1, dot(rows[0], rows[1]) / (length(rows[0]) * length(rows[1])))));
        expect(cellArea(rows)).toBeCloseTo(length(rows[0]) * length(rows[1]) * Math.sin(gamma), 6);
      }),
    );
  });

  it("fcc: a^3 / 4; hexagonal layer: a^2 sqrt(3) / 2", () => {
    const half = 4.08 / 2;
    const fcc: Vectors = [
      [0, half, half],
      [half, 0, half],
      [half, half, 0],
    ];
    expect(cellVolume(fcc)).toBeCloseTo(4.08 ** 3 / 4, 12);
    const hexagonal: Vectors = [
      [2.46, 0, 0],
      [-1.23, (2.46 * Math.sqrt(3)) / 2, 0],
      [0, 0, 10],
    ];
    expect(cellArea(hexagonal)).toBeCloseTo((2.46 ** 2 * Math.sqrt(3)) / 2, 12);
  });

  it("the cross product is normal to its factors and turns right-handed", () => {
    const x: Triple = [1, 0, 0];
    const y: Triple = [0, 1, 0];
    expect(cross(x, y)).toEqual([0, 0, 1]);
    fc.assert(
      fc.property(triple, triple, (a, b) => {
        expect(Math.abs(dot(a, cross(a, b)))).toBeLessThan(1e-12);
        const swapped = cross(b, a);
        for (let x = 0; x < 3; x++) expect(cross(a, b)[x] + swapped[x]).toBe(0);
      }),
    );
  });
});
