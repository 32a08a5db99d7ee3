// inspect-result.ts: the result of an inspection, as --json prints it and the text report reads it.
import type { HessianKind, MomentFacts } from "../grid/grid.js";
import type { HealthFinding } from "../health/finding.js";

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
  /** Of a symmetry-reduced grid: the points that are stored, and the order of the group that makes the others; null of a full one. */
  reduced: { stored: number; operations: number } | null;
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

/** What the health checks found: is what is stored consistent with itself from point to point? */
export interface InspectedHealth {
  findings: HealthFinding[];
  /** Points whose matrices were looked at, and equations between neighbours that the mesh resolves. */
  points: number;
  equations: number;
  /** Part of the squared changes of the energies that the velocities leave unexplained; null: the mesh is too coarse to tell. */
  slopes_left: number | null;
  /** Root mean square change of the energies from a point to the next. */
  step_eV: number;
  /** Whether sums over bands close at all bands; null: cannot be told. If not, the energy (absolute) up to which they are good to 10%. */
  sums_closed: boolean | null;
  sums_trusted_up_to_eV: number | null;
  /** The effective-mass sum rule by band: part of the sum over bands that is missing, and what the mesh leaves open of it. */
  completeness: { band: number; energy_eV: number; missing: number; mesh_error: number }[];
  /** Which of time reversal and inversion the crystal keeps. */
  symmetry: "both" | "time reversal" | "inversion" | "one of both" | "neither" | "unknown";
  /** Largest |E(k) - E(-k)|; null where no opposite is stored. */
  uneven_eV: number | null;
  /** Largest splitting within pairs that are twofold everywhere; null where there are none. */
  pair_splitting_eV: number | null;
  /** Default of --degenerate on this grid. */
  degenerate_eV: number;
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
  /** Null where the form has faults: they come first. */
  health: InspectedHealth | null;
  /** What is legal but worth knowing. */
  warnings: string[];
}

export interface InspectResult {
  format: "tidegauge.inspect/1";
  version: string;
  job: Record<string, unknown>;
  grids: InspectedGrid[];
}
