// result.ts: the result of a sweep, as it is written to curves.json and handed to charts.
import type { SpectrumBlock } from "./spectrum-block.js";

/** [temperature][level] */
export type Table = number[][];

export interface ResponseCurve {
  /** e.g. "spin:xy:z" */
  name: string;
  /** e.g. "(hbar/e) S/cm" */
  unit: string;
  value: Table;
  /** One standard bar: for `refine` the true value is expected within 2 bars about 95 times in 100; other methods' bars are not calibrated. NaN (null in JSON) where it could not be estimated. */
  error: Table;
  error_sampling: Table;
  /** Zero for methods that use no local model. */
  error_model: Table;
  /** The plain mesh sum. */
  points: Table;
  /** The Mott integral, where it was asked for; zero at 0 K by definition. */
  thermal?: CompanionCurve;
}

/** A companion of the responses, with its bar. */
export interface CompanionCurve {
  /** A response's thermoelectric counterpart: "A/(m K)", "(hbar/e) A/(m K)", for a layer "A/K", "(hbar/e) A/K". */
  unit: string;
  value: Table;
  /** One standard bar, less well tested than that of a response. */
  error: Table;
}

/** Drude weight along one axis: conductivity per scattering time. */
export interface DrudeCurve extends CompanionCurve {
  /** "drude:xx", "drude:yy" or "drude:zz"; the unit is (S/m)/s, for a layer S/s. */
  name: string;
}

export interface CurvesResult {
  format: "tidegauge.curves/1";
  version: string;
  grid: { title: string; sha256: string; bands: number; divisions: number[]; periodic: 2 | 3; points: number };
  job: Record<string, unknown>;
  reference_eV: number;
  /** Relative to the reference level. */
  level_eV: number[];
  temperature_K: number[];
  electrons_per_cell: Table;
  /** Positive: added electrons, counted from the reference. */
  doping_per_cell: Table;
  /** Per cm^3 for a crystal, per cm^2 for a layer. */
  doping_density: Table;
  doping_density_unit: "per_cm3" | "per_cm2";
  states_per_eV: Table;
  responses: ResponseCurve[];
  /** One per axis along which the grid is periodic; absent in files of the first versions. */
  drude?: DrudeCurve[];
  sampling: {
    method: "refine" | "cells" | "points";
    stored: number;
    samples: number;
    deepest: number;
    [more: string]: number | string;
  };
  /** Always begins with "intrinsic only, rigid band". */
  notes: string[];
  /** What the curves were read from, for reading them at other temperatures; absent where it is too large. */
  spectrum?: SpectrumBlock;
}
