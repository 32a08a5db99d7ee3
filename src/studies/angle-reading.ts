// angle-reading.ts: which angles, scattering times and comparisons can be read off curves and resistivities?
import { responseUnit } from "../bands/units.js";
import { chargeC, e2OverHbarS, hbarEvS } from "../base/constants.js";
import { linearAt } from "../curves/interpolate.js";
import type { CurvesResult, ResponseCurve, Table } from "../curves/result.js";
import type { GridFacts } from "../grid/grid.js";
import { cellArea, cellVolume } from "../zone/lattice.js";
import type { AngleResponse, AngleRow, MeasuredRow, ScatteringRow } from "./angle-result.js";
import { judged } from "./judgement.js";
import { carrierOf, type Measurement, type ResistivitySource } from "./measurements.js";

/** Everything the parts of the result are read from. */
export interface Read {
  readonly curves: CurvesResult;
  readonly facts: GridFacts;
  readonly source: ResistivitySource;
}

/** One quantity of the curves at a level and temperature, straight lines between; temperatures beyond the ends as at the ends. */
function readAt({ curves }: Read, table: Table, temperatureK: number, levelEv = 0): number {
  const along = table.map((row) => linearAt({ x: curves.level_eV, y: row }, levelEv));
  return linearAt({ x: curves.temperature_K, y: along }, temperatureK);
}

/** Temperatures at which angles are told: those of the resistivities, or those computed. */
export const toldTemperatures = ({ source, curves }: Read): number[] =>
  source.rows.flatMap(({ temperature_K }) => (temperature_K === null ? curves.temperature_K : [temperature_K]));

/** Multiplies a response's number to S/m (a layer: S), of a moment to (hbar/e) S/m. */
function siPerUnit(carrier: string, unit: string, facts: GridFacts): number {
  const own = responseUnit(carrier, facts, unit).factor;
  if (facts.periodic === 2) return (responseUnit(carrier, facts).factor * (e2OverHbarS / (2 * Math.PI))) / own;
  return responseUnit(carrier, facts, carrier === "charge" ? "S/m" : "(hbar/e) S/m").factor / own;
}

export function angleResponse(read: Read, response: ResponseCurve): AngleResponse {
  const { curves, facts, source } = read;
  const carrier = carrierOf(response.name);
  const multiplier = carrier === "charge" ? 1 : 2;
  const si = siPerUnit(carrier, response.unit, facts);
  const rows = toldTemperatures(read).map((temperatureK): AngleRow => {
    const { value: resistivity, error: resistivityError } = source.at(temperatureK);
    const conductivity = readAt(read, response.value, temperatureK);
    const conductivityError = readAt(read, response.error, temperatureK);
    const scale = multiplier * si;
    return {
      temperature_K: temperatureK,
      resistivity,
      resistivity_error: resistivityError,
      conductivity,
      conductivity_error: conductivityError,
      angle: scale * conductivity * resistivity,
      angle_error: scale * Math.hypot(conductivityError * resistivity, conductivity * resistivityError),
    };
  });
  return {
    name: response.name,
    unit: response.unit,
    multiplier,
    si_per_unit: si,
    rows,
    curve_temperature_K: curves.temperature_K,
    curve: response.value,
    curve_error: response.error,
  };
}

export function scatteringRow(read: Read, temperatureK: number): ScatteringRow {
  const { curves, facts, source } = read;
  const drude = curves.drude ?? [];
  const mean = (of: (curve: (typeof drude)[0]) => Table): number =>
    drude.reduce((sum, curve) => sum + readAt(read, of(curve), temperatureK), 0) / drude.length;
  const { value: resistivity, error: resistivityError } = source.at(temperatureK);
  const [weight, weightError] = [mean((curve) => curve.value), mean((curve) => curve.error)];
  const seconds = 1 / (resistivity * weight);
  const cellM = facts.periodic === 3 ? cellVolume(facts.vectorsA) * 1e-30 : cellArea(facts.vectorsA) * 1e-20;
  const states = readAt(read, curves.states_per_eV, temperatureK);
  // sum_a D_a = e^2 g v^2 with g the states per volume and energy: v^2 = V sum_a D_a / (e states per eV).
  const speed = Math.sqrt((cellM * weight * drude.length) / (chargeC * states));
  return {
    temperature_K: temperatureK,
    resistivity,
    resistivity_error: resistivityError,
    drude: weight,
    drude_error: weightError,
    tau_fs: seconds * 1e15,
    tau_error_fs: seconds * 1e15 * Math.hypot(weightError / weight, resistivityError / resistivity),
    hbar_over_tau_eV: hbarEvS / seconds,
    mean_free_path_nm: speed * seconds * 1e9,
  };
}

/** The residual resistivity: told, or the coldest of the same sample's file, or that of a sample of which nothing else is known. */
function residualOf(
  measured: Measurement,
  { rows }: ResistivitySource,
  resistivity: number,
): Pick<MeasuredRow, "residual" | "residual_from"> {
  if (!Number.isNaN(measured.residual)) return { residual: measured.residual, residual_from: "column" };
  const ofFile = Number.isNaN(measured.resistivity) && rows[0].temperature_K !== null;
  return ofFile
    ? { residual: rows[0].value, residual_from: "coldest row of the resistivity file" }
    : { residual: resistivity, residual_from: "resistivity of the row" };
}

/** One line of the measured table beside the intrinsic curve. */
export function measuredRow(
  read: Read,
  responses: readonly AngleResponse[],
  measured: Measurement,
  shift: number,
): MeasuredRow {
  const { curves, source } = read;
  const response = responses.find(({ name }) => name === measured.response) as AngleResponse;
  const known = Number.isNaN(measured.resistivity)
    ? source.at(measured.temperatureK)
    : { value: measured.resistivity, error: measured.resistivityError };
  const perAngle = 1 / (response.multiplier * response.si_per_unit * known.value);
  const value = measured.kind === "angle" ? measured.value * perAngle : measured.value;
  const error =
    measured.kind === "angle"
      ? Math.hypot(measured.error * perAngle, (value * (known.error || 0)) / known.value)
      : measured.error;
  const levels = curves.level_eV.flatMap((level, i) => (Math.abs(level) <= shift + 1e-9 ? [i] : []));
  const along = (table: Table): number[] =>
    levels.map((i) => readAt(read, table, measured.temperatureK, curves.level_eV[i]));
  const intrinsic = readAt(read, response.curve, measured.temperatureK);
  const intrinsicError = readAt(read, response.curve_error, measured.temperatureK);
  return {
    line: measured.line,
    label: measured.label,
    response: response.name,
    temperature_K: measured.temperatureK,
    value,
    error: Number.isNaN(error) ? null : error,
    resistivity: known.value,
    resistivity_error: Number.isNaN(known.error) ? null : known.error,
    ...residualOf(measured, source, known.value),
    intrinsic,
    intrinsic_error: intrinsicError,
    ratio: value / intrinsic,
    ...judged(
      { value, error, intrinsic, intrinsicError },
      {
        levelEv: levels.map((i) => curves.level_eV[i]),
        value: along(response.curve),
        error: along(response.curve_error),
      },
    ),
  };
}
