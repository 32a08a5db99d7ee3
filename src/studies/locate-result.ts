// locate-result.ts: the result of `locate`, as it is written to locate.json and handed to texts, tables and pictures.
import type { Triple } from "../grid/grid.js";

/** A place where a response is hottest in a cell. */
export interface HotPlace {
  /** In b1, b2, b3. */
  k: Triple;
  /** What the zone would give if it were like this place, in the response's unit. */
  density: number;
  /** Sets of bands whose pair leads there, and the gap between them. */
  lower: number;
  upper: number;
  gap_eV: number;
}

export interface LocatedCell {
  rank: number;
  /** Flat index in the grid's mesh, and its middle in b1, b2, b3 and in 1/angstrom. */
  cell: number;
  k: Triple;
  k_cartesian: Triple;
  /** What the cell adds to the value, correction included. */
  contribution: number;
  /** The neighbours' part of it. */
  correction: number;
  /** Of this cell and all before it: part of the zone, net contribution, part of the sum of the cells' magnitudes. */
  zone: number;
  cumulated: number;
  share: number;
  hottest: HotPlace;
  /** The pair of sets that gives most in this cell, without correction. */
  pair: { lower: number; upper: number; contribution: number };
  /** Where bands that the level splits come closest in this cell; null where it splits none. */
  closest: { gap_eV: number; k: Triple; lower: number; upper: number } | null;
}

export interface LocatedPair {
  /** Sets of bands. */
  lower: number;
  upper: number;
  contribution: number;
  correction: number;
  /** Net, of this pair and all before it. */
  cumulated: number;
}

/** The smallest part of the zone that makes a share of the sum of magnitudes. */
export interface Concentration {
  share: number;
  zone: number;
  /** What it contributes net. */
  net: number;
}

export interface LocatedResponse {
  name: string;
  unit: string;
  /** As a sweep at this one level and temperature gives it, with one standard bar. */
  value: number;
  error: number;
  /** What all cells sum to, and what all pairs sum to: the value but for round-off. */
  cells_sum: number;
  pairs_sum: number;
  /** The neighbours' correction in it. */
  correction: number;
  /** Sums of the positive and of the negative contributions of boxes, before correction. */
  positive: number;
  negative: number;
  /** Nothing but round-off contributes anywhere: the response vanishes place by place. */
  vanishes: boolean;
  concentration: Concentration[];
  /** Largest magnitude first. */
  cells: LocatedCell[];
  cells_left: { count: number; contribution: number };
  pairs: LocatedPair[];
  /** [set], correction included. */
  by_set: number[];
  /** Zone means along b3 for each (i1, i2) of the mesh, [i1][i2], correction included: their mean is the value. */
  projection: number[][];
  /** [row along `across`][column along `along`]: the integrand, whose zone mean is the value; without correction. */
  map: number[][];
  /** The same along the path. */
  path?: number[];
}

/** How far two responses come from the same cells and pairs. */
export interface Overlap {
  a: string;
  b: string;
  /** Part of the sums of magnitudes that lies in the same cells (sets of pairs): sum of the smaller shares, 0 to 1. */
  cells_common: number;
  pairs_common: number;
  /** Cosine of the vectors of contributions, -1 to 1: also whether their signs agree. */
  cells_cosine: number;
  pairs_cosine: number;
}

export interface LocateResult {
  format: "tidegauge.locate/1";
  version: string;
  grid: {
    title: string;
    sha256: string;
    bands: number;
    divisions: number[];
    offset: number[];
    periodic: 2 | 3;
    points: number;
    /** Rows b1, b2, b3, 1/angstrom. */
    reciprocal: Triple[];
  };
  job: Record<string, unknown>;
  reference_eV: number;
  /** Relative to the reference level. */
  level_eV: number;
  temperature_K: number;
  /** Bands (from 0) that are degenerate wherever they were seen stand in one set. */
  sets: number[][];
  responses: LocatedResponse[];
  overlap: Overlap[];
  /** Places of the map: centre + u along + v across, u and v the middles of `points` equal parts of [-1/2, 1/2]. */
  plane: { centre: Triple; along: Triple; across: Triple; points: number };
  path?: {
    /** Corners as given, and the number of the place each stands at. */
    corners: { k: Triple; at: number }[];
    k: Triple[];
    /** 1/angstrom from the start. */
    length: number[];
    /** [place][band], relative to the level's reference. */
    energies_eV: number[][];
  };
  sampling: {
    method: "refine" | "cells" | "points";
    stored: number;
    samples: number;
    deepest: number;
    patches: number;
  };
  notes: string[];
}
