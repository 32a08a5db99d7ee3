// measurements.ts: measured resistivities and conductivities, from the options and tables of `angle` to numbers in SI units.
import { responseUnit } from "../bands/units.js";
import { dataFault, isFault, usageFault } from "../base/errors.js";
import { linearAt } from "../curves/interpolate.js";
import type { GridFacts } from "../grid/grid.js";
import type { ResistivityRow } from "./angle-result.js";
import { type CsvTable, columnWords, findColumn, numberAt, positiveAt, readTable, type TableRow } from "./csv-table.js";
import { parseResistivity, type ResistivityUnit, resistivityUnit } from "./resistivity.js";

const temperatureNames = ["temperature", "temperature k", "t", "t k"];
const resistivityNames = ["resistivity", "rho", "sheet resistance"];
const resistivityErrorNames = ["resistivity error", "rho error", "sheet resistance error"];

/** The carrier of a response: "spin:xy:z" -> "spin". */
export const carrierOf = (response: string): string => response.split(":")[0];

/** Measured resistivity against temperature, or one value. Rows ascend in temperature. */
export interface ResistivitySource {
  readonly rows: readonly ResistivityRow[];
  /** At a temperature: straight lines between rows, beyond the ends their values. */
  at(temperatureK: number): { value: number; error: number };
}

type Layer = Pick<GridFacts, "periodic">;

function checkSheet(sheet: boolean, { periodic }: Layer, where: string): void {
  if (sheet === (periodic === 2)) return;
  throw usageFault(
    periodic === 2 ? `${where}: a resistivity of bulk, for a layer` : `${where}: a sheet resistance, for a crystal`,
    periodic === 2
      ? "Give the sheet resistance of one layer, e.g. in ohm (resistivity divided by the layer's thickness)."
      : "Give the resistivity, e.g. in uohm cm (sheet resistance times thickness).",
  );
}

/** The unit of a column of resistivities. Throws a Fault naming file, line and column. */
function unitOfColumn(table: CsvTable, index: number, facts: Layer): ResistivityUnit {
  const { heading, unit } = table.columns[index];
  const found = resistivityUnit(unit);
  const where = `${table.source}, line 1, ${columnWords(table, index)}`;
  if (found === undefined)
    throw dataFault(
      unit === "" ? `${where}: the unit is missing` : `${where}: "${unit}" is no unit of resistivity`,
      `Write it in brackets, e.g. "${heading.replace(/\s*\[.*$/, "")} [${facts.periodic === 2 ? "ohm" : "uohm cm"}]".`,
    );
  checkSheet(found.sheet, facts, where);
  return found;
}

/** The factor of a column of errors: its own unit, or that of what it belongs to. */
function errorFactor(table: CsvTable, index: number, of: ResistivityUnit, facts: Layer): number {
  return index < 0 || table.columns[index].unit === "" ? of.factor : unitOfColumn(table, index, facts).factor;
}

/** One value for every temperature. */
export function singleResistivity(text: string, facts: Layer): ResistivitySource {
  const { value, error, sheet } = parseResistivity(text);
  checkSheet(sheet, facts, `--resistivity "${text}"`);
  return { rows: [{ temperature_K: null, value, error }], at: () => ({ value, error }) };
}

/** Columns temperature_K, resistivity [unit] and, if wanted, error. Throws Faults naming file, line and column. */
export function tableResistivity(table: CsvTable, facts: Layer): ResistivitySource {
  const temperature = findColumn(table, temperatureNames);
  const resistivity = findColumn(table, resistivityNames);
  const error = findColumn(table, ["error", ...resistivityErrorNames]);
  for (const [index, name] of [
    [temperature, "temperature_K"],
    [resistivity, `resistivity [${facts.periodic === 2 ? "ohm" : "uohm cm"}]`],
  ] as const)
    if (index < 0) throw missingColumn(table, name);
  checkKelvin(table, temperature);
  const unit = unitOfColumn(table, resistivity, facts);
  const factor = errorFactor(table, error, unit, facts);
  const rows = table.rows.map((row) => ({
    temperature_K: temperatureAt(table, row, temperature),
    value: positiveAt(table, row, resistivity) * unit.factor,
    error: error < 0 ? 0 : Math.abs(numberAt(table, row, error) || 0) * factor,
  }));
  rows.sort((a, b) => a.temperature_K - b.temperature_K);
  const twice = rows.findIndex((row, i) => i > 0 && row.temperature_K === rows[i - 1].temperature_K);
  if (twice >= 0)
    throw dataFault(
      `${table.source}: two resistivities at ${rows[twice].temperature_K} K`,
      "Keep one line for each temperature; one file is one sample.",
    );
  const kelvin = rows.map((row) => row.temperature_K);
  const along = (at: number, of: (row: (typeof rows)[0]) => number): number =>
    linearAt({ x: kelvin, y: rows.map(of) }, at);
  return { rows, at: (k) => ({ value: along(k, (row) => row.value), error: along(k, (row) => row.error) }) };
}

const missingColumn = (table: CsvTable, name: string): Error =>
  dataFault(
    `${table.source}, line 1: no column "${name}" (found ${table.columns.map(({ heading }) => `"${heading}"`).join(", ")})`,
    `Name the columns in the first line, the unit in brackets, e.g. "${name}".`,
  );

function checkKelvin(table: CsvTable, index: number): void {
  const { unit } = table.columns[index];
  if (unit !== "" && unit !== "K")
    throw dataFault(`${table.source}, line 1, ${columnWords(table, index)}: not in kelvin`, "Give temperatures in K.");
}

