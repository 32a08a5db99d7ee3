// luttinger.ts: the spherical Luttinger valence band, with strain, cut to a box.
import { hbar2OverMeEvA2 } from "../base/constants.js";
import { hessianPairs } from "../grid/grid.js";
import { boxVectors, foldIntoBox, polynomialAt } from "./continuum.js";

import { angularMomentum, identity, productOf, scaled, sumOf, zeroMatrix } from "./matrix.js";
import type { ComplexMatrix, SampleModel } from "./model.js";
import { declareSample, real, type ValuesOf, withDefaults } from "./parameter.js";

const luttingerParameters = {
  g1: real(6.98, "", "Luttinger parameter gamma1 (GaAs: 6.98)"),
  g2: real(2.582, "", "spherical Luttinger parameter gamma2 (GaAs: 2.582)"),
  exx: real(0, "", "strain along x"),
  eyy: real(0, "", "strain along y"),
  ezz: real(0, "", "strain along z"),
  b: real(-2, "eV", "deformation potential of Pikus and Bir"),
  box: real(0.2, "1/angstrom", "K, half the width of the box in k; must hold the holes", { min: 0, open: true }),
};

/**
 * `H = -(hbar^2 / 2m) [(g1 + 5/2 g2) k^2 - 2 g2 (k.J)^2] - b sum_i (J_i^2 - J^2/3) e_ii` for valence electrons, J = 3/2,
 * basis m = 3/2 ... -3/2; moment `spin` = J/3, the spin inside J = 3/2. Electron energies: holes are levels below the
 * band edge, which is the reference level (with strain, the upper edge at k = 0); all four bands full is no hole.
 */
export function luttingerModel(given: Partial<ValuesOf<typeof luttingerParameters>> = {}): SampleModel {
  const { g1, g2, exx, eyy, ezz, b, box } = withDefaults(luttingerParameters, given);
  const J = angularMomentum(1.5);
  const one = identity(4);
  const zero = zeroMatrix(4);
  const strain = [exx, eyy, ezz].map((e, i) => scaled(sumOf(productOf(J[i], J[i]), scaled(one, -1.25)), -b * e));
  const anticommutator = (a: number, c: number): ComplexMatrix => sumOf(productOf(J[a], J[c]), productOf(J[c], J[a]));
  const second = hessianPairs.map(([a, c]) =>
    sumOf(
      scaled(one, a === c ? -hbar2OverMeEvA2 * (g1 + 2.5 * g2) : 0),
      scaled(anticommutator(a, c), hbar2OverMeEvA2 * g2),
    ),
  );
  const polynomial = { constant: sumOf(...strain), linear: [zero, zero, zero] as const, second };
  const strained = exx !== 0 || eyy !== 0 || ezz !== 0 ? `, strain ${exx} ${eyy} ${ezz}` : "";
  return {
    name: "luttinger",
    title: `Spherical Luttinger valence band, g1 = ${g1}, g2 = ${g2}${strained}, box of half width ${box} / angstrom`,
    source:
      "J. M. Luttinger (1956); J. Schliemann, D. Loss, Phys. Rev. B 69, 165315 (2004), from memory; parameters: I. Vurgaftman et al., " +
      "J. Appl. Phys. 89, 5815 (2001); strain: Pikus and Bir",
    vectorsA: boxVectors(box, 3),
    periodic: 3,
    bands: 4,
    electronsPerBand: 1,
    electrons: 4,
    fermiEv: strainEdge(exx, eyy, ezz, b),
    moments: new Map([["spin", J.map((m) => scaled(m, 1 / 3))]]),
    hessian: "array",
    at: (k) => polynomialAt(polynomial, 4, foldIntoBox(k, box, 3)),
  };
}

/**
 * The upper edge at k = 0 in eV: `-b sum_i (J_i^2 - J^2/3) e_ii` has the twofold levels +-|b| sqrt(((exx - eyy)^2 + (eyy - ezz)^2 +
 * (ezz - exx)^2) / 2).
 */
function strainEdge(exx: number, eyy: number, ezz: number, b: number): number {
  return Math.abs(b) * Math.sqrt(((exx - eyy) ** 2 + (eyy - ezz) ** 2 + (ezz - exx) ** 2) / 2);
}

export const luttingerSample = declareSample(
  "luttinger",
  "valence band of a cubic semiconductor near its top (continuum, cut to a box), with strain: spin Hall effect of holes",
  luttingerParameters,
  { divisions: [36, 36, 36], offset: [0.5, 0.5, 0.5] },
  luttingerModel,
);
