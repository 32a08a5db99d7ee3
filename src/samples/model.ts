// model.ts: what a sample model must offer so that it can be written as a band grid: H(k) and its derivatives at one k.
import type { Triple } from "../grid/grid.js";

/** A Hermitian matrix of size n x n, complex interleaved, row (bra) major: length 2 n^2. */
export type ComplexMatrix = Float64Array;

/** H and its derivatives in a fixed (k-independent) basis. */
export interface HamiltonianAtK {
  /** eV. */
  readonly h: ComplexMatrix;
  /** dH/dk_x, dH/dk_y, dH/dk_z, eV angstrom. */
  readonly dh: readonly [ComplexMatrix, ComplexMatrix, ComplexMatrix];
  /** d2H/dk_a dk_b, pairs xx, yy, zz, yz, zx, xy, eV angstrom^2; undefined where the model offers none. */
  readonly d2h: readonly ComplexMatrix[] | undefined;
  /** Moments that depend on k override the model's constant ones, by name. */
  readonly moments?: ReadonlyMap<string, readonly ComplexMatrix[]>;
}

/** A periodic (or box-cut continuum) model whose Bloch matrices can be sampled at any k. */
export interface SampleModel {
  readonly name: string;
  readonly title: string;
  /** Where the model was published, and what of it comes from memory. */
  readonly source: string;
  readonly vectorsA: readonly [Triple, Triple, Triple];
  readonly periodic: 2 | 3;
  /** Bands that are written: the lowest of them where the basis is larger. */
  readonly bands: number;
  /** Size of the fixed basis, that of every matrix of the model; left out: `bands`. */
  readonly basisSize?: number;
  readonly electronsPerBand: 1 | 2;
  /** Valence electrons per cell in these bands, where the model has a natural filling. */
  readonly electrons: number | undefined;
  /** Reference level in eV, where the model has a natural one. */
  readonly fermiEv: number | undefined;
  /** Moments constant in the fixed basis, units of hbar: name -> 3 matrices (x, y, z) or 1 (scalar). */
  readonly moments: ReadonlyMap<string, readonly ComplexMatrix[]>;
  /** "free-electron" when d2H is (hbar^2/m_e) delta_ab exactly; then it need not be written as an array. */
  readonly hessian: "none" | "free-electron" | "array";
  /** k Cartesian, 1/angstrom. */
  at(k: Triple): HamiltonianAtK;
}
