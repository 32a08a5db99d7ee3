// pseudopotential.ts: a semiconductor of diamond or zincblende structure in plane waves, by the empirical pseudopotential method.
import { hbar2OverMeEvA2 } from "../base/constants.js";
import { usageFault } from "../base/errors.js";
import type { Triple } from "../grid/grid.js";
import { identity, kroneckerOf, pauli, scaled, sumOf } from "./matrix.js";
import type { ComplexMatrix, HamiltonianAtK, SampleModel } from "./model.js";
import { choice, declareSample, even, optionalReal, real, type ValuesOf, whole, withDefaults } from "./parameter.js";
import { materialNames, pseudopotentialMaterials } from "./pseudopotential-materials.js";
import { potentialMatrix, type SpinOrbitMatrices, spinOrbitMatrices } from "./pseudopotential-matrix.js";
import { levelsOf, strengthEv } from "./pseudopotential-strength.js";
import { foldIntoFccZone, reciprocalSphere, squared } from "./pseudopotential-waves.js";

const zincblendeParameters = {
  material: choice("GaAs", materialNames, "which form factors, lattice constant and spin-orbit splitting"),
  a: optionalReal("angstrom", "lattice constant; left out: the material's", { min: 0, open: true }),
  splitting: optionalReal("eV", "spin-orbit splitting of the valence top at k = 0; left out: the material's", {
    min: 0,
    max: 1.5,
  }),
  cutoff: real(12, "(2 pi / a)^2", "largest squared length of a plane wave (12: 59 of them, 20: 113)", {
    min: 11,
    max: 36,
  }),
  bands: even(whole(30, "the lowest bands, which are written; 8 of them are filled", 10, 500)),
};

/** Electrons and filled spinor bands of the two atoms. */
const filled = 8;

/** H and dH/dk at k (1/angstrom, folded into the first zone) of the sum of the given parts. */
function planeWaveHamiltonian(
  waves: readonly Triple[],
  unit: number,
  constant: ComplexMatrix,
  linear: SpinOrbitMatrices["linear"],
): (k: Triple) => HamiltonianAtK {
  const n = 2 * waves.length;
  return (k) => {
    const folded = foldIntoFccZone([k[0] / unit, k[1] / unit, k[2] / unit]);
    const h = constant.slice();
    linear.forEach((m, a) => {
      for (let i = 0; i < h.length; i++) h[i] += folded[a] * unit * m[i];
    });
    const dh = [linear[0].slice(), linear[1].slice(), linear[2].slice()] as const;
    for (let state = 0; state < n; state++) {
      const wave = waves[state >> 1];
      const total: Triple = [folded[0] + wave[0], folded[1] + wave[1], folded[2] + wave[2]];
      const at = 2 * state * (n + 1);
      h[at] += (hbar2OverMeEvA2 / 2) * unit * unit * squared(total);
      for (let a = 0; a < 3; a++) dh[a][at] += hbar2OverMeEvA2 * unit * total[a];
    }
    return { h, dh, d2h: undefined };
  };
}

/**
 * `H = (hbar^2/2m)(k + G)^2 + V(G - G')` with the form factors of the material, and the spin-orbit coupling of
 * pseudopotential-matrix.ts, its strength such that the valence top at k = 0 splits as asked. Moment `spin` = sigma/2; no orbital
 * moment: that of plane waves needs r, which a cut set of bands does not have. d2H/dk2 is exactly that of a free electron.
 *
 * One sphere of plane waves around G = 0 serves every k of the first zone. It is not the sphere of the next zone: energies step
 * at the zone's faces, the less the larger `cutoff`. The cut to `bands` may run through a degenerate set; it truncates sums over
 * the empty bands. The reference level is the valence top at k = 0. Throws a usage Fault for more bands than the basis holds.
 */
export function zincblendeModel(given: Partial<ValuesOf<typeof zincblendeParameters>> = {}): SampleModel {
  const { material: name, a, splitting, cutoff, bands } = withDefaults(zincblendeParameters, given);
  const tabulated = pseudopotentialMaterials[name];
  const material = { ...tabulated, latticeConstantA: a ?? tabulated.latticeConstantA };
  const splittingEv = splitting ?? tabulated.splittingEv;
  const waves = reciprocalSphere(cutoff);
  const n = 2 * waves.length;
  if (bands > n) {
    throw usageFault(
      `Sample zincblende cannot write ${bands} bands: cutoff ${cutoff} makes a basis of ${n} states.`,
      `Give at most ${n} bands, or a larger cutoff.`,
    );
  }
  const unit = (2 * Math.PI) / material.latticeConstantA;
  const unitCoupling = spinOrbitMatrices(material, waves);
  const kinetic = (constant: ComplexMatrix, linear: SpinOrbitMatrices["linear"]): ((k: Triple) => HamiltonianAtK) =>
    planeWaveHamiltonian(waves, unit, constant, linear);
  const zero = scaled(unitCoupling.constant, 0);
  const potential = potentialMatrix(material, waves);
  const bare = kinetic(potential, [zero, zero, zero])([0, 0, 0]).h;
  const strength = strengthEv(bare, unitCoupling.constant, n, splittingEv);
  const [x, y, z] = unitCoupling.linear.map((m) => scaled(m, strength / unit));
  const at = kinetic(sumOf(potential, scaled(unitCoupling.constant, strength)), [x, y, z]);
  const half = material.latticeConstantA / 2;
  return {
    name: "zincblende",
    title: `${name} in plane waves, a = ${material.latticeConstantA}, splitting ${splittingEv} eV, cutoff ${cutoff}, lowest ${bands} of ${n} bands`,
    source:
      "M. L. Cohen, T. K. Bergstresser, Phys. Rev. 141, 789 (1966), form factors from memory; spin-orbit coupling after G. Weisz, Phys. Rev. 149, " +
      "504 (1966), from memory, with a local Gaussian well at every atom, adjusted to the splitting",
    vectorsA: [
      [0, half, half],
      [half, 0, half],
      [half, half, 0],
    ],
    periodic: 3,
    bands,
    basisSize: n,
    electronsPerBand: 1,
    electrons: filled,
    fermiEv: levelsOf(n)(at([0, 0, 0]).h)[filled - 1],
    moments: new Map([["spin", pauli.map((s) => kroneckerOf(identity(n / 2), scaled(s, 0.5)))]]),
    hessian: "free-electron",
    at,
  };
}

/**
 * Off every line and plane of symmetry: along [111] the heavy holes of zincblende split by less than a thousandth of an eV, and a mesh
 * through k = 0 has so many points there that its plain sum of a spin response is off by thousands of (hbar/e) S/cm.
 */
const genericOffset: Triple = [0.31, 0.12, 0.73];

export const zincblendeSample = declareSample(
  "zincblende",
  "semiconductor in plane waves (Si, Ge, GaAs, ...): free-electron second derivative, many bands, spin Hall effect of holes",
  zincblendeParameters,
  { divisions: [10, 10, 10], offset: genericOffset },
  zincblendeModel,
);
