// two-centre-parts.test.ts: are the parts of the two-centre metal right on their own: orbitals, bonds, roots, files?
import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { Fault } from "../../src/base/errors.js";
import type { Triple } from "../../src/grid/grid.js";
import { checkTwoCentreFile, readTwoCentreFile } from "../../src/samples/two-centre-file.js";
import { bondBlock, type IntegralName, integralNames } from "../../src/samples/two-centre-integrals.js";
import { diagonaliseReal9 } from "../../src/samples/two-centre-jacobi.js";
import { halfShell, latticeVectors } from "../../src/samples/two-centre-lattice.js";
import { orbitalMatrices, spinMatrices, spinOrbitMatrix } from "../../src/samples/two-centre-orbitals.js";
import { createOrthogonaliser } from "../../src/samples/two-centre-orthogonal.js";

const gold = readTwoCentreFile("data/metals/gold.json");

/** n x n complex interleaved product. */
function times(a: Float64Array, b: Float64Array, n = 18): Float64Array {
  const out = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++)
      for (let l = 0; l < n; l++) {
        const [ar, ai] = [a[2 * (n * i + l)], a[2 * (n * i + l) + 1]];
        const [br, bi] = [b[2 * (n * l + j)], b[2 * (n * l + j) + 1]];
        out[2 * (n * i + j)] += ar * br - ai * bi;
        out[2 * (n * i + j) + 1] += ar * bi + ai * br;
      }
  return out;
}

/** Largest entry of [a, b] - i c. */
function commutatorError(a: Float64Array, b: Float64Array, c: Float64Array): number {
  const ab = times(a, b);
  const ba = times(b, a);
  let most = 0;
  for (let e = 0; e < ab.length; e += 2)
    most = Math.max(most, Math.abs(ab[e] - ba[e] + c[e + 1]), Math.abs(ab[e + 1] - ba[e + 1] - c[e]));
  return most;
}

describe("moments", () => {
  it.each([
    ["spin", spinMatrices()],
    ["orbital", orbitalMatrices()],
  ] as const)("%s: [x, y] = i z and cyclic", (_, m) => {
    for (let a = 0; a < 3; a++) expect(commutatorError(m[a], m[(a + 1) % 3], m[(a + 2) % 3])).toBeLessThan(1e-14);
  });

  it("spin and orbital commute", () => {
    for (const s of spinMatrices())
      for (const l of orbitalMatrices()) expect(commutatorError(s, l, new Float64Array(648))).toBeLessThan(1e-15);
  });

  it("L is purely imaginary, traceless, with <x|Lz|y> = -i and L^2 = l (l + 1)", () => {
    const l = orbitalMatrices();
    const square = new Float64Array(648);
    for (const m of l) {
      for (let e = 0; e < 648; e += 2) expect(m[e]).toBe(0);
      for (let i = 0; i < 18; i++) expect(m[2 * 19 * i + 1]).toBe(0);
      times(m, m).forEach((value, e) => {
        square[e] += value;
      });
    }
    expect(l[2][2 * (18 * 1 + 2) + 1]).toBe(-1);
    for (let i = 0; i < 18; i++)
      for (let j = 0; j < 18; j++) {
        const orbital = i % 9;
        const expected = i !== j || orbital === 0 ? 0 : orbital < 4 ? 2 : 6;
        expect(square[2 * (18 * i + j)]).toBeCloseTo(expected, 13);
        expect(square[2 * (18 * i + j) + 1]).toBeCloseTo(0, 13);
      }
  });

  // L.S = [j(j+1) - l(l+1) - s(s+1)]/2 in d: 1 for j = 5/2, -3/2 for j = 3/2, so (A - 1)(A + 3/2) = 0 there.
  it("L.S has the levels 1 and -3/2 on d and vanishes on s and p", () => {
    const ls = spinOrbitMatrix(1);
    const square = times(ls, ls);
    for (let i = 0; i < 18; i++)
      for (let j = 0; j < 18; j++) {
        const e = 2 * (18 * i + j);
        const unit = i === j && i % 9 >= 4 ? 1.5 : 0;
        expect(square[e] + 0.5 * ls[e] - unit).toBeCloseTo(0, 13);
        expect(square[e + 1] + 0.5 * ls[e + 1]).toBeCloseTo(0, 13);
      }
  });
});

