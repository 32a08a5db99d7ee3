// csv.ts: what does curves.csv look like?
import { stringify } from "csv-stringify/sync";
import type { CurvesResult, DrudeCurve } from "../curves/result.js";
import { cleanLine } from "./clean.js";

/**
 * Shortest decimal form that reads back as the same double. Where there is no number: `NaN`, the one spelling that Python,
 * pandas, NumPy (genfromtxt and loadtxt), gnuplot, R and Julia all read as "not a number". An empty cell would not do: awk,
 * JavaScript and spreadsheet formulas silently read it as 0, and an error bar of zero is the opposite of an unknown one.
 */
export function csvNumber(value: number): string {
  return Number.isFinite(value) ? String(value) : "NaN";
}

/** A heading that no spreadsheet takes for a formula. */
export function heading(text: string): string {
  return cleanLine(text).replace(/^[=+\-@]+/, "");
}

/** Everything that has a bar: the responses, their Mott integrals where asked for, and the Drude weight. */
function barredOf({ responses, drude = [] }: CurvesResult): DrudeCurve[] {
  const thermal = responses.flatMap(({ name, thermal }) => (thermal ? [{ name: `${name} thermal`, ...thermal }] : []));
  return [...responses, ...thermal, ...drude];
}

/** Headings of `curvesCsv`, in order. */
export function curvesColumns(result: CurvesResult): string[] {
  const columns = barredOf(result).flatMap(({ name, unit }) => [
    heading(`${name} [${unit}]`),
    heading(`${name} error`),
  ]);
  return [
    "temperature_K",
    "level_eV",
    "absolute_eV",
    "electrons_per_cell",
    "doping_per_cell",
    `doping_${result.doping_density_unit}`,
    "states_per_eV",
    ...columns,
  ];
}

/**
 * `curves.csv`: one heading line, then one row per temperature and level (temperature outermost), separated by commas, lines
 * ended by "\n", numbers in the shortest form that reads back unchanged. No comment lines: a loader reads the file as it is,
 * so the notes stand in curves.json and under the picture. `absolute_eV` is reference + level without its round-off (1e-12 eV).
 */
export function curvesCsv(result: CurvesResult): string {
  const rows = result.temperature_K.flatMap((temperatureK, t) =>
    result.level_eV.map((levelEv, e) =>
      [
        temperatureK,
        levelEv,
        Number((result.reference_eV + levelEv).toFixed(12)),
        result.electrons_per_cell[t][e],
        result.doping_per_cell[t][e],
        result.doping_density[t][e],
        result.states_per_eV[t][e],
        ...barredOf(result).flatMap(({ value, error }) => [value[t][e], error[t][e]]),
      ].map(csvNumber),
    ),
  );
  return stringify([curvesColumns(result), ...rows]);
}
