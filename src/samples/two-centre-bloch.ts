// two-centre-bloch.ts: Bloch sums of the two-centre blocks, H(k) and S(k) with first and second derivatives, all real.
import { bohrA, rydbergEv } from "../base/constants.js";
import type { Triple } from "../grid/grid.js";
import type { TwoCentreFile } from "./two-centre-file.js";
import { bondBlock, type IntegralName, integralNames } from "./two-centre-integrals.js";
import { halfShell, type Vectors } from "./two-centre-lattice.js";

/** Value, 3 first and 6 second derivatives: index 0; 1..3 = x, y, z; 4..9 = xx, yy, zz, yz, zx, xy. */
export const orders = 10;
/** Sums one k point into out[order * 81 + 9 * bra + ket]; orders from `count` on are left alone (1, 4 or 10 orders). */
export type BlochSum = (k: Triple, count: number, out: Float64Array) => void;

/** What the file's formulas give on one lattice. `overlap` is undefined for orthogonal orbitals. */
export interface BlochSums {
  /** eV, eV angstrom, eV angstrom^2. */
  readonly hamiltonian: BlochSum;
  /** 1, angstrom, angstrom^2. */
  readonly overlap: BlochSum | undefined;
  /** Bonds summed: one of each pair (R, -R). */
  readonly bonds: number;
}

/**
 * Basis: the Bloch sums of the nine orbitals, phase exp(i k.R) per lattice vector, the p orbitals multiplied by i. In a
 * lattice with one atom a cell every atom is a centre of inversion, so that pairs (R, -R) give 2 cos(k.R) between
 * orbitals of equal parity and 2i sin(k.R) between p and s or d: with the factor i every matrix is real symmetric.
 */
export function blochSums(file: TwoCentreFile, vectors: Vectors): BlochSums {
  const bonds = halfShell(vectors, file.cutoff * bohrA);
  const lengths = bonds.map((r) => Math.hypot(...r) / bohrA);
  const cut = lengths.map((length) => 1 / (1 + Math.exp((length - file.cutoff) / file.width + 5)));
  const density = lengths.reduce((sum, length, i) => sum + 2 * Math.exp(-file.lambda2 * length) * cut[i], 0);
  const level = ({ a, b, c, d }: TwoCentreFile["onsite"]["s"]): number =>
    rydbergEv * (a + b * density ** (2 / 3) + c * density ** (4 / 3) + d * density * density);
  const { s, p, d } = file.onsite;
  const levels = [level(s), ...Array<number>(3).fill(level(p)), ...Array<number>(5).fill(level(d))];
  const blocks = (table: TwoCentreFile["H"], unit: number): Float64Array[] =>
    bonds.map((r, i) => bondBlock(integralsAt(table, lengths[i], cut[i] * unit), unitVector(r)));
  return {
    hamiltonian: sumOver(bonds, blocks(file.H, rydbergEv), levels),
    overlap: file.S && sumOver(bonds, blocks(file.S, 1), Array<number>(9).fill(1)),
    bonds: bonds.length,
  };
}

/** The ten integrals at one distance (bohr): (a + b R + c R^2) exp(-d2 R) times the factor. */
function integralsAt(table: TwoCentreFile["H"], length: number, factor: number): Record<IntegralName, number> {
  const at = (name: IntegralName): number => {
    const { a, b, c, d2 } = table[name];
    return (a + length * (b + length * c)) * Math.exp(-d2 * length) * factor;
  };
  return Object.fromEntries(integralNames.map((name) => [name, at(name)])) as Record<IntegralName, number>;
}

const unitVector = (r: Triple): Triple => {
  const length = Math.hypot(...r);
  return [r[0] / length, r[1] / length, r[2] / length];
};

