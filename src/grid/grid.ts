// grid.ts: what the rest of the program knows of a band grid on disk: facts, what to read, and a block of k points.

export type Triple = readonly [number, number, number];

/** A contained sub-mesh: every `stride`-th point along the periodic directions, starting `shift` steps in. Plain data. */
export interface View {
  readonly stride: number;
  /** In steps of the stored mesh, each 0 .. stride - 1; 0 where the mesh does not repeat. */
  readonly shift: Triple;
}

/** A moment array of the grid. `directions` is 3 (x, y, z) or 1 (scalar). */
export interface MomentFacts {
  readonly name: string;
  readonly directions: 1 | 3;
  readonly kind: "axial" | "polar" | "scalar";
  readonly underTimeReversal: "odd" | "even";
  /** "hbar": values are in hbar after conversion (half-hbar is halved on reading); "1": dimensionless. */
  readonly unit: "hbar" | "1";
}

/** Which cells of the parent's mesh a patch replaces, and how finely. */
export interface PatchCells {
  /** Name of the directory, as the parent gives it. */
  readonly name: string;
  /** Each cell is divided m1 x m2 x m3. */
  readonly divisions: Triple;
  /** Flat indices of the parent's mesh, in the order in which the patch stores them. */
  readonly cells: Int32Array;
}

/** Directions of the second derivatives d2H/dk_a dk_b, in the order of the format: xx, yy, zz, yz, zx, xy. */
export const hessianPairs: readonly (readonly [number, number])[] = [
  [0, 0],
  [1, 1],
  [2, 2],
  [1, 2],
  [2, 0],
  [0, 1],
];

export type HessianKind = "none" | "free-electron" | "array";

/** The facts of one band grid, in canonical units; plain data, safe to send to a worker. */
export interface GridFacts {
  readonly directory: string;
  readonly title: string;
  /** Rows a1, a2, a3 in angstrom. */
  readonly vectorsA: readonly [Triple, Triple, Triple];
  readonly periodic: 2 | 3;
  readonly divisions: Triple;
  /** In mesh steps, each in [0, 1). */
  readonly offset: Triple;
  /** Number of stored k points. */
  readonly points: number;
  readonly bands: number;
  readonly electronsPerBand: 1 | 2;
  readonly fermiEv: number | undefined;
  readonly electrons: number | undefined;
  readonly moments: readonly MomentFacts[];
  readonly hessian: HessianKind;
  readonly tags: Readonly<Record<string, string | number | boolean>>;
  /** SHA-256 (hex) of the manifest and, for each array file, its name, length and evenly spaced samples of its bytes. */
  readonly sha256: string;
  /** Total bytes of all array files. */
  readonly bytes: number;
  /** Set where these are the facts of a contained sub-mesh; divisions, offset and points are then the sub-mesh's. */
  readonly view?: View;
  /**
   * Set where these are the facts of a patch: divisions and offset are those of the finer mesh that its points belong to, `points` counts
   * the stored ones, cell after cell.
   */
  readonly patch?: PatchCells;
  /** Of a symmetry-reduced grid: the flat mesh index of every stored point. */
  readonly storedFlat?: Int32Array | undefined;
}

/** Which matrices a pass needs. Energies always come. */
export interface Want {
  /** Cartesian directions 0, 1, 2 of the velocity. */
  readonly velocity: readonly number[];
  readonly moments: readonly { readonly name: string; readonly direction: number }[];
  /** All six second-derivative matrices, when the grid stores them. */
  readonly hessian: boolean;
}

/**
 * One matrix per k point of a block, complex interleaved: entry (bra, ket) of point i of the block is at
 * `data[offset + i * stride + 2 * (bra * bands + ket)]` (real), + 1 (imaginary).
 */
export interface MatrixBlock {
  readonly data: Float64Array;
  readonly offset: number;
  readonly stride: number;
}

/**
 * A run of consecutive stored k points in canonical units (eV, eV angstrom, eV angstrom^2, hbar).
 * The memory belongs to the reader and is valid until its next read.
 */
export interface Block {
  /** Index of the first stored k point. */
  readonly first: number;
  readonly count: number;
  readonly bands: number;
  /** [k][band], ascending in the band. */
  readonly energyEv: Float64Array;
  /** Index: Cartesian direction; undefined where not wanted. */
  readonly velocity: readonly (MatrixBlock | undefined)[];
  /** Per moment name, index: direction. */
  readonly moments: ReadonlyMap<string, readonly (MatrixBlock | undefined)[]>;
  /** xx, yy, zz, yz, zx, xy; undefined unless wanted and stored as an array. */
  readonly hessian: readonly MatrixBlock[] | undefined;
}

/** Streams blocks of one grid; `read` checks what it returns (finite, ascending, Hermitian) and throws a data Fault that names array, k point and band. */
export interface BlockReader {
  readonly facts: GridFacts;
  read(first: number, count: number): Block;
  close(): void;
}
