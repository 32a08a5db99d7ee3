// resistivity-series.ts: what do the measured values of one response say when they form a series of resistivities?
import { readSeries, type SeriesRow, scalingFit } from "../curves/scaling.js";
import type { AngleResponse, MeasuredRow, SeriesResult } from "./angle-result.js";

const leastRows = 3;

/** A series for each response with at least three measured values whose resistivities are known and differ. */
export function seriesOf(measured: readonly MeasuredRow[], responses: readonly AngleResponse[]): SeriesResult[] {
  return responses.flatMap((response) => {
    const rows = measured.filter((row) => row.response === response.name && row.resistivity !== null);
    const distinct = new Set(rows.map(({ resistivity }) => resistivity));
    return rows.length < leastRows || distinct.size < 2 ? [] : [seriesResult(rows, response)];
  });
}

function seriesResult(rows: readonly MeasuredRow[], response: AngleResponse): SeriesResult {
  const { si_per_unit: si, multiplier, name } = response;
  const orNaN = (value: number | null): number => value ?? Number.NaN;
  const [residual, ...others] = new Set(rows.map((row) => row.residual_from));
  const inSi = rows.map((row): SeriesRow => {
    return {
      resistivity: orNaN(row.resistivity),
      resistivityError: orNaN(row.resistivity_error),
      residual: orNaN(row.residual),
      conductivity: row.value * si,
      error: orNaN(row.error) * si,
    };
  });
  const read = readSeries(inSi);
  const fit = scalingFit(inSi);
  const orNull = (value: number): number | null => (Number.isNaN(value) ? null : value);
  return {
    response: name,
    rows: rows.length,
    span: read.span,
    constant: read.constant,
    conductivity: read.conductivity.mean / si,
    conductivity_error: read.conductivity.error / si,
    conductivity_spread: read.conductivity.spread,
    angle: multiplier * read.product.mean,
    angle_error: multiplier * read.product.error,
    angle_spread: read.product.spread,
    scaling:
      fit === undefined
        ? null
        : {
            skew_angle: multiplier * fit.skew,
            skew_angle_error: multiplier * fit.skewError,
            intrinsic: fit.intrinsic / si,
            intrinsic_error: fit.intrinsicError / si,
            chi2_per_freedom: orNull(fit.chi2PerFreedom),
            residual: residual === null || others.length > 0 ? "mixed" : residual,
          },
  };
}
