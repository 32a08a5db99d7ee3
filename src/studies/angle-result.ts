// angle-result.ts: what does `angle` find? The shape of tidegauge.angle/1.
import type { CurvesResult, Table } from "../curves/result.js";

/** Resistivity along a row of temperatures; ohm m, or for a sheet ohm. */
export interface ResistivityRow {
  /** null: one value for every temperature asked. */
  temperature_K: number | null;
  value: number;
  error: number;
}

/** What the Drude weight says of scattering at one temperature. */
export interface ScatteringRow {
  temperature_K: number;
  resistivity: number;
  resistivity_error: number;
  /** Mean over the axes; (S/m)/s, for a layer S/s. */
  drude: number;
  drude_error: number;
  /** Transport scattering time, femtoseconds. */
  tau_fs: number;
  tau_error_fs: number;
  hbar_over_tau_eV: number;
  /** tau times the root mean square velocity at the level. */
  mean_free_path_nm: number;
}

/** The angle at one temperature. */
export interface AngleRow {
  temperature_K: number;
  resistivity: number;
  resistivity_error: number;
  /** In the response's unit, at the reference level. */
  conductivity: number;
  conductivity_error: number;
  angle: number;
  angle_error: number;
}

export interface AngleResponse {
  name: string;
  unit: string;
  /** 2 for a moment, (2e/hbar) sigma / sigma_xx; 1 for charge. */
  multiplier: 1 | 2;
  /** Multiplies a number in `unit` to S/m (layer: S), of a moment to (hbar/e) S/m. */
  si_per_unit: number;
  rows: AngleRow[];
  /** The computed curve, [temperature][level]. */
  curve_temperature_K: number[];
  curve: Table;
  curve_error: Table;
}

/** Where a residual resistivity comes from: the table's column, the resistivity file (its coldest row), or the row's own resistivity. */
export type ResidualSource = "column" | "coldest row of the resistivity file" | "resistivity of the row";

/** What a measured value is likely to be. */
export type Verdict = "agrees" | "level" | "larger" | "smaller" | "sign";

export interface MeasuredRow {
  /** Line of the file. */
  line: number;
  label: string;
  response: string;
  temperature_K: number;
  /** In the response's unit. */
  value: number;
  /** null: none given. */
  error: number | null;
  /** ohm m or ohm; null where none is known. */
  resistivity: number | null;
  resistivity_error: number | null;
  residual: number | null;
  residual_from: ResidualSource | null;
  intrinsic: number;
  intrinsic_error: number;
  /** measured / intrinsic */
  ratio: number;
  verdict: Verdict;
  /** For "level": the nearest shift of the level that gives the measured value. */
  shift_eV: number | null;
  /** For "larger", "smaller": measured over what is nearest to it within the shifts allowed. */
  factor: number | null;
}

/** A resistivity series of one response. */
export interface SeriesResult {
  response: string;
  rows: number;
  /** Largest over smallest resistivity. */
  span: number;
  /** Which keeps still. */
  constant: "conductivity" | "angle" | "neither" | "undecided";
  conductivity: number;
  conductivity_error: number;
  conductivity_spread: number;
  angle: number;
  angle_error: number;
  angle_spread: number;
  /** rho_H = a rho_0 + b rho^2; null where the rows do not allow it. */
  scaling: {
    /** 2a (for charge a): the angle of skew scattering. */
    skew_angle: number;
    skew_angle_error: number;
    /** b, in the response's unit: what does not depend on scattering. */
    intrinsic: number;
    intrinsic_error: number;
    chi2_per_freedom: number | null;
    residual: ResidualSource | "mixed";
  } | null;
}

export interface AngleResult {
  format: "tidegauge.angle/1";
  version: string;
  grid: CurvesResult["grid"];
  job: Record<string, unknown>;
  reference_eV: number;
  resistivity_unit: "ohm m" | "ohm";
  resistivity: ResistivityRow[];
  shift_eV: number;
  level_eV: number[];
  scattering: ScatteringRow[];
  responses: AngleResponse[];
  measured: MeasuredRow[];
  series: SeriesResult[];
  sampling: CurvesResult["sampling"];
  notes: string[];
}
