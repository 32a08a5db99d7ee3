// two-centre-lattice.ts: lattice vectors of a two-centre metal under overrides and strain, and its half shell of bonds.
import { dataFault, usageFault } from "../base/errors.js";
import type { Triple } from "../grid/grid.js";
import type { TwoCentreFile } from "./two-centre-file.js";

export type Vectors = readonly [Triple, Triple, Triple];

/** Changes to a file's lattice, applied in this order: kind, a and c/a, or vectors; then the strain. */
export interface LatticeOverrides {
  /** Cubic kind; needs a lattice constant from here or from the file. */
  readonly kind?: "fcc" | "bcc" | "sc";
  /** Lattice constant a of the cubic cell, angstrom. */
  readonly latticeConstantA?: number;
  /** c/a of the tetragonal cell: stretches the cubic kind along z. */
  readonly cOverA?: number;
  /** Rows a1, a2, a3 in angstrom, in place of kind, a and c/a. */
  readonly vectorsA?: Vectors;
  /** Strain tensor eps (rows): every vector r becomes r + eps r. */
  readonly strain?: Vectors;
}

const cubicVectors: Record<"fcc" | "bcc" | "sc", Vectors> = {
  fcc: [
    [0, 0.5, 0.5],
    [0.5, 0, 0.5],
    [0.5, 0.5, 0],
  ],
  bcc: [
    [-0.5, 0.5, 0.5],
    [0.5, -0.5, 0.5],
    [0.5, 0.5, -0.5],
  ],
  sc: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
};

/** Biaxial strain in the xy plane: eps_xx = eps_yy = inPlane, eps_zz = -ratio * inPlane (ratio 2 C12 / C11 for a free surface). */
export const biaxialStrain = (inPlane: number, ratio: number): Vectors => [
  [inPlane, 0, 0],
  [0, inPlane, 0],
  [0, 0, -ratio * inPlane],
];

/** Rows a1, a2, a3 in angstrom. Throws a usage Fault for overrides that contradict each other or give a flat cell. */
export function latticeVectors(file: TwoCentreFile, overrides: LatticeOverrides): Vectors {
  const { kind, latticeConstantA, cOverA, vectorsA, strain } = overrides;
  if (vectorsA && (kind ?? latticeConstantA ?? cOverA) !== undefined)
    throw usageFault(
      "Lattice vectors were given together with a lattice kind, a or c/a.",
      "Give either the vectors or kind, a and c/a.",
    );
  for (const [name, value] of [
    ["lattice constant", latticeConstantA],
    ["c/a", cOverA],
  ] as const)
    if (value !== undefined && !(value > 0 && Number.isFinite(value)))
      throw usageFault(`The ${name} must be a positive number, found ${value}.`, `Give a positive ${name}.`);
  const unstrained =
    vectorsA ?? (overrides.kind || file.lattice.kind !== "vectors" ? cubic(file, overrides) : own(file, overrides));
  const vectors = strain ? (unstrained.map((r) => stretched(r, strain)) as unknown as Vectors) : unstrained;
  if (!(Math.abs(volume(vectors)) > 1e-3))
    throw usageFault(
      `The lattice vectors span a cell of ${volume(vectors)} angstrom^3.`,
      "Give three independent vectors and a small strain.",
    );
  return vectors;
}

function cubic(file: TwoCentreFile, overrides: LatticeOverrides): Vectors {
  const kind = overrides.kind ?? (file.lattice.kind as "fcc" | "bcc" | "sc");
  const a = overrides.latticeConstantA ?? file.lattice.a_angstrom;
  if (a === undefined)
    throw usageFault(
      `Lattice kind ${kind} needs a lattice constant, and the file has none.`,
      "Give the lattice constant a.",
    );
  const c = a * (overrides.cOverA ?? file.lattice.c_over_a ?? 1);
  return cubicVectors[kind].map(([x, y, z]) => [a * x, a * y, c * z]) as unknown as Vectors;
}

function own(file: TwoCentreFile, overrides: LatticeOverrides): Vectors {
  if ((overrides.latticeConstantA ?? overrides.cOverA) !== undefined)
    throw usageFault(
      "The file gives its lattice as vectors, which have no lattice constant or c/a.",
      "Give a lattice kind too, or a strain.",
    );
  return file.lattice.vectors_angstrom as Vectors;
}

const stretched = (r: Triple, strain: Vectors): Triple =>
  [0, 1, 2].map((i) => r[i] + strain[i][0] * r[0] + strain[i][1] * r[1] + strain[i][2] * r[2]) as unknown as Triple;

const cross = (a: Triple, b: Triple): Triple => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/** Signed cell volume, angstrom^3. */
export const volume = ([a1, a2, a3]: Vectors): number => {
  const n = cross(a2, a3);
  return a1[0] * n[0] + a1[1] * n[1] + a1[2] * n[2];
};

const mostBonds = 4000;

/**
 * Lattice vectors R with 0 < |R| < reachA, one of each pair (R, -R), in angstrom, sorted by length.
 * Throws a data Fault where the reach holds no neighbour at all, or far too many.
 */
export function halfShell(vectors: Vectors, reachA: number): Triple[] {
  const inverse = 1 / Math.abs(volume(vectors));
  const most = [0, 1, 2].map((i) => {
    const n = cross(vectors[(i + 1) % 3], vectors[(i + 2) % 3]);
    return Math.floor(reachA * Math.hypot(...n) * inverse + 1e-9);
  });
  if ((4 / 3) * Math.PI * reachA ** 3 * inverse > 2 * mostBonds)
    throw dataFault(
      `The lattice has thousands of neighbours within the cutoff of ${reachA.toFixed(2)} angstrom.`,
      "Check the units of the lattice constant (angstrom) and of the cutoff (bohr).",
    );
  const bonds: { r: Triple; length: number }[] = [];
  for (let i = 0; i <= most[0]; i++)
    for (let j = -most[1]; j <= most[1]; j++)
      for (let k = -most[2]; k <= most[2]; k++) {
        if (i === 0 && (j < 0 || (j === 0 && k <= 0))) continue;
        const r = [0, 1, 2].map((c) => i * vectors[0][c] + j * vectors[1][c] + k * vectors[2][c]) as unknown as Triple;
        const length = Math.hypot(...r);
        if (length < reachA) bonds.push({ r, length });
      }
  if (bonds.length === 0)
    throw dataFault(
      `The lattice has no neighbour within the cutoff of ${reachA.toFixed(2)} angstrom.`,
      "Check the units of the lattice constant (angstrom) and of the cutoff (bohr).",
    );
  return bonds.sort((a, b) => a.length - b.length).map(({ r }) => r);
}
