// inspect-result.ts: the result of an inspection, as --json prints it and the text report reads it.
import type { HessianKind, MomentFacts } from "../grid/grid.js";

/** Something that makes the grid unusable, and what to do. */
export interface InspectFault {
  message: string;
  cure: string;
}

/** One array as it is stored. Sizes of elements are in canonical units (eV, eV angstrom, hbar). */
export interface InspectedArray {
  name: string;
  type: string;
  axes: string[];
  /** As the manifest gives it. */
  unit: string;
  files: number;
  bytes: number;
  /** Largest |Re| or |Im| of an element; 0 for energies. */
  largest: number;
  /** Worst deviation from Hermiticity over the largest element of the same matrix, and what is allowed; 0 for energies. */
  asymmetry: number;
  asymmetry_allowed: number;
}

/** The reference level and what the stored mesh says of it. */
export interface InspectedLevel {
  reference_eV: number;
  origin: string;
  fermi_eV: number | null;
  electrons: number | null;
  /** Electrons per cell in stored states up to the reference level. */
  electrons_counted: number;
  /** Bands (from 0) with states on both sides of the level. */
  crossing_bands: number[];
  /** Between the highest state below and the lowest above, where no band crosses; null in a metal or at the edge. */
  gap_eV: number | null;
}

/** What a grid that could be opened holds. */
export interface GridContents {
  title: string;
  sha256: string;
  lattice_A: number[][];
  periodic: 2 | 3;
  /** A^3, or A^2 for a layer. */
  cell_size: number;
  divisions: number[];
  offset: number[];
  points: number;
  bytes: number;
  bands: number;
  electrons_per_band: 1 | 2;
  moments: MomentFacts[];
  hessian: HessianKind;
  tags: Record<string, string | number | boolean>;
  arrays: InspectedArray[];
  /** Lowest and highest energy of each band, eV: [band][2]. */
  band_range_eV: number[][];
  /** Null where the numbers are too broken to find it. */
  level: InspectedLevel | null;
  digests_checked: number;
  /** Finer data in place of some cells. */
  patches: { name: string; cells: number; divisions: number[]; points: number; bytes: number }[];
}

export interface InspectedGrid {
  /** As it was named. */
  directory: string;
  /** True when no hard fault was found. */
  sound: boolean;
  /** Null when the grid could not be opened. */
  contents: GridContents | null;
  /** The first hard faults, at most 20, and the count of all. */
  faults: InspectFault[];
  faults_total: number;
  /** What is legal but worth knowing. */
  warnings: string[];
}

export interface InspectResult {
  format: "tidegauge.inspect/1";
  version: string;
  job: Record<string, unknown>;
  grids: InspectedGrid[];
}
