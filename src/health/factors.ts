// factors.ts: which slip in units or conventions turns a number into itself times a factor?
import { bohrA, hartreeEv, hbar2OverMeEvA2, hbarEvS, hbarMetrePerSecondEvA, rydbergEv } from "../base/constants.js";
import type { GridFacts } from "../grid/grid.js";
import { length } from "../zone/lattice.js";

/** A slip: what is stored, times `factor`, is what the manifest says. */
export interface Slip {
  readonly factor: number;
  readonly words: string;
  readonly cure: string;
}

const twoPi = 2 * Math.PI;
const multiply = "Convert the numbers before you write them.";

/** Slips of the velocity: true dH/dk = factor times stored. */
export function velocitySlips(facts: GridFacts): Slip[] {
  const unit = (name: string): string => `Set arrays.velocity.unit to "${name}".`;
  const declared =
    "Set arrays.velocity.unit to the unit in which the numbers are: eV*angstrom, hartree*bohr, rydberg*bohr or m/s.";
  const slips: [number, string, string][] = [
    [hartreeEv * bohrA, "it is in hartree*bohr", unit("hartree*bohr")],
    [rydbergEv * bohrA, "it is in rydberg*bohr", unit("rydberg*bohr")],
    [1 / (hartreeEv * bohrA), "it is in eV*angstrom, but declared as hartree*bohr", unit("eV*angstrom")],
    [1 / (rydbergEv * bohrA), "it is in eV*angstrom, but declared as rydberg*bohr", unit("eV*angstrom")],
    [hartreeEv, "its energies are in hartree, its lengths in angstrom", multiply],
    [rydbergEv, "its energies are in rydberg, its lengths in angstrom", multiply],
    [
      bohrA,
      "its lengths are in bohr: derivatives with respect to k in 1/bohr are larger by 1/0.529 than eV*bohr in eV*angstrom",
      multiply,
    ],
    [1 / bohrA, "its lengths are too short by bohr/angstrom: 0.529 was applied once too often", multiply],
    [
      twoPi,
      "a factor 2 pi is missing: the derivative was taken with respect to 2 pi k, or 1/2 pi was applied once too often",
      multiply,
    ],
    [
      1 / twoPi,
      "a factor 2 pi too many: the derivative was taken with respect to k in units of 2 pi",
      "Divide the velocity by 2 pi: k carries the factor 2 pi (a_i . b_j = 2 pi delta_ij).",
    ],
    [hbarMetrePerSecondEvA, "it is the velocity in m/s (divided by hbar)", unit("m/s")],
    [
      1 / hbarMetrePerSecondEvA,
      "it is dH/dk in eV*angstrom, but declared as m/s (hbar is missing in the declaration)",
      unit("eV*angstrom"),
    ],
    [
      hbarEvS,
      "it is the velocity in angstrom/s: dH/dk divided by hbar in eV s",
      "Multiply by hbar: what is wanted is dH/dk, an energy times a length.",
    ],
    [
      hbarEvS * 1e15,
      "it is the velocity in angstrom/fs: dH/dk divided by hbar in eV fs",
      "Multiply by hbar: what is wanted is dH/dk, an energy times a length.",
    ],
    [1 / (hbarEvS * 1e15), "hbar in eV fs was applied once too often", "Divide by hbar: what is wanted is dH/dk."],
    [1 / hbarEvS, "hbar in eV s was applied once too often", "Divide by hbar: what is wanted is dH/dk."],
    [
      hbar2OverMeEvA2,
      "it is the momentum in 1/angstrom",
      "Multiply by hbar^2/m_e = 7.62 eV angstrom^2, and add the parts of dH/dk that are not momentum.",
    ],
    [1e-3, "its energies are in meV", multiply],
    [10, "its lengths are in nm", multiply],
    [2, "it is half as large as it must be (rydberg for hartree, or p/m with m = 1 instead of 1/2)", declared],
    [0.5, "it is twice as large as it must be (hartree for rydberg)", declared],
    [1, "the sign is wrong", "Take dH/dk, not -dH/dk; check the sign of k in exp(i k.R)."],
    ...lengthSlips(facts),
  ];
  return slips.map(([factor, words, cure]) => ({ factor, words, cure }));
}

/** Derivatives with respect to k in units of 2 pi / a or 1 / a. */
function lengthSlips({ vectorsA }: GridFacts): [number, string, string][] {
  const [first] = vectorsA;
  const sizes = [
    ...vectorsA.map(length),
    Math.SQRT2 * length(first),
    (2 / Math.sqrt(3)) * length(first),
    2 * length(first),
  ];
  const cure = "Take the derivative with respect to k in 1/angstrom (or 1/bohr, and say so).";
  return sizes.flatMap((a): [number, string, string][] => [
    [a / twoPi, `the derivative was taken with respect to k in units of 2 pi/a, a = ${a.toFixed(3)} angstrom`, cure],
    [a, `the derivative was taken with respect to k a, a = ${a.toFixed(3)} angstrom`, cure],
  ]);
}

