// json.ts: how is a result written as JSON that is the same for the same content and readable line by line?
import type { CurvesResult } from "../curves/result.js";

/** Keys of curves.json in the order in which they are read; keys not named here follow in alphabetical order. */
const order = [
  "format",
  "version",
  "grid",
  "title",
  "sha256",
  "bands",
  "divisions",
  "periodic",
  "points",
  "job",
  "reference_eV",
  "level_eV",
  "temperature_K",
  "electrons_per_cell",
  "doping_per_cell",
  "doping_density",
  "doping_density_unit",
  "states_per_eV",
  "responses",
  "drude",
  "name",
  "unit",
  "value",
  "error",
  "error_sampling",
  "error_model",
  "thermal",
  "sampling",
  "method",
  "stored",
  "samples",
  "deepest",
  "notes",
];
/** `points` is a count inside `grid` and the last table of a response. */
const rank = new Map(order.map((key, at) => [key, at]));
const rankOf = (key: string, inResponse: boolean): number =>
  inResponse && key === "points" ? order.indexOf("error_model") + 0.5 : (rank.get(key) ?? order.length);

function orderedFields(item: object): [string, unknown][] {
  const inResponse = "value" in item;
  return Object.entries(item)
    .filter(([, value]) => value !== undefined)
    .sort(([a], [b]) => rankOf(a, inResponse) - rankOf(b, inResponse) || (a < b ? -1 : 1));
}

function written(item: unknown, indent: string): string {
  if (typeof item === "number") return Number.isFinite(item) ? String(item) : "null";
  if (item === null || typeof item !== "object") return JSON.stringify(item) ?? "null";
  const deeper = `${indent}  `;
  if (Array.isArray(item)) {
    if (item.every((value) => typeof value === "number"))
      return `[${item.map((value) => written(value, "")).join(",")}]`;
    return `[\n${item.map((value) => deeper + written(value, deeper)).join(",\n")}\n${indent}]`;
  }
  const fields = orderedFields(item).map(
    ([key, value]) => `${deeper}${JSON.stringify(key)}: ${written(value, deeper)}`,
  );
  return fields.length === 0 ? "{}" : `{\n${fields.join(",\n")}\n${indent}}`;
}

/**
 * Any result as JSON with a final line end: fixed order of keys (so that equal content gives equal bytes), one line for each
 * row of numbers, numbers in the shortest form that reads back unchanged, `null` for what is not finite.
 */
export function resultJson(result: object): string {
  return `${written(result, "")}\n`;
}

/** `curves.json`; see resultJson. Tables are [temperature][level], one line per temperature. */
export function curvesJson(result: CurvesResult): string {
  return resultJson(result);
}