function temperatureAt(table: CsvTable, row: TableRow, index: number): number {
  const value = numberAt(table, row, index);
  if (value >= 0 && value <= 100000) return value;
  throw dataFault(
    `${table.source}, line ${row.line}, ${columnWords(table, index)}: "${row.cells[index]}" is no temperature in kelvin`,
    "Give a temperature from 0 K on in every line.",
  );
}

/** A line of the table of measured values. */
export interface Measurement {
  readonly line: number;
  readonly label: string;
  readonly response: string;
  readonly temperatureK: number;
  /** A conductivity in the response's unit, or an angle. */
  readonly value: number;
  /** NaN: none given. */
  readonly error: number;
  readonly kind: "conductivity" | "angle";
  /** ohm m or ohm, NaN: none given. */
  readonly resistivity: number;
  readonly resistivityError: number;
  readonly residual: number;
}

/** What a table of measured values is read against. */
export interface MeasuredAgainst {
  readonly facts: GridFacts;
  /** Responses computed, with their carriers and units. */
  readonly responses: readonly { readonly name: string; readonly carrier: string; readonly unit: string }[];
  /** For lines without a temperature. */
  readonly temperatureK: number;
}

/**
 * Columns: `value [unit]` (a conductivity) or `angle` (a number, or [%]); if wanted `error`, response, temperature_K, label, `resistivity [unit]`,
 * `resistivity error`, `residual [unit]`. Throws Faults naming file, line and column.
 */
export function readMeasurements(source: string, against: MeasuredAgainst): Measurement[] {
  const table = readTable("--measured", source);
  return table.rows.map(measurementReader(table, against));
}

function measurementReader(table: CsvTable, against: MeasuredAgainst): (row: TableRow) => Measurement {
  const { facts, responses } = against;
  const find = (...names: string[]): number => findColumn(table, names);
  const [value, angle] = [find("value", "conductivity"), find("angle")];
  if (value < 0 === angle < 0)
    throw value < 0
      ? missingColumn(table, `value [${responses[0].unit}]`)
      : dataFault(
          `${table.source}, line 1: both "value" and "angle" are given`,
          "Keep one of them: either conductivities or angles.",
        );
  const [main, kind] = value >= 0 ? ([value, "conductivity"] as const) : ([angle, "angle"] as const);
  const error = find("error", kind === "angle" ? "angle error" : "value error", "conductivity error");
  const [name, label, temperature] = [find("response"), find("label", "sample"), findColumn(table, temperatureNames)];
  if (temperature >= 0) checkKelvin(table, temperature);
  const resistivity = findColumn(table, resistivityNames);
  const resistivityError = findColumn(table, resistivityErrorNames);
  const residual = find("residual", "residual resistivity", "rho0", "rho 0");
  const scaleOf = mainScale(table, main, kind, facts);
  const along = (row: TableRow, index: number): number =>
    index < 0 ? Number.NaN : positiveAt(table, row, index) * unitOfColumn(table, index, facts).factor;
  const ofResistivity = (row: TableRow): number =>
    resistivityError < 0
      ? Number.NaN
      : numberAt(table, row, resistivityError) *
        errorFactor(table, resistivityError, unitOfColumn(table, resistivity, facts), facts);
  return (row) => {
    const response = responseAt(table, row, name, responses);
    const scale = scaleOf(response);
    const measured = numberAt(table, row, main);
    if (Number.isNaN(measured))
      throw dataFault(`${table.source}, line ${row.line}, ${columnWords(table, main)}: empty`, "Give a number.");
    return {
      line: row.line,
      label: label < 0 ? "" : row.cells[label],
      response: response.name,
      temperatureK: temperature < 0 ? against.temperatureK : temperatureAt(table, row, temperature),
      value: measured * scale,
      error: error < 0 ? Number.NaN : Math.abs(numberAt(table, row, error) * scale) || Number.NaN,
      kind,
      resistivity: along(row, resistivity),
      resistivityError: resistivity < 0 ? Number.NaN : ofResistivity(row),
      residual: along(row, residual),
    };
  };
}

type Known = MeasuredAgainst["responses"][0];

function responseAt(table: CsvTable, row: TableRow, index: number, responses: readonly Known[]): Known {
  if (index < 0) return responses[0];
  const wanted = row.cells[index];
  const found = responses.find(({ name }) => name === wanted);
  if (found !== undefined) return found;
  throw dataFault(
    `${table.source}, line ${row.line}, ${columnWords(table, index)}: "${wanted}" is not computed here`,
    `Use one of ${responses.map(({ name }) => name).join(", ")}, or name it with --response.`,
  );
}

/** Multiplies a cell to the response's unit, or to an angle in radians (small: the ratio itself). */
function mainScale(
  table: CsvTable,
  index: number,
  kind: Measurement["kind"],
  facts: GridFacts,
): (response: Known) => number {
  const { unit } = table.columns[index];
  const where = `${table.source}, line 1, ${columnWords(table, index)}`;
  if (kind === "angle") {
    if (unit !== "" && unit !== "%")
      throw dataFault(`${where}: angles are plain numbers or in %`, 'Write "angle" or "angle [%]".');
    return () => (unit === "%" ? 0.01 : 1);
  }
  return (response) => {
    if (unit === "")
      throw dataFault(
        `${where}: the unit is missing, and (hbar/e) or (hbar/2e) makes a factor of two`,
        `Write it in brackets, e.g. "value [${response.unit}]".`,
      );
    try {
      const [own, asked] = [response.unit, unit].map((each) => responseUnit(response.carrier, facts, each).factor);
      return own / asked;
    } catch (error) {
      throw isFault(error) ? dataFault(`${where}: ${error.message}`, error.cure) : error;
    }
  };
}
