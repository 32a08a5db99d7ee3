// dope-result.ts: the result of `dope`, as it is written to dope.json and handed to texts and pictures.
import type { CurvesResult } from "../curves/result.js";

/** A doping in every measure. Positive: added electrons. */
export interface DopingAmount {
  per_cell: number;
  /** Per cm^3 for a crystal, per cm^2 for a layer; see `density_unit`. */
  density: number;
  /** Substituted atoms in parts of the sites, for each valence of `substitute`; null where that atom drives the level the other way. */
  substituted: (number | null)[];
}

/** How far the picture of fixed bands is stretched. */
export interface RigidBandStretch {
  /** Of the level against the neutral crystal, eV (in a gap: against the nearer edge). */
  level_shift_eV: number;
  /** Added or removed electrons in parts of those in the grid's bands. */
  electrons_share: number;
  /** Empty where the stretch is within usual practice. */
  caution: string;
}

/** One response at one temperature at a fixed doping. */
export interface DopedValue {
  temperature_K: number;
  /** mu(T) at this doping, relative to the reference; null where the window ends before. */
  level_eV: number | null;
  value: number | null;
  error: number | null;
}

export interface DopePeak {
  temperature_K: number;
  level_eV: number;
  value: number;
  error: number;
  prominence: number;
  width_eV: number;
  resolved: boolean;
  /** Why it is not resolved; "" when it is. */
  unresolved_why: string;
  doping: DopingAmount;
  /** Dopings between which the response keeps 90% of the peak at this temperature; null where the window ends first. */
  keeps_90_percent: { from_per_cell: number | null; to_per_cell: number | null };
  /** At this very doping, at every temperature of `robustness_K`. */
  at_temperatures: DopedValue[];
  rigid_band: RigidBandStretch;
}

export interface DopeResponse {
  name: string;
  unit: string;
  /** At each temperature asked, in the order of |value|, resolved ones first. */
  peaks: DopePeak[];
  /** Largest |value| of the window at each temperature asked, peak or not. */
  largest: { temperature_K: number; level_eV: number; value: number; error: number; doping_per_cell: number }[];
  /** Ends of the window at which the response is largest and still grows, by temperature. */
  grows_beyond: {
    temperature_K: number;
    end: "low" | "high";
    level_eV: number;
    value: number;
    error: number;
    doping_per_cell: number;
  }[];
}

/** Responses at a doping that was asked for (or, where carriers are few, at round concentrations). */
export interface DopedPoint {
  doping: DopingAmount;
  rigid_band: RigidBandStretch;
  /** One for each temperature asked and of the robustness. */
  responses: { name: string; unit: string; at_temperatures: DopedValue[] }[];
}

export interface DopeResult {
  format: "tidegauge.dope/1";
  version: string;
  grid: CurvesResult["grid"];
  job: Record<string, unknown>;
  reference_eV: number;
  window_eV: [from: number, to: number];
  /** Asked for. */
  temperature_K: number[];
  /** At which heights are compared at fixed doping. */
  robustness_K: number[];
  /** "few": the reference level lies in a gap, at a band's edge or where states are few. */
  carriers: "few" | "many";
  /** In the grid's bands at zero doping. */
  electrons_per_cell: number;
  density_unit: "per_cm3" | "per_cm2";
  /** Density of one electron per cell. */
  density_of_one: number;
  /** Smallest and largest doping in the window at every temperature asked, electrons per cell. */
  doping_window_per_cell: [least: number, most: number];
  substitute: number[];
  sites_per_cell: number;
  responses: DopeResponse[];
  dopings: DopedPoint[];
  sampling: CurvesResult["sampling"];
  notes: string[];
}
