// converge-csv.ts: what does converge.csv look like?
import { stringify } from "csv-stringify/sync";
import type { ConvergeResult } from "../studies/converge-result.js";
import { cleanLine } from "./clean.js";
import { meshName } from "./converge-text.js";
import { csvNumber } from "./csv.js";

/** Headings of `convergeCsv`, in order. */
export const convergeColumns = [
  "response",
  "unit",
  "temperature_K",
  "mesh",
  "points",
  "level_eV",
  "plain",
  "plain_off",
  "refined",
  "refined_off",
] as const;

/**
 * `converge.csv`: one row per response, temperature, mesh (densest first) and level. `*_off`: on the densest mesh the distance within which the
 * truth is expected about 95 times in 100, on others the root mean square distance to the densest mesh's best value; `NaN` where there is no number.
 */
export function convergeCsv(result: ConvergeResult): string {
  const rows = result.responses.flatMap(({ name, unit, curves }) =>
    curves.flatMap((curve) =>
      result.meshes.flatMap(({ divisions, points }, m) =>
        result.level_eV.map((level, e) => {
          const { plain, refined, plain_off: plainOff, refined_off: refinedOff } = curve.meshes[m];
          const off = m === 0 ? [curve.plain.bound[e], curve.refined?.bound[e]] : [plainOff[e], refinedOff[e]];
          const numbers = [plain[e], off[0] ?? Number.NaN, refined[e] ?? Number.NaN, off[1] ?? Number.NaN].map(
            csvNumber,
          );
          const heads = [cleanLine(name).replace(/^[=+\-@]+/, ""), cleanLine(unit).replace(/^[=+\-@]+/, "")];
          return [...heads, csvNumber(curve.temperature_K), meshName(divisions), points, csvNumber(level), ...numbers];
        }),
      ),
    ),
  );
  return stringify([[...convergeColumns], ...rows]);
}
