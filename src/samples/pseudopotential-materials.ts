// pseudopotential-materials.ts: which semiconductors have form factors here, and with which lattice constant and spin-orbit splitting?

/** One material; form factors as in the paper, in Ry, of the squared lengths 3, 4, 8, 11 in units of (2 pi / a)^2. */
export interface PseudopotentialMaterial {
  readonly latticeConstantA: number;
  /** Of the squared lengths 3, 8, 11: half the sum of the two atoms' potentials, Ry. */
  readonly symmetricRy: readonly [number, number, number];
  /** Of the squared lengths 3, 4, 11: half of cation minus anion, Ry; zero in the diamond structure. */
  readonly antisymmetricRy: readonly [number, number, number];
  /** Spin-orbit splitting of the valence top, eV: the sample's spin-orbit strength is adjusted to it. */
  readonly splittingEv: number;
  /** Splittings of the outer p shells of cation and anion, eV; only their ratio is used. */
  readonly atomsEv: readonly [cation: number, anion: number];
}

const none = [0, 0, 0] as const;

/**
 * Form factors and lattice constants: M. L. Cohen, T. K. Bergstresser, Phys. Rev. 141, 789 (1966), Table II; splittings of the
 * valence top and of the atoms: common practice. All of it from memory.
 */
export const pseudopotentialMaterials = {
  Si: {
    latticeConstantA: 5.43,
    symmetricRy: [-0.21, 0.04, 0.08],
    antisymmetricRy: none,
    splittingEv: 0.044,
    atomsEv: [1, 1],
  },
  Ge: {
    latticeConstantA: 5.66,
    symmetricRy: [-0.23, 0.01, 0.06],
    antisymmetricRy: none,
    splittingEv: 0.29,
    atomsEv: [1, 1],
  },
  GaAs: {
    latticeConstantA: 5.64,
    symmetricRy: [-0.23, 0.01, 0.06],
    antisymmetricRy: [0.07, 0.05, 0.01],
    splittingEv: 0.34,
    atomsEv: [0.174, 0.421],
  },
  GaP: {
    latticeConstantA: 5.44,
    symmetricRy: [-0.22, 0.03, 0.07],
    antisymmetricRy: [0.12, 0.07, 0.02],
    splittingEv: 0.08,
    atomsEv: [0.174, 0.055],
  },
  ZnSe: {
    latticeConstantA: 5.65,
    symmetricRy: [-0.23, 0.01, 0.06],
    antisymmetricRy: [0.18, 0.12, 0.03],
    splittingEv: 0.43,
    atomsEv: [0.07, 0.48],
  },
} as const satisfies Record<string, PseudopotentialMaterial>;

/** The name of a material in the table. */
export type MaterialName = keyof typeof pseudopotentialMaterials;

/** The names, in the order of the table. */
export const materialNames = Object.keys(pseudopotentialMaterials) as readonly MaterialName[];
