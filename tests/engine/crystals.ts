// crystals.ts: test material: s and p electrons with spin-orbit coupling on any one-site lattice, full and symmetry-reduced on disk.
import { join } from "node:path";
import type { MomentFacts, Triple } from "../../src/grid/grid.js";
import { createGridWriter } from "../../src/grid/writer.js";
import { createSampler } from "../../src/samples/eigenbasis.js";
import { fourierHamiltonian, type Hop } from "../../src/samples/hops.js";
import { identity, kroneckerOf, matrixOf, pauli, productOf, scaled, sumOf } from "../../src/samples/matrix.js";
import type { ComplexMatrix, SampleModel } from "../../src/samples/model.js";
import { reducedPoints } from "../../src/samples/symmetry.js";
import { reciprocalVectors } from "../../src/zone/lattice.js";
import { cartesianK, fractionalK } from "../../src/zone/mesh.js";
import { scratchDirectory } from "../grid/make.js";

type Vectors = SampleModel["vectorsA"];

const root3 = Math.sqrt(3);

/** Lattices with their number of rotations, proper or not. */
export const lattices = {
  fcc: { vectors: [[0, 1.6, 1.6], [1.6, 0, 1.6], [1.6, 1.6, 0]], rotations: 48 }, // biome-ignore format: rows
  bcc: { vectors: [[-1.4, 1.4, 1.4], [1.4, -1.4, 1.4], [1.4, 1.4, -1.4]], rotations: 48 }, // biome-ignore format: rows
  hexagonal: { vectors: [[2.5, 0, 0], [-1.25, 1.25 * root3, 0], [0, 0, 3.1]], rotations: 24 }, // biome-ignore format: rows
  tetragonal: { vectors: [[2.4, 0, 0], [0, 2.4, 0], [0, 0, 2.9]], rotations: 16 }, // biome-ignore format: rows
} as const satisfies Record<string, { vectors: Vectors; rotations: number }>;

/** Orbitals s, x, y, z; a real or imaginary matrix from its elements. */
const orbital = (
  elements: readonly (readonly [number, number, number | readonly [number, number]])[],
): ComplexMatrix => {
  const rows = Array.from({ length: 4 }, () => Array.from({ length: 4 }, (): number | readonly [number, number] => 0));
  for (const [i, j, x] of elements) rows[i][j] = x;
  return matrixOf(rows as never);
};

/** L_a = -i epsilon_abc |b><c| within p. */
const orbitalMoment = [0, 1, 2].map((a) => {
  const [b, c] = [1 + ((a + 1) % 3), 1 + ((a + 2) % 3)];
  return orbital([
    [b, c, [0, -1]],
    [c, b, [0, 1]],
  ]);
});
const L = orbitalMoment.map((m) => kroneckerOf(m, identity(2)));
const S = pauli.map((s) => kroneckerOf(identity(4), scaled(s, 0.5)));
const spinOrbit = sumOf(...[0, 1, 2].map((a) => productOf(L[a], S[a])));

/** Two-centre hops (Slater and Koster) along d, with the strength falling with the distance. */
function hopAlong(d: Triple): ComplexMatrix {
  const length = Math.hypot(...d);
  const u = d.map((x) => x / length);
  const strength = 0.8 * Math.exp(1 - length / 2.2);
  const [ss, sp, sigma, pi] = [-0.5, 0.6, 0.9, -0.25].map((x) => x * strength);
  const elements: [number, number, number][] = [[0, 0, ss]];
  for (const a of [0, 1, 2]) {
    elements.push([0, a + 1, u[a] * sp], [a + 1, 0, -u[a] * sp]);
    for (const b of [0, 1, 2]) elements.push([a + 1, b + 1, u[a] * u[b] * (sigma - pi) + (a === b ? pi : 0)]);
  }
  return kroneckerOf(orbital(elements), identity(2));
}