describe("two-centre blocks", () => {
  const names = Object.fromEntries(integralNames.map((name, i) => [name, 1 + 0.37 * i * (i % 2 ? -1 : 1)])) as Record<
    IntegralName,
    number
  >;
  const [x, y, z, xy, zx, x2, z2] = [1, 2, 3, 4, 6, 7, 8];

  it("along z are diagonal in the bond's own components", () => {
    const block = bondBlock(names, [0, 0, 1]);
    const at = (i: number, j: number): number => block[9 * i + j];
    expect(at(0, z)).toBe(names.sps);
    expect(at(z, 0)).toBe(-names.sps);
    expect(at(0, z2)).toBe(names.sds);
    expect(at(z, z2)).toBe(names.pds);
    expect(at(x, zx)).toBeCloseTo(names.pdp, 14);
    expect(at(zx, x)).toBeCloseTo(-names.pdp, 14);
    expect(at(x, x)).toBe(names.ppp);
    expect(at(x2, x2)).toBeCloseTo(names.ddd, 14);
    expect(at(xy, xy)).toBeCloseTo(names.ddd, 14);
    expect(at(zx, zx)).toBeCloseTo(names.ddp, 14);
  });

  // Slater and Koster, Phys. Rev. 94, 1498 (1954), table I, l, m, n the direction cosines.
  it("agree with entries of the published table in a general direction", () => {
    const [l, m, n] = [2 / 7, -3 / 7, 6 / 7];
    const block = bondBlock(names, [l, m, n]);
    const at = (i: number, j: number): number => block[9 * i + j];
    const v = names;
    const r3 = Math.sqrt(3);
    expect(at(x, y)).toBeCloseTo(l * m * (v.pps - v.ppp), 13);
    expect(at(0, x2)).toBeCloseTo((r3 / 2) * (l * l - m * m) * v.sds, 13);
    expect(at(x, xy)).toBeCloseTo(r3 * l * l * m * v.pds + m * (1 - 2 * l * l) * v.pdp, 13);
    expect(at(z, xy)).toBeCloseTo(r3 * l * m * n * v.pds - 2 * l * m * n * v.pdp, 13);
    expect(at(z, z2)).toBeCloseTo(n * (n * n - (l * l + m * m) / 2) * v.pds + r3 * n * (l * l + m * m) * v.pdp, 13);
    expect(at(xy, xy)).toBeCloseTo(
      3 * l * l * m * m * v.dds + (l * l + m * m - 4 * l * l * m * m) * v.ddp + (n * n + l * l * m * m) * v.ddd,
      13,
    );
    expect(at(x2, z2)).toBeCloseTo(
      (r3 / 2) * (l * l - m * m) * (n * n - (l * l + m * m) / 2) * v.dds +
        r3 * n * n * (m * m - l * l) * v.ddp +
        (r3 / 4) * (1 + n * n) * (l * l - m * m) * v.ddd,
      13,
    );
  });
});

describe("the root of S", () => {
  it("gives back H for S = 1 and scales as 1/s for S = s", () => {
    const orthogonalise = createOrthogonaliser();
    const h = Float64Array.from({ length: 81 }, (_, e) => Math.cos(Math.floor(e / 9) + (e % 9)));
    const s = Float64Array.from({ length: 81 }, (_, e) => (e % 10 === 0 ? 4 : 0));
    const result = h.slice();
    expect(orthogonalise(result, s, 1)).toBe(4);
    result.forEach((value, e) => {
      expect(value).toBeCloseTo(h[e] / 4, 14);
    });
  });

  it("diagonalises degenerate real matrices with orthonormal vectors", () => {
    const matrix = Float64Array.from({ length: 81 }, (_, e) => (e % 10 === 0 ? 2 : 1));
    const vectors = new Float64Array(81);
    expect(diagonaliseReal9(matrix, vectors)).toBe(true);
    const values = Array.from({ length: 9 }, (_, i) => matrix[10 * i]).sort((a, b) => a - b);
    values.forEach((value, i) => {
      expect(value).toBeCloseTo(i < 8 ? 1 : 10, 13);
    });
    for (let i = 0; i < 9; i++)
      for (let j = 0; j < 9; j++) {
        let dot = 0;
        for (let l = 0; l < 9; l++) dot += vectors[9 * i + l] * vectors[9 * j + l];
        expect(dot).toBeCloseTo(i === j ? 1 : 0, 13);
      }
    expect(diagonaliseReal9(new Float64Array(81).fill(Number.NaN), vectors)).toBe(false);
  });
});

describe("lattices", () => {
  it.each([
    ["fcc", [6, 3, 12, 6]],
    ["bcc", [4, 3, 6, 12]],
    ["sc", [3, 6, 4, 3]],
  ] as const)("%s has its shells", (kind, shells) => {
    const vectors = latticeVectors(gold, { kind, latticeConstantA: 1 });
    const lengths = halfShell(vectors, 2.01).map((r) => Math.hypot(...r).toFixed(6));
    const counts = [...new Set(lengths)].map((length) => lengths.filter((it) => it === length).length);
    expect(counts.slice(0, shells.length)).toEqual([...shells]);
  });

  it("strain and c/a act on the vectors", () => {
    const stretched = latticeVectors(gold, { cOverA: 1.1 });
    expect(stretched[0][2]).toBeCloseTo(2.04 * 1.1, 12);
    const sheared: [Triple, Triple, Triple] = [
      [0.01, 0.02, 0],
      [0.02, 0, 0],
      [0, 0, 0],
    ];
    const vectors = latticeVectors(gold, { strain: sheared });
    expect(vectors[2][0]).toBeCloseTo(2.04 * 1.03, 12);
    expect(() => latticeVectors(gold, { vectorsA: sheared, cOverA: 1 })).toThrow(Fault);
    expect(() =>
      latticeVectors(gold, {
        vectorsA: [
          [1, 0, 0],
          [0, 1, 0],
          [1, 1, 0],
        ],
      }),
    ).toThrow(/span a cell/);
  });
});

describe("parameter files", () => {
  const content = (): Record<string, unknown> => JSON.parse(readFileSync("data/metals/gold.json", "utf8"));
  it("are refused with the field that is wrong", () => {
    const missing = content();
    delete missing.cutoff;
    expect(() => checkTwoCentreFile(missing, "x.json")).toThrow(/x\.json: .*at cutoff/);
    expect(() => checkTwoCentreFile({ ...content(), colour: 1 }, "x.json")).toThrow(/colour/);
    expect(() => checkTwoCentreFile({ ...content(), units: "eV" }, "x.json")).toThrow(/units/);
    expect(() => checkTwoCentreFile({ ...content(), lattice: { kind: "fcc" } }, "x.json")).toThrow(/a_angstrom/);
    expect(() => checkTwoCentreFile([], "x.json")).toThrow(/top level/);
    expect(() => readTwoCentreFile("no/such/file.json")).toThrow(/cannot be read/);
    expect(() => readTwoCentreFile("DEVELOPERS.md")).toThrow(/not valid JSON/);
  });
});