/** Slips of the energies: the velocity is too small by `factor` against them. */
export const energySlips: readonly Slip[] = (
  [
    [
      1 / hartreeEv,
      "energies are in hartree",
      'Set arrays.energy.unit to "hartree" (and level.unit, if it is the same).',
    ],
    [
      1 / rydbergEv,
      "energies are in rydberg",
      'Set arrays.energy.unit to "rydberg" (and level.unit, if it is the same).',
    ],
    [1000, "energies are in meV", 'Set arrays.energy.unit to "meV".'],
    [hartreeEv, "energies are in eV, but declared as hartree", 'Set arrays.energy.unit to "eV".'],
    [rydbergEv, "energies are in eV, but declared as rydberg", 'Set arrays.energy.unit to "eV".'],
    [1 / 1000, "energies are in eV, but declared as meV", 'Set arrays.energy.unit to "eV".'],
    [2, "energies are in rydberg, but declared as hartree", 'Set arrays.energy.unit to "rydberg".'],
    [0.5, "energies are in hartree, but declared as rydberg", 'Set arrays.energy.unit to "hartree".'],
    [1, "the energies have the wrong sign", "Write the eigenvalues themselves."],
  ] as const
).map(([factor, words, cure]) => ({ factor, words, cure }));

/** Slips of the lattice: true steps in k are the manifest's times `factor`. */
export const latticeSlips: readonly Slip[] = (
  [
    [1 / bohrA, "the lattice vectors are in bohr, but declared as angstrom", 'Set lattice.unit to "bohr".'],
    [bohrA, "the lattice vectors are in angstrom, but declared as bohr", 'Set lattice.unit to "angstrom".'],
    [0.1, "the lattice vectors are in nm, but declared as angstrom", 'Set lattice.unit to "nm".'],
    [10, "the lattice vectors are in angstrom, but declared as nm", 'Set lattice.unit to "angstrom".'],
    [twoPi, "the lattice vectors are too long by 2 pi", "Give the vectors a1, a2, a3 with a_i . b_j = 2 pi delta_ij."],
    [
      1 / twoPi,
      "the lattice vectors are too short by 2 pi",
      "Give the vectors a1, a2, a3 with a_i . b_j = 2 pi delta_ij.",
    ],
    [
      1,
      "the mesh runs to negative k: the points are those of -k",
      "Write the points in the order of the mesh: k = sum (i_j + offset_j) / n_j b_j.",
    ],
  ] as const
).map(([factor, words, cure]) => ({ factor, words, cure }));

/** Slips of the second derivatives: true = factor times stored. */
export const hessianSlips: readonly Slip[] = (
  [
    [hbar2OverMeEvA2, "it is in hartree*bohr^2 (or in 1/m_e)", 'Set arrays.hessian.unit to "hartree*bohr^2".'],
    [hbar2OverMeEvA2 / 2, "it is in rydberg*bohr^2", 'Set arrays.hessian.unit to "rydberg*bohr^2".'],
    [
      1 / hbar2OverMeEvA2,
      "it is in eV*angstrom^2, but declared as hartree*bohr^2",
      'Set arrays.hessian.unit to "eV*angstrom^2".',
    ],
    [
      2 / hbar2OverMeEvA2,
      "it is in eV*angstrom^2, but declared as rydberg*bohr^2",
      'Set arrays.hessian.unit to "eV*angstrom^2".',
    ],
    [hartreeEv, "its energies are in hartree", multiply],
    [rydbergEv, "its energies are in rydberg", multiply],
    [bohrA * bohrA, "its lengths are in bohr", multiply],
    [twoPi * twoPi, "a factor (2 pi)^2 is missing", multiply],
    [1 / (twoPi * twoPi), "a factor (2 pi)^2 too many", multiply],
    [1, "its sign is wrong", "d2H/dk_a dk_b = -sum_R R_a R_b H(R) exp(i k.R)."],
    [2, "a factor 2 is missing (it is the second-order coefficient, half of the derivative)", multiply],
    [0.5, "a factor 2 too many", multiply],
  ] as const
).map(([factor, words, cure]) => ({ factor, words, cure }));

/** How far a measured factor may be from a slip's, relative. */
const nearEnough = 0.08;

/** The slips that explain a measured factor, nearest first; a sign counts as a slip of its own where no other is needed. */
export function slipsFor(factor: number, slips: readonly Slip[]): Slip[] {
  const distance = (slip: Slip): number => Math.abs(Math.log(Math.abs(factor) / slip.factor));
  return slips
    .filter((slip) => distance(slip) < nearEnough && !(slip.factor === 1 && factor > 0))
    .sort((a, b) => distance(a) - distance(b));
}
