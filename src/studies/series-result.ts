// series-result.ts: the result of `series`, as it is written to series.json and handed to texts and pictures.
import type { CurvesResult } from "../curves/result.js";

export interface SeriesMember {
  /** As it was named. */
  grid: string;
  title: string;
  sha256: string;
  divisions: number[];
  bands: number;
  /** Value of the tag. */
  tag: number;
  /** Absolute; levels of the member are relative to it. */
  reference_eV: number;
  electrons_per_cell: number;
  /** Density of one electron per cell. */
  density_of_one: number;
  sampling: CurvesResult["sampling"];
}

/** A member's response at a fixed doping. */
export interface SeriesPoint {
  tag: number;
  doping_per_cell: number;
  doping_density: number;
  /** Relative to the member's reference; the value is null where the member's window ends before. */
  level_eV: number | null;
  value: number | null;
  error: number | null;
}

/** A member's peak. */
export interface SeriesPeak extends SeriesPoint {
  width_eV: number;
  resolved: boolean;
}

export interface SeriesResponse {
  name: string;
  unit: string;
  /** For each doping and temperature one point a member, in the order of the members. */
  at_dopings: { doping: number; temperature_K: number; points: SeriesPoint[] }[];
  /** Peaks followed from member to member by the nearest doping, highest first; null where a member has none that continues it. */
  peaks: { temperature_K: number; points: (SeriesPeak | null)[] }[];
}

export interface SeriesResult {
  format: "tidegauge.series/1";
  version: string;
  job: Record<string, unknown>;
  /** Name of the tag by which the members are ordered. */
  tag: string;
  members: SeriesMember[];
  temperature_K: number[];
  /** In `doping_unit`; the same for every member. */
  dopings: number[];
  doping_unit: "per_cell" | "per_cm3" | "per_cm2";
  density_unit: "per_cm3" | "per_cm2";
  responses: SeriesResponse[];
  notes: string[];
}
