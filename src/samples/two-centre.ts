// two-centre.ts: a monatomic s, p, d metal with spin from two-centre parameters: 18 bands, exact derivatives in k.
import { bohrA, rydbergEv } from "../base/constants.js";
import { dataFault, usageFault } from "../base/errors.js";
import type { Triple } from "../grid/grid.js";
import type { ComplexMatrix, HamiltonianAtK, SampleModel } from "./model.js";
import { blochSums, orders } from "./two-centre-bloch.js";
import type { TwoCentreFile } from "./two-centre-file.js";
import { type LatticeOverrides, latticeVectors } from "./two-centre-lattice.js";
import { orbitalMatrices, spinMatrices, spinOrbitMatrix } from "./two-centre-orbitals.js";
import { createOrthogonaliser } from "./two-centre-orthogonal.js";

/** Changes to a parameter file; the parameters of the bonds stay. Any of them but `secondDerivatives` makes the file's reference level void. */
export interface TwoCentreOverrides extends LatticeOverrides {
  /** Valence electrons per atom, between 0 and 18. */
  readonly electrons?: number;
  /** Strength xi of xi L.S on the d orbitals, eV. */
  readonly spinOrbitEv?: number;
  /** False leaves the second derivatives out (half the time); default true. */
  readonly secondDerivatives?: boolean;
}

const bands = 18;

/**
 * The metal of a parameter file as a sample model: H~ = S^(-1/2) H S^(-1/2) at each k, plus xi L.S on the d orbitals, in the
 * orthogonalised basis of 9 spin + orbital (spin up first, orbitals in the order of two-centre-orbitals.ts, p times i).
 * Moments: `spin` = sigma/2, `orbital` = the atomic L of p and d taken in the orthogonalised orbitals (intra-atomic
 * approximation), both in hbar. `fermiEv` is given only where the file states one and nothing is overridden.
 * Throws a usage Fault for impossible overrides, a data Fault where S(k) is not positive at some k.
 */
export function twoCentreModel(file: TwoCentreFile, overrides: TwoCentreOverrides = {}): SampleModel {
  const vectorsA = latticeVectors(file, overrides);
  const electrons = overrides.electrons ?? file.electrons;
  if (!(electrons > 0 && electrons < bands))
    throw usageFault(
      `A metal of ${bands} bands cannot hold ${electrons} electrons.`,
      `Give a number between 0 and ${bands}.`,
    );
  const xiEv = overrides.spinOrbitEv ?? file.xi_d_eV;
  if (!Number.isFinite(xiEv)) throw usageFault(`The spin-orbit strength is ${xiEv}.`, "Give it in eV.");
  const second = overrides.secondDerivatives ?? true;
  const changed = Object.entries(overrides).some(
    ([name, value]) => value !== undefined && name !== "secondDerivatives",
  );
  return {
    name: "metal",
    title: changed ? `${file.title} (changed: ${changes(overrides)})` : file.title,
    source: file.source,
    vectorsA,
    periodic: 3,
    bands,
    electronsPerBand: 1,
    electrons,
    fermiEv: changed || !file.reference ? undefined : file.reference.fermi_Ry * rydbergEv,
    moments: new Map([
      ["spin", spinMatrices()],
      ["orbital", orbitalMatrices()],
    ]),
    hessian: second ? "array" : "none",
    at: createEvaluator(file, vectorsA, xiEv, second),
  };
}

const changes = (overrides: TwoCentreOverrides): string =>
  Object.entries(overrides)
    .filter(([name, value]) => value !== undefined && name !== "secondDerivatives")
    .map(([name, value]) => `${name} ${JSON.stringify(value)}`)
    .join(", ");

function createEvaluator(
  file: TwoCentreFile,
  vectorsA: SampleModel["vectorsA"],
  xiEv: number,
  second: boolean,
): SampleModel["at"] {
  const { hamiltonian, overlap } = blochSums(file, vectorsA);
  const orthogonalise = createOrthogonaliser();
  const spinOrbit = spinOrbitMatrix(xiEv);
  const h = new Float64Array(orders * 81);
  const s = new Float64Array(orders * 81);
  const count = second ? orders : 4;
  return (k: Triple): HamiltonianAtK => {
    hamiltonian(k, count, h);
    if (overlap) {
      overlap(k, count, s);
      const smallest = orthogonalise(h, s, count);
      if (!(smallest > 0)) throw notPositive(k, smallest);
    }
    const total = withSpin(h, 0);
    for (let e = 0; e < total.length; e++) total[e] += spinOrbit[e];
    return {
      h: total,
      dh: [withSpin(h, 1), withSpin(h, 2), withSpin(h, 3)],
      d2h: second ? [4, 5, 6, 7, 8, 9].map((order) => withSpin(h, order)) : undefined,
    };
  };
}

/** The 9 x 9 real matrix of one order in both spin blocks of a new 18 x 18 complex one. */
function withSpin(matrices: Float64Array, order: number): ComplexMatrix {
  const out = new Float64Array(2 * bands * bands);
  for (let i = 0; i < 9; i++)
    for (let j = 0; j < 9; j++) {
      const value = matrices[order * 81 + 9 * i + j];
      out[2 * (bands * i + j)] = value;
      out[2 * (bands * (i + 9) + j + 9)] = value;
    }
  return out;
}

const notPositive = (k: Triple, smallest: number): Error =>
  dataFault(
    `The overlap matrix S(k) of the two-centre parameters is not positive at k = (${k.map((c) => c.toFixed(4)).join(", ")}) 1/angstrom: smallest eigenvalue ${smallest.toPrecision(3)}.`,
    `The parameters do not reach to this lattice: stay close to the lattice they were fitted for (cutoff in bohr, 1 bohr = ${bohrA.toFixed(4)} angstrom).`,
  );