/** The moments that the crystals carry, one of each kind. */
const carried = {
  spin: { matrices: S, kind: "axial", underTimeReversal: "odd" },
  orbital: { matrices: L, kind: "axial", underTimeReversal: "odd" },
  // s p + p s: an electric dipole.
  dipole: {
    matrices: [1, 2, 3].map((p) => kroneckerOf(orbital([[0, p, 1], [p, 0, 1]]), identity(2))), // biome-ignore format: pairs
    kind: "polar",
    underTimeReversal: "even",
  },
  // i (s p - p s): a polar vector that time reversal turns round.
  toroidal: {
    matrices: [1, 2, 3].map((p) => kroneckerOf(orbital([[0, p, [0, 1]], [p, 0, [0, -1]]]), identity(2))), // biome-ignore format: pairs
    kind: "polar",
    underTimeReversal: "odd",
  },
  // L x S: an axial vector that time reversal leaves.
  vortex: {
    matrices: [0, 1, 2].map((a) => {
      const [b, c] = [(a + 1) % 3, (a + 2) % 3];
      return sumOf(productOf(L[b], S[c]), scaled(productOf(L[c], S[b]), -1));
    }),
    kind: "axial",
    underTimeReversal: "even",
  },
  coupling: { matrices: [spinOrbit], kind: "scalar", underTimeReversal: "even" },
} as const satisfies Record<string, Omit<MomentFacts, "name" | "directions" | "unit"> & { matrices: ComplexMatrix[] }>;

export interface CrystalChoice {
  readonly lattice: keyof typeof lattices;
  /** Exchange splitting along z, eV. */
  readonly exchangeEv?: number;
  /** Mixing of s and z on the site, eV: no inversion. */
  readonly polarEv?: number;
}

/** The model, which carries spin and orbital moment as `symmetryOf` expects them. */
export function crystal({ lattice, exchangeEv = 0, polarEv = 0 }: CrystalChoice): SampleModel {
  const vectorsA: Vectors = lattices[lattice].vectors;
  const hops: Hop[] = [];
  const steps = [-2, -1, 0, 1, 2];
  for (const i of steps)
    for (const j of steps)
      for (const k of steps) {
        const d = [0, 1, 2].map((x) => i * vectorsA[0][x] + j * vectorsA[1][x] + k * vectorsA[2][x]);
        const vectorA: Triple = [d[0], d[1], d[2]];
        const length = Math.hypot(...vectorA);
        // Every hop stands twice, with its reverse.
        if (length > 0.1 && length < 3.3) hops.push({ vectorA, amplitude: scaled(hopAlong(vectorA), 0.5) });
      }
  const onsite = sumOf(
    kroneckerOf(orbital([[0, 0, -1.2]]), identity(2)),
    scaled(spinOrbit, 0.4),
    scaled(S[2], -exchangeEv),
    kroneckerOf(orbital([[0, 3, polarEv], [3, 0, polarEv]]), identity(2)), // biome-ignore format: pairs
  );
  return {
    name: `${lattice}`,
    title: `s and p electrons, ${lattice}`,
    source: "J. C. Slater, G. F. Koster, Phys. Rev. 94, 1498 (1954)",
    vectorsA,
    periodic: 3,
    bands: 8,
    electronsPerBand: 1,
    electrons: undefined,
    fermiEv: 0,
    moments: new Map([
      ["spin", S],
      ["orbital", L],
    ]),
    hessian: "array",
    at: fourierHamiltonian(onsite, 8, hops),
  };
}

/** Directories of the same crystal, all its points and one of every star, with all the moments. */
export function bothWays(model: SampleModel, divisions: Triple, offset: Triple, hessian: "none" | "array" = "none") {
  const moments = Object.entries(carried).map(([name, { matrices, kind, underTimeReversal }]): MomentFacts => {
    return { name, directions: matrices.length === 1 ? 1 : 3, kind, underTimeReversal, unit: "hbar" };
  });
  const all = { ...model, moments: new Map(Object.entries(carried).map(([name, { matrices }]) => [name, matrices])) };
  const reduced = reducedPoints(model, { ...model, divisions, offset });
  const { title, vectorsA, periodic, bands, electronsPerBand, fermiEv } = model;
  const mesh = { vectorsA, periodic, divisions, offset };
  const facts = { title, ...mesh, bands, electronsPerBand, fermiEv, moments, hessian };
  const root = scratchDirectory();
  const reciprocal = reciprocalVectors(vectorsA);
  const sample = createSampler(all, hessian);
  const total = divisions[0] * divisions[1] * divisions[2];
  const [full, part] = [undefined, reduced].map((points) => {
    const directory = join(root, points === undefined ? "full" : "reduced");
    const writer = createGridWriter(directory, { ...facts, ...(points && { reduced: points }) });
    for (let flat = 0; flat < (points?.points.length ?? total); flat++)
      writer.add(sample(cartesianK(points?.points[flat] ?? fractionalK(flat, mesh), reciprocal)));
    writer.finish();
    return directory;
  });
  return { full, reduced: part, order: reduced.operations.length, stored: reduced.points.length };
}
