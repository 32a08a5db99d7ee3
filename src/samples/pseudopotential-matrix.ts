// pseudopotential-matrix.ts: what are the crystal potential and its spin-orbit coupling between plane waves?
import { rydbergEv } from "../base/constants.js";
import type { Triple } from "../grid/grid.js";
import { cross } from "../zone/lattice.js";
import { zeroMatrix } from "./matrix.js";
import type { ComplexMatrix } from "./model.js";
import type { PseudopotentialMaterial } from "./pseudopotential-materials.js";
import { squared } from "./pseudopotential-waves.js";

type Complex = readonly [re: number, im: number];

/** Basis: plane wave exp(i (k + G).r) times spin up, down; spin runs fastest. Returns the size of the basis. */
export const spinorBasisSize = (waves: readonly Triple[]): number => 2 * waves.length;

/**
 * The phases of the two atoms, the cation at -tau and the anion at tau = (a/8)(1, 1, 1): `exp(i q.tau)` weighted with `cation` and its
 * conjugate with `anion`, halved; q in units of 2 pi / a.
 */
function structureFactor(q: Triple, cation: number, anion: number): Complex {
  const angle = (Math.PI / 4) * (q[0] + q[1] + q[2]);
  return [((cation + anion) / 2) * Math.cos(angle), ((cation - anion) / 2) * Math.sin(angle)];
}

/** The potential between plane waves that differ by q, in eV. */
function potentialAt(material: PseudopotentialMaterial, q: Triple): Complex {
  const [s3, s8, s11] = material.symmetricRy;
  const [a3, a4, a11] = material.antisymmetricRy;
  const factors = new Map([
    [3, [s3, a3]],
    [4, [0, a4]],
    [8, [s8, 0]],
    [11, [s11, a11]],
  ]);
  const [symmetric, antisymmetric] = factors.get(squared(q)) ?? [0, 0];
  return structureFactor(q, rydbergEv * (symmetric + antisymmetric), rydbergEv * (symmetric - antisymmetric));
}

const difference = (g: Triple, h: Triple): Triple => [g[0] - h[0], g[1] - h[1], g[2] - h[2]];

function eachPair(waves: readonly Triple[], visit: (bra: number, ket: number, q: Triple) => void): void {
  waves.forEach((g, bra) => {
    waves.forEach((h, ket) => {
      visit(bra, ket, difference(g, h));
    });
  });
}

/** The crystal potential in the spinor basis of these plane waves (units of 2 pi / a), eV; the mean potential is 0. */
export function potentialMatrix(material: PseudopotentialMaterial, waves: readonly Triple[]): ComplexMatrix {
  const n = spinorBasisSize(waves);
  const out = zeroMatrix(n);
  eachPair(waves, (bra, ket, q) => {
    const value = potentialAt(material, q);
    for (const spin of [0, 1]) out.set(value, 2 * ((2 * bra + spin) * n + 2 * ket + spin));
  });
  return out;
}

/** Adds the 2 x 2 block `factor (vector . sigma)`. */
function addSigma(out: ComplexMatrix, n: number, bra: number, ket: number, factor: Complex, [x, y, z]: Triple): void {
  const add = (up: number, down: number, re: number, im: number): void => {
    const at = 2 * ((2 * bra + up) * n + 2 * ket + down);
    out[at] += factor[0] * re - factor[1] * im;
    out[at + 1] += factor[0] * im + factor[1] * re;
  };
  add(0, 0, z, 0);
  add(0, 1, x, -y);
  add(1, 0, x, y);
  add(1, 1, -z, 0);
}

/** Width in angstrom of the Gaussian wells whose spin-orbit coupling is taken: of the size of the cores. */
const wellWidthA = 0.25;

/** Spin-orbit coupling of unit strength: `constant + sum_a k_a linear[a]`, k in units of 2 pi / a. */
export interface SpinOrbitMatrices {
  readonly constant: ComplexMatrix;
  readonly linear: readonly [ComplexMatrix, ComplexMatrix, ComplexMatrix];
}

/**
 * `-i s(q) [(k + G) x (k + G')] . sigma` with q = G - G': what grad U x p . sigma is between plane waves for a local U, here a
 * Gaussian well at every atom, as deep as the splitting of the atom's p shell. Since `(k + G) x (k + G') = G x G' - k x q`, it is
 * linear in k: it adds to the velocity and leaves d2H/dk2 that of a free electron, exactly.
 */
export function spinOrbitMatrices(material: PseudopotentialMaterial, waves: readonly Triple[]): SpinOrbitMatrices {
  const n = spinorBasisSize(waves);
  const out = { constant: zeroMatrix(n), linear: [zeroMatrix(n), zeroMatrix(n), zeroMatrix(n)] as const };
  const axes: readonly Triple[] = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ];
  const mean = (material.atomsEv[0] + material.atomsEv[1]) / 2;
  const unit = (2 * Math.PI) / material.latticeConstantA;
  eachPair(waves, (bra, ket, q) => {
    const depth = Math.exp(-squared(q) * (unit * wellWidthA) ** 2 * 0.5) / mean;
    const [re, im] = structureFactor(q, depth * material.atomsEv[0], depth * material.atomsEv[1]);
    addSigma(out.constant, n, bra, ket, [im, -re], cross(waves[bra], waves[ket]));
    axes.forEach((axis, a) => {
      addSigma(out.linear[a], n, bra, ket, [-im, re], cross(axis, q));
    });
  });
  return out;
}
