// random.ts: seeded random tight-binding crystals of low symmetry, for calibration: no two alike, each exactly known.
import { randomStream } from "../base/random.js";
import type { Triple } from "../grid/grid.js";
import { fourierHamiltonian, type Hop } from "./hops.js";
import { adjointOf, identity, kroneckerOf, pauli, scaled, sumOf, zeroMatrix } from "./matrix.js";
import type { ComplexMatrix, SampleModel } from "./model.js";
import { choice, declareSample, even, real, type ValuesOf, whole, withDefaults } from "./parameter.js";

const randomParameters = {
  seed: whole(1, "which crystal", 0, 4294967295),
  bands: even(whole(6, "number of bands, even: orbitals times two spins", 2, 64)),
  periodic: whole(3, "3 for a crystal, 2 for a layer", 2, 3),
  range: whole(1, "hops reach this many cells along each axis", 1, 3),
  width: real(2, "eV", "scale of the orbital levels and of the hops", { min: 0, open: true }),
  soc: real(0.3, "eV", "scale of the spin-dependent part of levels and hops", { min: 0 }),
  symmetry: choice(
    "none",
    ["none", "time-reversal", "inversion", "both"],
    "which symmetries the crystal keeps; with both, every band is twofold",
  ),
};

type RandomValues = ValuesOf<typeof randomParameters>;

/** A matrix of independent numbers within +-scale, real or complex; `uniform` gives numbers in [-1, 1). */
function randomMatrix(n: number, scale: number, uniform: () => number, kind: "real" | "complex"): ComplexMatrix {
  const out = zeroMatrix(n);
  for (let i = 0; i < out.length; i += 2) {
    out[i] = scale * uniform();
    out[i + 1] = kind === "complex" ? scale * uniform() : 0;
  }
  return out;
}

const hermitianPart = (m: ComplexMatrix): ComplexMatrix => scaled(sumOf(m, adjointOf(m)), 0.5);

/**
 * One random amplitude `A x 1 + i sum_g B_g x sigma_g` (orbitals x spins). Real A and B: time reversal i sy K is kept;
 * Hermitian: with even orbitals inversion is kept (and it may stand on the diagonal R = 0).
 */
function randomAmplitude(p: RandomValues, decay: number, uniform: () => number, hermitian: boolean): ComplexMatrix {
  const orbitals = p.bands / 2;
  const kind = p.symmetry === "time-reversal" || p.symmetry === "both" ? "real" : "complex";
  const scalar = kroneckerOf(randomMatrix(orbitals, p.width * decay, uniform, kind), identity(2));
  const spinful = pauli.map((s) =>
    kroneckerOf(randomMatrix(orbitals, p.soc * decay, uniform, kind), scaled(s, [0, 1])),
  );
  const total = sumOf(scalar, ...spinful);
  return hermitian ? hermitianPart(total) : total;
}

/** Half of the cells within the range, one of each pair +-R, without 0. */
function halfOfCells(range: number, periodic: number): Triple[] {
  const out: Triple[] = [];
  const reach = Array.from({ length: 2 * range + 1 }, (_, i) => i - range);
  for (const i of reach) for (const j of reach) for (const l of periodic === 3 ? reach : [0]) out.push([i, j, l]);
  return out.filter(([i, j, l]) => i > 0 || (i === 0 && (j > 0 || (j === 0 && l > 0))));
}

/** Skewed lattice vectors: the unit cube of 3 angstrom with every entry moved by up to 0.6 angstrom. */
function randomVectors(periodic: number, uniform: () => number): [Triple, Triple, Triple] {
  const row = (axis: number): Triple => {
    const entry = (column: number): number => (axis === column ? 3 : 0) + 0.6 * uniform();
    return [entry(0), entry(1), entry(2)];
  };
  const [a1, a2, a3] = [row(0), row(1), row(2)];
  return periodic === 3
    ? [a1, a2, a3]
    : [
        [a1[0], a1[1], 0],
        [a2[0], a2[1], 0],
        [0, 0, 3],
      ];
}

/** Random orbital moment: imaginary antisymmetric (odd under time reversal), or any Hermitian where that is not kept. */
function randomOrbital(p: RandomValues, uniform: () => number): ComplexMatrix {
  const raw = randomMatrix(p.bands / 2, 1, uniform, "complex");
  const keepsTime = p.symmetry === "time-reversal" || p.symmetry === "both";
  const matrix = hermitianPart(raw);
  if (keepsTime) for (let i = 0; i < matrix.length; i += 2) matrix[i] = 0;
  return kroneckerOf(matrix, identity(2));
}

/**
 * `H(k) = sum_R H_R e^{ik.R}`, hops falling off as e^{-|R|} (R counted in cells), spin = sigma / 2 exactly, orbital
 * moments random. Half filled; no reference level is given: it follows from the electrons.
 */
export function randomModel(given: Partial<RandomValues> = {}): SampleModel {
  const p = withDefaults(randomParameters, given);
  const stream = randomStream(p.seed);
  const uniform = (): number => 2 * stream.uniform() - 1;
  const vectorsA = randomVectors(p.periodic, uniform);
  const keepsInversion = p.symmetry === "inversion" || p.symmetry === "both";
  const onsite = randomAmplitude(p, 1, uniform, true);
  const hops: Hop[] = halfOfCells(p.range, p.periodic).map((cell) => ({
    vectorA: [0, 1, 2].map((x) => cell.reduce((sum, c, j) => sum + c * vectorsA[j][x], 0)) as unknown as Triple,
    amplitude: randomAmplitude(p, Math.exp(-Math.hypot(...cell)), uniform, keepsInversion),
  }));
  const spin = pauli.map((s) => kroneckerOf(identity(p.bands / 2), scaled(s, 0.5)));
  const orbital = [0, 1, 2].map(() => randomOrbital(p, uniform));
  return {
    name: "random",
    title: `Random crystal, seed ${p.seed}, ${p.bands} bands, symmetry: ${p.symmetry}`,
    source: "made up: seeded random numbers, no material",
    vectorsA,
    periodic: p.periodic === 2 ? 2 : 3,
    bands: p.bands,
    electronsPerBand: 1,
    electrons: p.bands / 2,
    fermiEv: undefined,
    moments: new Map([
      ["spin", spin],
      ["orbital", orbital],
    ]),
    hessian: "array",
    at: fourierHamiltonian(onsite, p.bands, hops),
  };
}

export const randomSample = declareSample(
  "random",
  "seeded random crystal of low symmetry with spin and orbital moments, for calibration",
  randomParameters,
  { divisions: [16, 16, 16], offset: [0, 0, 0] },
  randomModel,
);
