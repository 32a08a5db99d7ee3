// converge-result.ts: the result of `converge`, as it is written to converge.json and handed to texts and charts.

/** One density of k points: the stored mesh, a sub-mesh that it contains (in all or many shifts), or another grid of a family. */
export interface ConvergeMesh {
  divisions: number[];
  /** Points of one mesh of this density. */
  points: number;
  /** Step over that of the densest mesh. */
  step: number;
  /** "stored", "contained" or, in a family, the grid's directory. */
  origin: string;
  /** Meshes of this density that differ in their shift: how many gave plain sums, how many refined values. */
  shifts: number;
  shifts_refined: number;
  /** The crystal's mirrors carry every shift into every other, so that their spread tells nothing: halves of a mesh moved by half a step. */
  blind: boolean;
}

/**
 * Values on one density, by level: of the shift that lies as the densest mesh does, where there is such a one; and root mean square distances of all
 * shifts and neighbouring levels to the best value known. (The mean of the plain sums over all shifts is always the stored mesh's plain sum.)
 */
export interface MeshValues {
  plain: number[];
  plain_off: number[];
  /** Empty where nothing was refined on this mesh. */
  refined: number[];
  refined_off: number[];
}

/** Bounds of one kind of value on the densest mesh. */
export interface ConvergeBounds {
  /** By level: the truth is expected within this distance about 95 times in 100 (two standard bars). NaN (null) where nothing tells. */
  bound: number[];
  /** By level: error ~ step^rate. */
  rate: number[];
  /** Fewest meshes that showed a rate; below 2 it is assumed. */
  rate_from: number;
}

/** A run of neighbouring levels with one verdict. Errors are parts of `scale` at two bars. */
export interface ConvergeVerdict {
  from_eV: number;
  to_eV: number;
  /** What is good enough: the plain sum (and the refined value), the refined value alone, neither; or nothing tells. */
  good: "plain" | "refined" | "neither" | "unknown";
  plain_error: number;
  refined_error: number;
  /** Divisions that would be needed; null where none can be named. */
  plain_needs: number[] | null;
  refined_needs: number[] | null;
  /** Refinement lacks samples here (--accuracy, --samples). */
  samples_wanted: boolean;
}

export interface ConvergeCurve {
  temperature_K: number;
  /** What errors are measured against: the largest value in the window. */
  scale: number;
  /** Zero everywhere, as far as can be told and is worth knowing: no percentage applies. */
  vanishes: boolean;
  /** The best value, by level: refined where there is one, else the plain sum. */
  best: number[];
  plain: ConvergeBounds;
  /** Absent with `--method points`. */
  refined?: ConvergeBounds;
  /** As in `meshes` of the result. */
  meshes: MeshValues[];
  verdicts: ConvergeVerdict[];
}

export interface ConvergeResponse {
  name: string;
  unit: string;
  curves: ConvergeCurve[];
}

export interface ConvergeResult {
  format: "tidegauge.converge/1";
  version: string;
  grids: { title: string; sha256: string; bands: number; divisions: number[]; periodic: 2 | 3; points: number }[];
  job: Record<string, unknown>;
  reference_eV: number;
  level_eV: number[];
  temperature_K: number[];
  /** Levels at which values are shown mesh by mesh; empty: those that the report chooses. */
  chosen_level_eV: number[];
  /** Error asked for, as a part of each response's largest value. */
  target: number;
  /** Whether the target was demanded (`--within`), and whether the default value reaches it at every level. */
  demanded: boolean;
  reached: boolean;
  /** Densest first. */
  meshes: ConvergeMesh[];
  responses: ConvergeResponse[];
  sampling: { method: "refine" | "points"; samples: number };
  notes: string[];
}
