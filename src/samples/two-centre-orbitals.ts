// two-centre-orbitals.ts: the nine real orbitals s, p, d of one atom, and the angular momentum and spin matrices in their basis.
import type { ComplexMatrix } from "./model.js";

// Orbitals of one atom in the order of every 9-index below: s, x, y, z, xy, yz, zx, x2-y2, 3z2-r2; with spin,
// index = 9 * spin + orbital, spin up first.

/** First index of the p and of the d orbitals. */
export const firstP = 1;
export const firstD = 4;

const half = Math.sqrt(3) / 2;

/** The d orbitals as traceless quadratic forms M (row major 3 x 3): Y_m(n) = n.M_m.n, sum over M_m : M_m' = (3/2) delta. */
export const quadraticForms: readonly (readonly number[])[] = [
  [0, half, 0, half, 0, 0, 0, 0, 0],
  [0, 0, 0, 0, 0, half, 0, half, 0],
  [0, 0, half, 0, 0, 0, half, 0, 0],
  [half, 0, 0, 0, -half, 0, 0, 0, 0],
  [-0.5, 0, 0, 0, -0.5, 0, 0, 0, 1],
];

/** Levi-Civita symbol of (a, b, c), each 0, 1 or 2. */
const leviCivita = (a: number, b: number, c: number): number => ((a - b) * (b - c) * (c - a)) / 2;

/** Tr(M E_a N) with (E_a)_bc = eps_abc, forms row major. */
function traceThrough(m: readonly number[], axis: number, n: readonly number[]): number {
  let sum = 0;
  for (let i = 0; i < 3; i++)
    for (let b = 0; b < 3; b++) for (let c = 0; c < 3; c++) sum += m[3 * i + b] * leviCivita(axis, b, c) * n[3 * c + i];
  return sum;
}

/**
 * Imaginary parts of the angular momentum L_x, L_y, L_z (units of hbar; the real parts vanish), 9 x 9 row (bra) major,
 * antisymmetric. L = -i r x grad on the real p and d functions: <x|L_z|y> = -i. The s orbital and the blocks between
 * different l are zero: the intra-atomic approximation of the orbital moment.
 */
export function angularMomentumImaginary(): readonly [Float64Array, Float64Array, Float64Array] {
  const along = (axis: number): Float64Array => {
    const matrix = new Float64Array(81);
    for (let b = 0; b < 3; b++)
      for (let c = 0; c < 3; c++) matrix[9 * (firstP + b) + firstP + c] = -leviCivita(axis, b, c);
    quadraticForms.forEach((bra, i) => {
      quadraticForms.forEach((ket, j) => {
        matrix[9 * (firstD + i) + firstD + j] = (-4 / 3) * traceThrough(bra, axis, ket);
      });
    });
    return matrix;
  };
  return [along(0), along(1), along(2)];
}

/** Pauli matrices as (real, imaginary) pairs, row major: index 2 * (2 * bra + ket). */
const pauli: readonly (readonly number[])[] = [
  [0, 0, 1, 0, 1, 0, 0, 0],
  [0, 0, 0, -1, 0, 1, 0, 0],
  [1, 0, 0, 0, 0, 0, -1, 0],
];

/** Adds factor * (2 x 2 spin matrix) x (9 x 9 orbital matrix, real and imaginary parts) to an 18 x 18 complex matrix. */
function addProduct(
  out: ComplexMatrix,
  spin: readonly number[],
  re: Float64Array,
  im: Float64Array,
  factor: number,
): void {
  for (let p = 0; p < 2; p++)
    for (let q = 0; q < 2; q++) {
      const sr = spin[2 * (2 * p + q)] * factor;
      const si = spin[2 * (2 * p + q) + 1] * factor;
      if (sr === 0 && si === 0) continue;
      for (let i = 0; i < 9; i++)
        for (let j = 0; j < 9; j++) {
          const at = 2 * ((9 * p + i) * 18 + 9 * q + j);
          out[at] += sr * re[9 * i + j] - si * im[9 * i + j];
          out[at + 1] += sr * im[9 * i + j] + si * re[9 * i + j];
        }
    }
}

const zero = new Float64Array(81);
const unit = Float64Array.from({ length: 81 }, (_, at) => (at % 10 === 0 ? 1 : 0));

/** Spin sigma/2 along x, y, z, 18 x 18, units of hbar. */
export function spinMatrices(): ComplexMatrix[] {
  return pauli.map((sigma) => {
    const out = new Float64Array(648);
    addProduct(out, sigma, unit, zero, 0.5);
    return out;
  });
}

/** Angular momentum of the p and d orbitals along x, y, z, 18 x 18, units of hbar. */
export function orbitalMatrices(): ComplexMatrix[] {
  return angularMomentumImaginary().map((imaginary) => {
    const out = new Float64Array(648);
    addProduct(out, [1, 0, 0, 0, 0, 0, 1, 0], zero, imaginary, 1);
    return out;
  });
}

/** xi L.S on the d orbitals, 18 x 18, in the unit of `strength`: two levels, -(3/2) xi (four-fold) and xi (six-fold). */
export function spinOrbitMatrix(strength: number): ComplexMatrix {
  const out = new Float64Array(648);
  angularMomentumImaginary().forEach((imaginary, axis) => {
    const d = imaginary.map((value, at) => (Math.floor(at / 9) >= firstD && at % 9 >= firstD ? value : 0));
    addProduct(out, pauli[axis], zero, d, strength / 2);
  });
  return out;
}
