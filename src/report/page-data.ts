// page-data.ts: which part of the results does a page carry along for its script, and how is it written so that it cannot be markup?
import type { CurvesResult, Table } from "../curves/result.js";

/** What the script of a page reads. */
export interface PageData {
  readonly curves: readonly CurvesResult[];
}

/** Fields that the page does not show are left out; the error bar of both causes together stays. */
function shownPart(result: CurvesResult): CurvesResult {
  const responses = result.responses.map(({ name, unit, value, error, points }) => {
    return { name, unit, value, error, points, error_sampling: [], error_model: [] };
  });
  const { drude: _drude, ...rest } = result;
  return { ...rest, responses };
}

/** The data as JSON that may stand inside a script element: no character of it can end the element or begin another. */
export function pageDataJson(curves: readonly CurvesResult[]): string {
  const inHex = (character: string): string => `\\u${character.charCodeAt(0).toString(16).padStart(4, "0")}`;
  return JSON.stringify({ curves: curves.map(shownPart) }).replace(/[<>&\u2028\u2029]/g, inHex);
}

const withGaps = (table: readonly (readonly (number | null)[])[]): Table =>
  table.map((row) => row.map((value) => value ?? Number.NaN));

/** Reads what pageDataJson wrote: numbers that were not finite are NaN again. */
export function readPageData(text: string): PageData {
  const data = JSON.parse(text) as PageData;
  const curves = data.curves.map((result): CurvesResult => {
    const responses = result.responses.map((each) => {
      return { ...each, value: withGaps(each.value), error: withGaps(each.error), points: withGaps(each.points) };
    });
    return { ...result, responses, states_per_eV: withGaps(result.states_per_eV) };
  });
  return { curves };
}