/** Upper-triangle entries, those between equal parities first: even[0..27), odd[27..45); and the sign that the factor i of p gives. */
function entriesByParity(): { bra: number; ket: number; sign: number }[] {
  const isP = (orbital: number): boolean => orbital >= 1 && orbital <= 3;
  const all: { bra: number; ket: number; sign: number; odd: boolean }[] = [];
  for (let bra = 0; bra < 9; bra++)
    for (let ket = bra; ket < 9; ket++) {
      const odd = isP(bra) !== isP(ket);
      all.push({ bra, ket, odd, sign: odd && isP(ket) ? -1 : 1 });
    }
  return [...all.filter((it) => !it.odd), ...all.filter((it) => it.odd)];
}

/** Long because the weights of all ten orders are unrolled: this is the loop over every bond at every k point. */
function sumOver(bonds: readonly Triple[], blocks: readonly Float64Array[], levels: readonly number[]): BlochSum {
  const entries = entriesByParity();
  const evenCount = entries.findIndex(({ bra, ket }) => bra === 0 && ket === 1);
  const packed = Float64Array.from(
    blocks.flatMap((block) => entries.map((it) => it.sign * block[9 * it.bra + it.ket])),
  );
  const place = Int32Array.from(entries.flatMap((it) => [9 * it.bra + it.ket, 9 * it.ket + it.bra]));
  const vectors = Float64Array.from(bonds.flatMap((r) => [...r]));
  const sums = new Float64Array(45 * orders);
  const weights = new Float64Array(2 * orders);
  return (k, count, out) => {
    sums.fill(0);
    for (let bond = 0; bond < bonds.length; bond++) {
      fillWeights(vectors, 3 * bond, k, weights);
      for (let e = 0; e < 45; e++) {
        const value = packed[45 * bond + e];
        const w = e < evenCount ? 0 : orders;
        const at = e * orders;
        sums[at] += weights[w] * value;
        if (count > 1) {
          sums[at + 1] += weights[w + 1] * value;
          sums[at + 2] += weights[w + 2] * value;
          sums[at + 3] += weights[w + 3] * value;
        }
        if (count > 4) {
          sums[at + 4] += weights[w + 4] * value;
          sums[at + 5] += weights[w + 5] * value;
          sums[at + 6] += weights[w + 6] * value;
          sums[at + 7] += weights[w + 7] * value;
          sums[at + 8] += weights[w + 8] * value;
          sums[at + 9] += weights[w + 9] * value;
        }
      }
    }
    for (let e = 0; e < 45; e++)
      for (let order = 0; order < count; order++) {
        out[81 * order + place[2 * e]] = sums[e * orders + order];
        out[81 * order + place[2 * e + 1]] = sums[e * orders + order];
      }
    for (let i = 0; i < 9; i++) out[10 * i] += levels[i];
  };
}

/** Weights of one pair (R, -R): 2 cos(k.R) and its derivatives, then 2 sin(k.R) and its derivatives. */
function fillWeights(vectors: Float64Array, at: number, k: Triple, weights: Float64Array): void {
  const x = vectors[at];
  const y = vectors[at + 1];
  const z = vectors[at + 2];
  const phase = k[0] * x + k[1] * y + k[2] * z;
  const cos = 2 * Math.cos(phase);
  const sin = 2 * Math.sin(phase);
  fillOrders(weights, 0, x, y, z, cos, -sin);
  fillOrders(weights, orders, x, y, z, sin, cos);
}

/** A function of the phase with value `value` and derivative `slope`; its second derivative is -value. */
function fillOrders(w: Float64Array, at: number, x: number, y: number, z: number, value: number, slope: number): void {
  w[at] = value;
  w[at + 1] = x * slope;
  w[at + 2] = y * slope;
  w[at + 3] = z * slope;
  w[at + 4] = -x * x * value;
  w[at + 5] = -y * y * value;
  w[at + 6] = -z * z * value;
  w[at + 7] = -y * z * value;
  w[at + 8] = -z * x * value;
  w[at + 9] = -x * y * value;
}
