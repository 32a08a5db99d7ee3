// request-csv.ts: what does request.csv look like: the k points to compute, for any program that takes a list?
import { stringify } from "csv-stringify/sync";
import { type RequestResult, requestedPoints } from "../studies/request-result.js";
import { csvNumber } from "./csv.js";

/**
 * `request.csv`: one row for each k point, best cells first and in the order in which a patch stores them: k1, k2, k3 (fractional, in
 * b1, b2, b3), the flat index of the cell, and the point's weight in the zone (those of the whole mesh sum to 1).
 */
export function requestCsv(result: RequestResult): string {
  const rows = requestedPoints(result).map(({ k, cell, weight }) => [
    ...k.map(csvNumber),
    String(cell),
    csvNumber(weight),
  ]);
  return stringify([["k1", "k2", "k3", "cell", "weight"], ...rows]);
}
