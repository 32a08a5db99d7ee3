// any-result.ts: which result of which command is this text, and is enough of it there to be shown?
import { dataFault } from "../base/errors.js";
import type { CurvesResult } from "../curves/result.js";
import type { AngleResult } from "../studies/angle-result.js";
import type { ConvergeResult } from "../studies/converge-result.js";
import type { DopeResult } from "../studies/dope-result.js";
import type { InspectResult } from "../studies/inspect-result.js";
import type { LocateResult } from "../studies/locate-result.js";
import type { RequestResult } from "../studies/request-result.js";
import type { SeriesResult } from "../studies/series-result.js";
import { parseCurves } from "./parse.js";

/** A result that a page can show, told apart by its format. */
export type AnyResult =
  | CurvesResult
  | AngleResult
  | ConvergeResult
  | DopeResult
  | InspectResult
  | LocateResult
  | RequestResult
  | SeriesResult;

const formats = ["curves", "angle", "converge", "dope", "inspect", "locate", "request", "series"];

/** Lists whose null is an answer, not a number that could not be known. */
const nullMeansNone = new Set(["substituted", "points", "plain_needs", "refined_needs"]);

/** In lists of numbers null is what NaN was written as; everywhere else it stays. */
function withGaps(item: unknown, name: string): unknown {
  if (Array.isArray(item)) {
    const numbers = item.every((each) => each === null || typeof each === "number");
    if (numbers && !nullMeansNone.has(name)) return item.map((each) => each ?? Number.NaN);
    return item.map((each) => withGaps(each, name));
  }
  if (item === null || typeof item !== "object") return item;
  return Object.fromEntries(Object.entries(item).map(([key, value]) => [key, withGaps(value, key)]));
}

const cure =
  "Give JSON files that the commands wrote with --out: curves.json, dope.json, converge.json, locate.json, ...";

/**
 * Reads a result of any command. A curves.json is checked field by field; of the others format and version are, and what is wrong inside
 * shows when they are drawn. Throws a data Fault.
 */
export function parseResult(text: string, source: string): AnyResult {
  let item: unknown;
  try {
    item = JSON.parse(text.replace(/^\ufeff/, ""));
  } catch (cause) {
    throw dataFault(`${source} is not JSON.`, cure, cause);
  }
  const format = typeof item === "object" && item !== null && "format" in item ? String(item.format) : "none";
  const known = formats.some((name) => format === `tidegauge.${name}/1`);
  if (!known) throw dataFault(`${source}: format "${format}" is no result that a page can show.`, cure);
  return format === "tidegauge.curves/1" ? parseCurves(text, source) : (withGaps(item, "") as AnyResult);
}
