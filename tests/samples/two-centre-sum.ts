// two-centre-sum.ts: the plain mesh sum of the spin and orbital Hall conductivity, as plainly written as possible, for the tests.
import { boltzmannEvPerK, e2OverHbarS, perAngstromInPerCm } from "../../src/base/constants.js";
import type { Triple } from "../../src/grid/grid.js";
import { createEigensolver } from "../../src/kernel/eigen.js";
import type { ComplexMatrix, SampleModel } from "../../src/samples/model.js";
import { volume } from "../../src/samples/two-centre-lattice.js";

const bands = 18;
const entry = (i: number, j: number): number => 2 * (bands * i + j);

/** <m|operator|n> for the eigenvectors in the rows of `vectors`. */
function rotated(operator: ComplexMatrix, vectors: Float64Array): ComplexMatrix {
  const half = new Float64Array(2 * bands * bands);
  const out = new Float64Array(2 * bands * bands);
  for (let i = 0; i < bands; i++)
    for (let l = 0; l < bands; l++) {
      const [re, im] = [operator[entry(i, l)], operator[entry(i, l) + 1]];
      if (re === 0 && im === 0) continue;
      for (let n = 0; n < bands; n++) {
        const [vr, vi] = [vectors[entry(n, l)], vectors[entry(n, l) + 1]];
        half[entry(i, n)] += re * vr - im * vi;
        half[entry(i, n) + 1] += re * vi + im * vr;
      }
    }
  for (let m = 0; m < bands; m++)
    for (let i = 0; i < bands; i++) {
      const [vr, vi] = [vectors[entry(m, i)], vectors[entry(m, i) + 1]];
      for (let n = 0; n < bands; n++) {
        const [re, im] = [half[entry(i, n)], half[entry(i, n) + 1]];
        out[entry(m, n)] += vr * re + vi * im;
        out[entry(m, n) + 1] += vr * im - vi * re;
      }
    }
  return out;
}

/** Omega_n = -2 Im sum_m <n|j|m><m|v_y|n> / (E_n - E_m)^2, j = (O v_x + v_x O) / 2; pairs within 1e-6 eV skipped. */
function curvature(o: ComplexMatrix, vx: ComplexMatrix, vy: ComplexMatrix, levels: Float64Array): number[] {
  const omega = Array<number>(bands).fill(0);
  for (let n = 0; n < bands; n++)
    for (let m = 0; m < bands; m++) {
      const gap = levels[n] - levels[m];
      if (Math.abs(gap) < 1e-6) continue;
      let [jr, ji] = [0, 0];
      for (let l = 0; l < bands; l++) {
        const [a, b, c, d] = [entry(n, l), entry(l, m), entry(n, l), entry(l, m)];
        jr += (o[a] * vx[b] - o[a + 1] * vx[b + 1] + vx[c] * o[d] - vx[c + 1] * o[d + 1]) / 2;
        ji += (o[a] * vx[b + 1] + o[a + 1] * vx[b] + vx[c] * o[d + 1] + vx[c + 1] * o[d]) / 2;
      }
      const back = entry(m, n);
      omega[n] -= (2 * (jr * vy[back + 1] + ji * vy[back])) / gap ** 2;
    }
  return omega;
}

/** k = sum_j (i_j / n) b_j, one point of each pair (k, -k), with its weight. */
function halfMesh(n: number, vectors: SampleModel["vectorsA"]): { k: Triple; weight: number }[] {
  const b = reciprocal(vectors);
  const out: { k: Triple; weight: number }[] = [];
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++)
      for (let l = 0; l < n; l++) {
        const here = (i * n + j) * n + l;
        const there = (((n - i) % n) * n + ((n - j) % n)) * n + ((n - l) % n);
        if (there < here) continue;
        const k = [0, 1, 2].map((c) => (i * b[0][c] + j * b[1][c] + l * b[2][c]) / n) as unknown as Triple;
        out.push({ k, weight: (there === here ? 1 : 2) / n ** 3 });
      }
  return out;
}

/** Rows b1, b2, b3 with a_i . b_j = 2 pi delta_ij. */
export function reciprocal(rows: SampleModel["vectorsA"]): number[][] {
  const scale = (2 * Math.PI) / volume(rows);
  return [0, 1, 2].map((i) => {
    const [a, b] = [rows[(i + 1) % 3], rows[(i + 2) % 3]];
    return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]].map((c) => c * scale);
  });
}

/** Functions of the absolute level in eV; conductivities in (hbar/e) S/cm. */
export interface Sums {
  readonly electrons: (levelEv: number) => number;
  readonly spin: (levelEv: number) => number;
  readonly orbital: (levelEv: number) => number;
}

/** The plain mesh sum at one temperature: sigma^z_xy, which on a mesh with the cube's symmetry is the rotational mean. */
export function plainSum(model: SampleModel, n: number, temperatureK: number): Sums {
  const solve = createEigensolver(bands);
  const rows: { weight: number; levels: Float64Array; spin: number[]; orbital: number[] }[] = [];
  for (const { k, weight } of halfMesh(n, model.vectorsA)) {
    const { h, dh } = model.at(k);
    const levels = new Float64Array(bands);
    const vectors = new Float64Array(2 * bands * bands);
    solve(h, levels, vectors);
    const [vx, vy] = [rotated(dh[0], vectors), rotated(dh[1], vectors)];
    const of = (name: string): number[] =>
      curvature(rotated(model.moments.get(name)?.[2] ?? new Float64Array(0), vectors), vx, vy, levels);
    rows.push({ weight, levels, spin: of("spin"), orbital: of("orbital") });
  }
  const scale = (e2OverHbarS * perAngstromInPerCm) / Math.abs(volume(model.vectorsA));
  const occupied = (levelEv: number, values: (row: (typeof rows)[0], band: number) => number): number => {
    let sum = 0;
    for (const row of rows)
      for (let band = 0; band < bands; band++)
        sum +=
          (row.weight * values(row, band)) /
          (1 + Math.exp((row.levels[band] - levelEv) / (boltzmannEvPerK * temperatureK)));
    return sum;
  };
  return {
    electrons: (level) => occupied(level, () => 1),
    spin: (level) => scale * occupied(level, (row, band) => row.spin[band]),
    orbital: (level) => scale * occupied(level, (row, band) => row.orbital[band]),
  };
}
