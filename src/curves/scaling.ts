// scaling.ts: how does a measured conductivity run with resistivity? Least squares with errors; no k points, no files.

/** A linear least-squares fit. */
export interface LinearFit {
  readonly coefficients: readonly number[];
  /** One standard error each; NaN where neither errors nor more rows than coefficients were given. */
  readonly errors: readonly number[];
  /** Weighted with the given errors per degree of freedom; NaN without errors or freedom. */
  readonly chi2PerFreedom: number;
}

const usable = (errors: readonly number[]): boolean => errors.every((error) => Number.isFinite(error) && error > 0);

/** Inverse of the normal matrix of one or two columns; undefined where it is singular to six digits. */
function inverted(normal: readonly (readonly number[])[]): number[][] | undefined {
  if (normal.length === 1) return normal[0][0] > 0 ? [[1 / normal[0][0]]] : undefined;
  const [[a, b], [, d]] = normal;
  const determinant = a * d - b * b;
  if (!(determinant > 1e-12 * a * d)) return undefined;
  return [
    [d / determinant, -b / determinant],
    [-b / determinant, a / determinant],
  ];
}

/**
 * Fits value = sum_j c_j columns[j] with one or two columns. With errors on all values the fit is weighted; the standard errors are those of
 * the errors given, made larger by sqrt(chi^2 per freedom) where that exceeds 1 (the usual practice where data scatter more than their
 * errors say). Without them the scatter gives the errors. Undefined where the rows are too few or the columns alike.
 */
export function linearFit(
  columns: readonly (readonly number[])[],
  values: readonly number[],
  errors: readonly number[],
): LinearFit | undefined {
  const freedom = values.length - columns.length;
  if (freedom < 0) return undefined;
  const weighted = usable(errors);
  const weights = values.map((_, i) => (weighted ? errors[i] ** -2 : 1));
  const sumOver = (f: (i: number) => number): number => values.reduce((sum, _, i) => sum + weights[i] * f(i), 0);
  const inverse = inverted(columns.map((a) => columns.map((b) => sumOver((i) => a[i] * b[i]))));
  if (inverse === undefined) return undefined;
  const right = columns.map((a) => sumOver((i) => a[i] * values[i]));
  const coefficients = inverse.map((row) => row.reduce((sum, entry, j) => sum + entry * right[j], 0));
  const squares = sumOver((i) => (values[i] - columns.reduce((sum, a, j) => sum + a[i] * coefficients[j], 0)) ** 2);
  const perFreedom = freedom > 0 ? squares / freedom : Number.NaN;
  const scale = weighted ? Math.max(1, freedom > 0 ? perFreedom : 1) : perFreedom;
  return {
    coefficients,
    errors: inverse.map((row, j) => Math.sqrt(row[j] * scale)),
    chi2PerFreedom: weighted ? perFreedom : Number.NaN,
  };
}

/** Rows of a resistivity series, SI units: resistivity, residual resistivity, conductivity of the moment, its error (NaN: not given). */
export interface SeriesRow {
  readonly resistivity: number;
  readonly resistivityError: number;
  readonly residual: number;
  readonly conductivity: number;
  readonly error: number;
}

/** One number for the whole series. */
export interface Constancy {
  readonly mean: number;
  readonly error: number;
  /** Root mean square deviation from the mean over the mean. */
  readonly spread: number;
  readonly chi2PerFreedom: number;
}

function constancy(values: readonly number[], errors: readonly number[]): Constancy {
  const fit = linearFit([values.map(() => 1)], values, errors);
  const mean = fit?.coefficients[0] ?? Number.NaN;
  const square = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length;
  return {
    mean,
    error: fit?.errors[0] ?? Number.NaN,
    spread: Math.sqrt(square) / Math.abs(mean),
    chi2PerFreedom: fit?.chi2PerFreedom ?? Number.NaN,
  };
}

/** Which of the two keeps still across the series. */
export type Constant = "conductivity" | "angle" | "neither" | "undecided";

export interface SeriesReading {
  readonly conductivity: Constancy;
  /** Of conductivity times resistivity: the angle without the factor 2e/hbar. */
  readonly product: Constancy;
  readonly constant: Constant;
  /** Largest over smallest resistivity. */
  readonly span: number;
}

/** Below this span of resistivities the two cannot be told apart. */
const leastSpan = 1.3;
/** One must keep stiller than the other by this factor. */
const clearly = 2;
/** A spread (or, of chi^2 per freedom, its square) above which nothing is called constant. */
const mostSpread = 0.3;
const mostChi2 = 4;

/** Is the conductivity or the angle constant across the series? */
export function readSeries(rows: readonly SeriesRow[]): SeriesReading {
  const values = rows.map((row) => row.conductivity);
  const products = rows.map((row) => row.conductivity * row.resistivity);
  const productErrors = rows.map((row) =>
    Math.hypot(row.error * row.resistivity, row.conductivity * (row.resistivityError || 0)),
  );
  const conductivity = constancy(
    values,
    rows.map((row) => row.error),
  );
  const product = constancy(products, productErrors);
  const resistivities = rows.map((row) => row.resistivity);
  const span = Math.max(...resistivities) / Math.min(...resistivities);
  const sure = Number.isFinite(conductivity.chi2PerFreedom) && Number.isFinite(product.chi2PerFreedom);
  const [a, b] = sure
    ? [Math.sqrt(conductivity.chi2PerFreedom), Math.sqrt(product.chi2PerFreedom)]
    : [conductivity.spread, product.spread];
  const limit = sure ? Math.sqrt(mostChi2) : mostSpread;
  const better = a < b ? "conductivity" : "angle";
  const decided = span >= leastSpan && Math.max(a, b) >= clearly * Math.min(a, b);
  const constant = span < leastSpan ? "undecided" : Math.min(a, b) > limit ? "neither" : decided ? better : "undecided";
  return { conductivity, product, constant, span };
}

/** Fit of rho_H = a rho_0 + b rho^2. */
export interface ScalingFit {
  /** Skew part: dimensionless, in (hbar/e) for a moment. */
  readonly skew: number;
  readonly skewError: number;
  /** Part that does not depend on scattering: intrinsic and side jump, a conductivity. */
  readonly intrinsic: number;
  readonly intrinsicError: number;
  readonly chi2PerFreedom: number;
}

/**
 * The published scaling of Y. Tian, L. Ye, X. Jin, Phys. Rev. Lett. 103, 087206 (2009), rho_H = a rho_0 + b rho^2, divided by rho^2:
 * conductivity = a rho_0 / rho^2 + b. Undefined with fewer than three rows, or where rho_0 / rho^2 is the same in all.
 */
export function scalingFit(rows: readonly SeriesRow[]): ScalingFit | undefined {
  if (rows.length < 3) return undefined;
  const fit = linearFit(
    [rows.map((row) => row.residual / row.resistivity ** 2), rows.map(() => 1)],
    rows.map((row) => row.conductivity),
    rows.map((row) => row.error),
  );
  if (fit === undefined) return undefined;
  const [skew, intrinsic] = fit.coefficients;
  const [skewError, intrinsicError] = fit.errors;
  return { skew, skewError, intrinsic, intrinsicError, chi2PerFreedom: fit.chi2PerFreedom };
}
