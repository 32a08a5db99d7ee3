// kernel.ts: the contract of the hot loops: what a k point looks like to them, and which curvatures are asked.

/** Where the matrices of one k point lie: matrix entry (bra, ket) at data[offset + 2 * (bra * bands + ket)]. */
export interface MatrixRef {
  readonly data: Float64Array;
  readonly offset: number;
}

/** Energies and matrices of one k point, canonical units. */
export interface PointRef {
  readonly bands: number;
  readonly energyEv: Float64Array;
  readonly energyOffset: number;
  /** x, y, z; undefined where not read. */
  readonly velocity: readonly (MatrixRef | undefined)[];
  /** The moment components that the job names, in its order. */
  readonly moments: readonly MatrixRef[];
  /** xx, yy, zz, yz, zx, xy; undefined where none is stored. */
  readonly hessian: readonly MatrixRef[] | undefined;
}

/**
 * One curvature asked for: current operator (v_flow, or (O v_flow + v_flow O) / 2 with O = moments[moment]) against
 * the field direction. Omega_n = -2 Im sum_m <n|j|m><m|v_field|n> / ((E_n - E_m)^2 + eta^2), angstrom^2 times the moment.
 */
export interface Product {
  /** Index into PointRef.moments; -1 for the charge current. */
  readonly moment: number;
  readonly flow: 0 | 1 | 2;
  readonly field: 0 | 1 | 2;
}

/** As a Product, but of a current that is a weighted sum of currents: sum_i weight_i j_i. Costs no more than one current. */
export interface MixedProduct {
  readonly current: readonly { readonly moment: number; readonly flow: 0 | 1 | 2; readonly weight: number }[];
  readonly field: 0 | 1 | 2;
}

/** How denominators are taken: pairs closer than `degenerateEv` are skipped; `broadenEv` is eta. */
export interface Denominator {
  readonly degenerateEv: number;
  readonly broadenEv: number;
}
