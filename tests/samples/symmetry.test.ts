// symmetry.test.ts: are the operations that leave a sample as it is found, no more and no fewer?
import { describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import { determinant } from "../../src/grid/symmetry.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { reducedPoints, symmetryOf } from "../../src/samples/symmetry.js";

interface Expected {
  readonly sample: string;
  readonly set?: Record<string, string>;
  readonly offset?: Triple;
  readonly divisions?: Triple;
  /** Operations by kind: proper without time reversal, improper, and both with it. */
  readonly proper: number;
  readonly improper: number;
  readonly reversedProper: number;
  readonly reversedImproper: number;
}

const cube: Triple = [4, 4, 4];
const layer: Triple = [6, 6, 1];
const all = (proper: number, improper = proper) => ({
  proper,
  improper,
  reversedProper: proper,
  reversedImproper: improper,
});
const none: Triple = [0, 0, 0];
const half: Triple = [0.5, 0.5, 0.5];

// Point groups in the notation of Schoenflies; orders and subgroups as in the International Tables for Crystallography, volume A.
const groups: Record<string, Expected> = {
  "gold, O_h with time reversal": { sample: "metal", divisions: cube, ...all(24) },
  "gold under biaxial strain, D_4h": { sample: "metal", set: { strain: "0.02" }, divisions: cube, ...all(8) },
  "zincblende, T_d": { sample: "zincblende", divisions: cube, ...all(12) },
  "Luttinger's holes in a cubic box, O_h": { sample: "luttinger", divisions: cube, offset: half, ...all(24) },
  "under uniaxial strain, D_4h": {
    sample: "luttinger",
    set: { ezz: "0.01" },
    divisions: cube,
    offset: half,
    ...all(8),
  },
  "under strain along three axes, D_2h": {
    sample: "luttinger",
    set: { exx: "-0.01", ezz: "0.01" },
    divisions: cube,
    offset: half,
    ...all(4),
  },
  // Electrons of a layer that knows no up and down are left as they are by the mirror in its plane, spins by the turned sign of it.
  "Kane and Mele's layer without Rashba coupling, D_3h": {
    sample: "kane-mele",
    set: { r: "0" },
    divisions: layer,
    ...all(6),
  },
  "without staggering either, D_6h": { sample: "kane-mele", set: { r: "0", v: "0" }, divisions: layer, ...all(12) },
  "with both, C_3v": { sample: "kane-mele", divisions: layer, ...all(3) },
  "with Rashba coupling alone, C_6v": { sample: "kane-mele", set: { v: "0" }, divisions: layer, ...all(6) },
  // The flux turns round under mirrors that hold the z axis and under time reversal, and stays under both together.
  "Haldane's layer, C_3h and its vertical mirrors with time reversal": {
    sample: "haldane",
    divisions: layer,
    proper: 3,
    improper: 3,
    reversedProper: 3,
    reversedImproper: 3,
  },
  "without staggering, C_6h": {
    sample: "haldane",
    set: { M: "0" },
    divisions: layer,
    proper: 6,
    improper: 6,
    reversedProper: 6,
    reversedImproper: 6,
  },
  "a mesh of unequal divisions keeps fewer operations, C_2h": {
    sample: "metal",
    divisions: [4, 4, 3],
    ...all(2),
  },
  "random matrices that time reversal leaves": {
    sample: "random",
    set: { seed: "3", bands: "4", symmetry: "time-reversal" },
    divisions: cube,
    proper: 1,
    improper: 0,
    reversedProper: 1,
    reversedImproper: 0,
  },
  "and inversion too": {
    sample: "random",
    set: { seed: "3", bands: "4", symmetry: "both" },
    divisions: cube,
    ...all(1),
  },
};

describe("the group of a sample", () => {
  for (const [name, { sample, set, divisions = cube, offset = none, ...expected }] of Object.entries(groups))
    it(name, () => {
      const model = buildSample(sample, set);
      const found = symmetryOf(model, { ...model, divisions, offset });
      const count = (reversed: boolean, sign: number): number =>
        found.filter(({ timeReversal, rotation }) => timeReversal === reversed && determinant(rotation) * sign > 0)
          .length;
      expect({
        proper: count(false, 1),
        improper: count(false, -1),
        reversedProper: count(true, 1),
        reversedImproper: count(true, -1),
      }).toEqual(expected);
    });
});

describe("the points that are written", () => {
  it("are the 8 of a 4 x 4 x 4 mesh of an fcc lattice, each with its star", () => {
    const model = buildSample("metal");
    const { points, weights } = reducedPoints(model, { ...model, divisions: cube, offset: [0, 0, 0] });
    // Gamma, Lambda/2, L, Delta/2, X, ...: the sizes of the stars add up to 64.
    expect(weights.map((weight) => Math.round(64 * weight)).sort((a, b) => a - b)).toEqual([1, 3, 4, 6, 6, 8, 12, 24]);
    expect(points[0]).toEqual([0, 0, 0]);
    expect(weights.reduce((sum, weight) => sum + weight, 0)).toBeCloseTo(1, 14);
  });

  it("none fewer than the mesh: said so", () => {
    const model = buildSample("random", { seed: "3", bands: "4" });
    expect(() => reducedPoints(model, { ...model, divisions: cube, offset: [0, 0, 0] })).toThrow(
      /no symmetry of random/,
    );
  });
});
