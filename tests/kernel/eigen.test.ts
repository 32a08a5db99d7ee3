// eigen.test.ts: does the Hermitian eigensolver give eigenvalues and orthonormal eigenvectors, also for awkward matrices?

import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { createEigensolver } from "../../src/kernel/eigen.js";
import {
  adjoint,
  askNumpy,
  createRandom,
  diagonalMatrix,
  distance,
  largestOf,
  multiply,
  numpyMissing,
  randomHermitian,
  randomUnitary,
  rotate,
} from "./hermitian.js";

function solve(n: number, matrix: Float64Array) {
  const values = new Float64Array(n);
  const vectors = new Float64Array(2 * n * n);
  createEigensolver(n)(matrix.slice(), values, vectors);
  return { values, vectors };
}

/** Checks order, orthonormality and A z = lambda z, relative to the largest entry; returns the eigenvalues. */
function check(n: number, matrix: Float64Array): Float64Array {
  const { values, vectors } = solve(n, matrix);
  for (let i = 1; i < n; i++) expect(values[i]).toBeGreaterThanOrEqual(values[i - 1]);
  const unit = diagonalMatrix(new Array(n).fill(1));
  expect(distance(multiply(n, vectors, adjoint(n, vectors)), unit)).toBeLessThan(1e-13);
  // Row i of `vectors` is z_i: A Z = Z diag(values) with Z the transpose. Scaled first: squares of tiny numbers vanish.
  const size = largestOf(matrix) || 1;
  const columns = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) columns.set(vectors.subarray(2 * (i * n + j), 2 * (i * n + j) + 2), 2 * (j * n + i));
  }
  const left = multiply(
    n,
    matrix.map((x) => x / size),
    columns,
  );
  const right = multiply(n, columns, diagonalMatrix(Array.from(values, (x) => x / size)));
  expect(distance(left, right)).toBeLessThan(1e-13 * Math.max(1, Math.sqrt(n) / 2));
  return values;
}

/** A matrix with the given eigenvalues and random eigenvectors. */
function withValues(values: readonly number[], seed: number): Float64Array {
  const n = values.length;
  return rotate(n, diagonalMatrix(values), randomUnitary(n, createRandom(seed)));
}

describe("closed forms", () => {
  it("solves 1 x 1", () => {
    expect(Array.from(check(1, new Float64Array([-2.5, 0])))).toEqual([-2.5]);
  });

  it("solves a general 2 x 2: a + b sigma, values a -+ |b|", () => {
    const [a, x, y, z] = [0.3, -0.7, 0.4, 1.1];
    const values = check(2, new Float64Array([a + z, 0, x, -y, x, y, a - z, 0]));
    const length = Math.hypot(x, y, z);
    expect(values[0]).toBeCloseTo(a - length, 14);
    expect(values[1]).toBeCloseTo(a + length, 14);
  });

  it("gives the spin matrix J_x of every spin its values -j ... j", () => {
    for (const n of [2, 5, 18]) {
      const j = (n - 1) / 2;
      const matrix = new Float64Array(2 * n * n);
      for (let i = 0; i + 1 < n; i++) {
        const m = j - i - 1;
        const half = 0.5 * Math.sqrt(j * (j + 1) - m * (m + 1));
        matrix[2 * (i * n + i + 1)] = half;
        matrix[2 * ((i + 1) * n + i)] = half;
      }
      const values = check(n, matrix);
      for (let i = 0; i < n; i++) expect(Math.abs(values[i] - (i - j))).toBeLessThan(1e-13 * n);
    }
  });

  it("gives a ring with flux its Bloch energies 2 cos((2 pi m + flux) / n)", () => {
    const n = 12;
    const flux = 0.7;
    const matrix = new Float64Array(2 * n * n);
    for (let i = 0; i < n; i++) {
      const j = (i + 1) % n;
      matrix.set([Math.cos(flux / n), -Math.sin(flux / n)], 2 * (i * n + j));
      matrix.set([Math.cos(flux / n), Math.sin(flux / n)], 2 * (j * n + i));
    }
    const expected = Array.from({ length: n }, (_, m) => 2 * Math.cos((2 * Math.PI * m + flux) / n));
    expect(distance(check(n, matrix), Float64Array.from(expected).sort())).toBeLessThan(1e-13);
  });
});

