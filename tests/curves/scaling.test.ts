// scaling.test.ts: do the fits of a resistivity series find what the series was made of, with honest errors?
import { describe, expect, it } from "vitest";
import { randomStream } from "../../src/base/random.js";
import { linearFit, readSeries, type SeriesRow, scalingFit } from "../../src/curves/scaling.js";

const unit = 1e-8; // uohm cm in ohm m
const resistivities = [5, 9, 16, 30, 55].map((x) => x * unit);

/** Rows of a law, with relative noise of the conductivity. */
function rowsOf(law: (rho: number) => number, noise = 0, error = Number.NaN, seed = 1): SeriesRow[] {
  const random = randomStream(seed);
  return resistivities.map((resistivity) => ({
    resistivity,
    resistivityError: Number.NaN,
    residual: resistivity,
    conductivity: law(resistivity) * (1 + noise * random.normal()),
    error: error * Math.abs(law(resistivity)),
  }));
}

describe("linear fit", () => {
  it("is the textbook line through points, unweighted: slope and its error by hand", () => {
    // y = 1, 2, 4 at x = 0, 1, 2: slope 3/2, intercept 5/6, residuals 1/6, -1/3, 1/6: s^2 = 1/6, errors sqrt(s^2/2), sqrt(s^2 5/6).
    const x = [0, 1, 2];
    const fit = linearFit([x, [1, 1, 1]], [1, 2, 4], [Number.NaN, Number.NaN, Number.NaN]);
    expect(fit?.coefficients[0]).toBeCloseTo(1.5, 14);
    expect(fit?.coefficients[1]).toBeCloseTo(5 / 6, 14);
    expect(fit?.errors[0]).toBeCloseTo(Math.sqrt(1 / 12), 14);
    expect(fit?.errors[1]).toBeCloseTo(Math.sqrt(5 / 36), 14);
  });

  it("weighs with the errors given: the mean of two values is the weighted mean, its error 1/sqrt(sum 1/e^2) where they agree", () => {
    const fit = linearFit([[1, 1]], [10, 10.2], [1, 2]);
    expect(fit?.coefficients[0]).toBeCloseTo((10 + 10.2 / 4) / 1.25, 13);
    expect(fit?.errors[0]).toBeCloseTo(1 / Math.sqrt(1.25), 13);
    // Where they do not, the error grows by sqrt(chi^2): chi^2 = 100^2 / (1 + 4).
    const apart = linearFit([[1, 1]], [10, 110], [1, 2]);
    expect(apart?.errors[0]).toBeCloseTo(Math.sqrt(2000 / 1.25), 10);
  });

  it("refuses columns that are alike, and fewer rows than columns", () => {
    expect(
      linearFit(
        [
          [1, 1, 1],
          [2, 2, 2],
        ],
        [1, 2, 3],
        [1, 1, 1],
      ),
    ).toBeUndefined();
    expect(linearFit([[1], [2]], [1], [1])).toBeUndefined();
  });
});

describe("a resistivity series", () => {
  const constants = (rows: SeriesRow[]) => readSeries(rows).constant;

  it("of constant conductivity is told from one of constant angle, with errors and without", () => {
    for (const error of [0.05, Number.NaN]) {
      expect(constants(rowsOf(() => 2e5, 0.04, error))).toBe("conductivity");
      expect(constants(rowsOf((rho) => 0.02 / rho, 0.04, error))).toBe("angle");
      expect(constants(rowsOf((rho) => 1e-10 / rho ** 2 + 1e6 * rho, 0.04, error))).toBe("neither");
    }
    expect(readSeries(rowsOf(() => 2e5)).conductivity.mean).toBeCloseTo(2e5, 6);
    expect(readSeries(rowsOf((rho) => 0.02 / rho)).product.mean).toBeCloseTo(0.02, 12);
  });

  it("over resistivities that are nearly alike decides nothing", () => {
    const rows = rowsOf(() => 2e5).map((row, i) => ({ ...row, resistivity: (10 + i / 4) * unit }));
    expect(constants(rows)).toBe("undecided");
  });
});

describe("rho_H = a rho_0 + b rho^2 (Tian, Ye, Jin 2009)", () => {
  const [a, b] = [0.003, 1.8e5];
  const law = (residual: number, rho: number): number => (a * residual + b * rho ** 2) / rho ** 2;

  it("is found exactly in data made of it: one sample warmed (rho_0 fixed), and samples of different rho_0", () => {
    const warmed = resistivities.map((rho): SeriesRow => {
      return {
        resistivity: rho,
        resistivityError: 0,
        residual: 4 * unit,
        conductivity: law(4 * unit, rho),
        error: Number.NaN,
      };
    });
    const samples = rowsOf((rho) => law(rho, rho));
    for (const rows of [warmed, samples]) {
      const fit = scalingFit(rows);
      expect((fit?.skew ?? 0) / a).toBeCloseTo(1, 10);
      expect((fit?.intrinsic ?? 0) / b).toBeCloseTo(1, 10);
    }
  });

  it("has errors that hold the truth in two of them about 95 times in 100 (300 noisy series)", () => {
    let inside = 0;
    for (let seed = 0; seed < 300; seed++) {
      const fit = scalingFit(rowsOf((rho) => law(rho, rho), 0.05, 0.05, seed + 1));
      if (fit !== undefined && Math.abs(fit.intrinsic - b) < 2 * fit.intrinsicError) inside++;
    }
    expect(inside).toBeGreaterThan(0.92 * 300);
    expect(inside).toBeLessThan(0.995 * 300);
  });

  it("is not tried with two rows, nor where rho_0 / rho^2 is the same", () => {
    const rows = rowsOf((rho) => law(rho, rho));
    expect(scalingFit(rows.slice(0, 2))).toBeUndefined();
    expect(scalingFit(rows.map((row) => ({ ...row, residual: row.resistivity ** 2 })))).toBeUndefined();
  });
});
