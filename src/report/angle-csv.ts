// angle-csv.ts: what do angle.csv and measured.csv look like?
import { stringify } from "csv-stringify/sync";
import type { AngleResult } from "../studies/angle-result.js";
import { csvNumber, heading } from "./csv.js";

const numberOrNaN = (value: number | null): string => csvNumber(value ?? Number.NaN);

/** `angle.csv`: one row for each response and temperature; resistivity in the unit of its heading, "NaN" where there is no number. */
export function angleCsv(result: AngleResult): string {
  const columns = [
    "response",
    "unit",
    "temperature_K",
    `resistivity [${result.resistivity_unit}]`,
    "resistivity error",
    "conductivity",
    "conductivity error",
    "angle",
    "angle error",
    "tau_fs",
    "tau error",
  ];
  const rows = result.responses.flatMap(({ name, unit, rows }) =>
    rows.map((row, i) => [
      heading(name),
      heading(unit),
      ...[
        row.temperature_K,
        row.resistivity,
        row.resistivity_error,
        row.conductivity,
        row.conductivity_error,
        row.angle,
        row.angle_error,
        result.scattering[i].tau_fs,
        result.scattering[i].tau_error_fs,
      ].map(csvNumber),
    ]),
  );
  return stringify([columns, ...rows]);
}

/** `measured.csv`: the measured values in the response's unit, each beside the intrinsic one, with what the comparison says. */
export function measuredCsv(result: AngleResult): string {
  const columns = [
    "label",
    "response",
    "unit",
    "temperature_K",
    `resistivity [${result.resistivity_unit}]`,
    "value",
    "error",
    "intrinsic",
    "intrinsic error",
    "ratio",
    "reading",
    "level_shift_eV",
    "factor",
  ];
  const rows = result.measured.map((row) => [
    heading(row.label),
    heading(row.response),
    heading(result.responses.find(({ name }) => name === row.response)?.unit ?? ""),
    csvNumber(row.temperature_K),
    ...[row.resistivity, row.value, row.error, row.intrinsic, row.intrinsic_error, row.ratio].map(numberOrNaN),
    row.verdict,
    ...[row.shift_eV, row.factor].map(numberOrNaN),
  ]);
  return stringify([columns, ...rows]);
}