describe("random matrices", () => {
  it("has small residuals and orthonormal vectors for n = 1 to 64", () => {
    for (let n = 1; n <= 64; n++) check(n, randomHermitian(n, createRandom(n)));
  });

  it("finds prescribed values", () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -10, max: 10, noNaN: true }), { minLength: 1, maxLength: 24 }),
        fc.integer(),
        (wanted, seed) => {
          const found = check(wanted.length, withValues(wanted, seed));
          expect(distance(found, Float64Array.from(wanted).sort())).toBeLessThan(1e-12);
        },
      ),
      { numRuns: 60, seed: 7 },
    );
  });

  const missing = numpyMissing();
  it.skipIf(missing !== undefined)(`agrees with NumPy${missing === undefined ? "" : ` (skipped: ${missing})`}`, () => {
    const random = createRandom(99);
    const matrices = [2, 3, 7, 18, 31, 50].map((n) => ({ n, matrix: Array.from(randomHermitian(n, random)) }));
    const script = [
      "import sys, json, numpy as np",
      "out = []",
      "for job in json.load(sys.stdin):",
      "    a = np.array(job['matrix']).view(complex).reshape(job['n'], job['n'])",
      "    out.append(np.linalg.eigvalsh(a).tolist())",
      "print(json.dumps(out))",
    ].join("\n");
    const expected = askNumpy(script, matrices) as number[][];
    for (const [k, { n, matrix }] of matrices.entries()) {
      const found = check(n, Float64Array.from(matrix));
      expect(distance(found, Float64Array.from(expected[k]))).toBeLessThan(1e-13 * n);
    }
  });
});

describe("awkward matrices", () => {
  it("solves the zero and the unit matrix", () => {
    for (const n of [1, 2, 9, 18]) {
      expect(largestOf(check(n, new Float64Array(2 * n * n)))).toBe(0);
      check(n, diagonalMatrix(new Array(n).fill(1)));
    }
  });

  it("sorts a diagonal matrix without touching its values", () => {
    const wanted = [3, -1, 0, 3, 1e-30, -1, 7.25];
    expect(Array.from(check(7, diagonalMatrix(wanted)))).toEqual(Array.from(Float64Array.from(wanted).sort()));
  });

  it("solves degenerate and clustered levels", () => {
    check(18, withValues([0, 0, 0, 0, 1, 1, 1, 1, 1, 1, 2, 2, 2, 2, 2, 2, 2, 2], 3));
    check(12, withValues([1, 1 + 1e-15, 1 + 1e-12, 1 + 1e-9, 1 + 1e-6, 1.001, 2, 2, 2 + 1e-14, 3, 3, 3], 4));
    for (const rank of [1, 2, 5]) {
      const values = new Array(17).fill(0).fill(1, 0, rank);
      check(17, withValues(values, rank));
    }
  });

  it("solves graded matrices in both directions", () => {
    for (const step of [1, -1]) {
      const n = 14;
      const matrix = randomHermitian(n, createRandom(5));
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) {
          const power = 10 ** (-1.5 * (step > 0 ? i + j : 2 * n - 2 - i - j));
          matrix[2 * (i * n + j)] *= power;
          matrix[2 * (i * n + j) + 1] *= power;
        }
      }
      check(n, matrix);
    }
  });

  it("solves block-diagonal matrices and isolated couplings", () => {
    const n = 10;
    const matrix = randomHermitian(n, createRandom(6));
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        if (i % 2 !== j % 2) matrix.fill(0, 2 * (i * n + j), 2 * (i * n + j) + 2);
      }
    }
    check(n, matrix);
    const corner = new Float64Array(2 * n * n);
    corner.set([0, 1], 2 * (n - 1));
    corner.set([0, -1], 2 * ((n - 1) * n));
    const values = check(n, corner);
    expect(values[0]).toBeCloseTo(-1, 14);
    expect(values[n - 1]).toBeCloseTo(1, 14);
  });

  it("solves entries down to underflow and up to overflow", () => {
    const base = randomHermitian(9, createRandom(8));
    const reference = check(9, base);
    for (const power of [-1000, -600, -340, -101, -30, 30, 101, 340, 600, 1000]) {
      const scaled = base.map((x) => x * 2 ** power);
      const values = check(9, scaled);
      expect(
        distance(
          values.map((x) => x * 2 ** -power),
          reference,
        ),
      ).toBeLessThan(1e-13);
    }
    // Subnormal numbers, 2^-1074 apart: entries and values are no finer than that.
    const { values } = solve(
      9,
      base.map((x) => x * 2 ** -1060),
    );
    const expected = reference.map((x) => x * 2 ** -1060);
    expect(distance(values, expected)).toBeLessThan(9 * 2 ** -1074);
  });

  it("keeps vectors orthonormal where couplings underflow when squared", () => {
    for (const tiny of [1e-120, 1e-150, 1e-158, 1e-162, 1e-170, 1e-300]) {
      const matrix = randomHermitian(8, createRandom(9));
      for (let i = 0; i < 8; i++) {
        for (let j = 0; j < 8; j++) {
          if (i === j) continue;
          matrix[2 * (i * 8 + j)] *= tiny;
          matrix[2 * (i * 8 + j) + 1] *= tiny;
        }
      }
      check(8, matrix);
      for (let i = 0; i < 8; i++) matrix[2 * (i * 8 + i)] = 1;
      check(8, matrix);
    }
  });

  it("names a number that is not finite", () => {
    for (const bad of [Number.NaN, Number.POSITIVE_INFINITY]) {
      const matrix = diagonalMatrix([1, 2, 3]);
      matrix[2 * 3] = bad;
      expect(() => solve(3, matrix)).toThrow(/not a finite number/);
    }
  });
});
