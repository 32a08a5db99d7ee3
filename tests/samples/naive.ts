// naive.ts: an independent, slow Kubo formula and eigensolver (Jacobi) for the tests of the samples; shares no code with src/.
import type { Triple } from "../../src/grid/grid.js";
import type { ComplexMatrix, SampleModel } from "../../src/samples/model.js";

export interface Eigen {
  readonly values: readonly number[];
  /** vectors[n] = 2 n numbers. */
  readonly vectors: readonly Float64Array[];
}

/** Cyclic complex Jacobi (Golub and van Loan): rotate away one off-diagonal entry after another. */
export function jacobiEigen(matrix: ComplexMatrix): Eigen {
  const n = Math.round(Math.sqrt(matrix.length / 2));
  const a = matrix.slice();
  const v = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) v[2 * (i * n + i)] = 1;
  let scale = 0;
  for (const x of a) scale += x * x;
  for (let sweep = 0; sweep < 60; sweep++) {
    let off = 0;
    for (let p = 0; p < n; p++)
      for (let q = p + 1; q < n; q++) off += a[2 * (p * n + q)] ** 2 + a[2 * (p * n + q) + 1] ** 2;
    if (off <= 1e-32 * scale) break;
    for (let p = 0; p < n; p++) for (let q = p + 1; q < n; q++) rotate(a, v, n, p, q);
  }
  const order = Array.from({ length: n }, (_, i) => i).sort((i, j) => a[2 * (i * n + i)] - a[2 * (j * n + j)]);
  return {
    values: order.map((i) => a[2 * (i * n + i)]),
    vectors: order.map((i) => {
      const column = new Float64Array(2 * n);
      for (let r = 0; r < n; r++) {
        column[2 * r] = v[2 * (r * n + i)];
        column[2 * r + 1] = v[2 * (r * n + i) + 1];
      }
      return column;
    }),
  };
}

function rotate(a: Float64Array, v: Float64Array, n: number, p: number, q: number): void {
  const re = a[2 * (p * n + q)];
  const im = a[2 * (p * n + q) + 1];
  const r = Math.hypot(re, im);
  if (r === 0) return;
  const [c1, s1] = [re / r, im / r];
  const theta = (a[2 * (q * n + q)] - a[2 * (p * n + p)]) / (2 * r);
  const t = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.hypot(theta, 1));
  const c = 1 / Math.hypot(t, 1);
  const s = t * c;
  rotatePair(a, n, (i, line) => 2 * (i * n + line), [p, q], [c, s * c1, s * s1]);
  rotatePair(a, n, (i, line) => 2 * (line * n + i), [p, q], [c, s * c1, -s * s1]);
  rotatePair(v, n, (i, line) => 2 * (i * n + line), [p, q], [c, s * c1, s * s1]);
}

/** Two columns (or rows, by `at`): p' = c p - conj(z) q, q' = z p + c q, with z = x + iy. */
function rotatePair(
  m: Float64Array,
  n: number,
  at: (i: number, line: number) => number,
  [p, q]: readonly [number, number],
  [c, x, y]: readonly [number, number, number],
): void {
  for (let i = 0; i < n; i++) {
    const ip = at(i, p);
    const iq = at(i, q);
    const [pr, pi, qr, qi] = [m[ip], m[ip + 1], m[iq], m[iq + 1]];
    m[ip] = c * pr - (x * qr + y * qi);
    m[ip + 1] = c * pi - (x * qi - y * qr);
    m[iq] = x * pr - y * pi + c * qr;
    m[iq + 1] = x * pi + y * pr + c * qi;
  }
}

/** <bra| m |ket> as [re, im]. */
export function element(bra: Float64Array, m: ComplexMatrix, ket: Float64Array): [number, number] {
  const n = bra.length / 2;
  let re = 0;
  let im = 0;
  for (let i = 0; i < n; i++) {
    let tr = 0;
    let ti = 0;
    for (let j = 0; j < n; j++) {
      const x = m[2 * (i * n + j)];
      const y = m[2 * (i * n + j) + 1];
      tr += x * ket[2 * j] - y * ket[2 * j + 1];
      ti += x * ket[2 * j + 1] + y * ket[2 * j];
    }
    re += bra[2 * i] * tr + bra[2 * i + 1] * ti;
    im += bra[2 * i] * ti - bra[2 * i + 1] * tr;
  }
  return [re, im];
}

/** (O V + V O) / 2. */
export function symmetrised(o: ComplexMatrix, v: ComplexMatrix): ComplexMatrix {
  const n = Math.round(Math.sqrt(o.length / 2));
  const out = new Float64Array(o.length);
  for (const [x, y] of [
    [o, v],
    [v, o],
  ]) {
    for (let i = 0; i < n; i++)
      for (let k = 0; k < n; k++)
        for (let j = 0; j < n; j++) {
          const [ar, ai] = [x[2 * (i * n + k)], x[2 * (i * n + k) + 1]];
          const [br, bi] = [y[2 * (k * n + j)], y[2 * (k * n + j) + 1]];
          out[2 * (i * n + j)] += (ar * br - ai * bi) / 2;
          out[2 * (i * n + j) + 1] += (ar * bi + ai * br) / 2;
        }
  }
  return out;
}

/** A response: charge, or a moment's name with the component g; flow a, field b. */
export interface Response {
  readonly moment?: string;
  readonly g?: number;
  readonly flow: number;
  readonly field: number;
}

export interface Query {
  readonly muEv: number;
  /** 0: step function. */
  readonly kTEv: number;
}

export const fermi = (e: number, q: Query): number => {
  const x = e - q.muEv;
  if (q.kTEv === 0) return x < 0 ? 1 : x === 0 ? 0.5 : 0;
  return 1 / (1 + Math.exp(x / q.kTEv));
};

export const crossOf = (a: Triple, b: Triple): Triple => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

export function reciprocal(a: readonly [Triple, Triple, Triple]): [Triple, Triple, Triple] {
  const c = [crossOf(a[1], a[2]), crossOf(a[2], a[0]), crossOf(a[0], a[1])];
  const volume = a[0][0] * c[0][0] + a[0][1] * c[0][1] + a[0][2] * c[0][2];
  const scale = (x: Triple): Triple => [0, 1, 2].map((i) => (x[i] * 2 * Math.PI) / volume) as unknown as Triple;
  return [scale(c[0]), scale(c[1]), scale(c[2])];
}

/** Omega_n = -2 Im sum_m <n|j|m><m|v_b|n> / (E_n - E_m)^2 and the energies at one k; pairs closer than 1e-9 eV are skipped. */
export function curvature(
  model: SampleModel,
  k: Triple,
  response: Response,
): { energies: readonly number[]; omega: number[] } {
  const at = model.at(k);
  const { values, vectors } = jacobiEigen(at.h);
  const v = at.dh[response.flow];
  const moment =
    response.moment === undefined
      ? undefined
      : (at.moments?.get(response.moment) ?? model.moments.get(response.moment))?.[response.g ?? 2];
  const j = moment === undefined ? v : symmetrised(moment, v);
  const omega = values.map(() => 0);
  for (let n = 0; n < values.length; n++)
    for (let m = 0; m < values.length; m++) {
      const gap = values[n] - values[m];
      if (m === n || Math.abs(gap) < 1e-9) continue;
      const [jr, ji] = element(vectors[n], j, vectors[m]);
      const [vr, vi] = element(vectors[m], at.dh[response.field], vectors[n]);
      omega[n] += (-2 * (jr * vi + ji * vr)) / gap ** 2;
    }
  return { energies: values, omega };
}

/**
 * `integral d^dk / (2 pi)^d sum_n f Omega_n` for each query: mean over the mesh over the cell's area (2D) or volume. Units
 * 1/angstrom^(d-2). The caller multiplies by -e^2/hbar (charge) or +e^2/hbar (moments) and by electronsPerBand.
 */
export function naiveIntegrals(
  model: SampleModel,
  divisions: Triple,
  offset: Triple,
  response: Response,
  queries: readonly Query[],
): number[] {
  const b = reciprocal(model.vectorsA);
  const sums = queries.map(() => 0);
  const [n1, n2, n3] = divisions;
  for (let i1 = 0; i1 < n1; i1++)
    for (let i2 = 0; i2 < n2; i2++)
      for (let i3 = 0; i3 < n3; i3++) {
        const f = [(i1 + offset[0]) / n1, (i2 + offset[1]) / n2, (i3 + offset[2]) / n3];
        const k = [0, 1, 2].map((x) => f[0] * b[0][x] + f[1] * b[1][x] + f[2] * b[2][x]) as unknown as Triple;
        const { energies, omega } = curvature(model, k, response);
        queries.forEach((query, q) => {
          for (let n = 0; n < energies.length; n++) sums[q] += fermi(energies[n], query) * omega[n];
        });
      }
  const [a1, a2, a3] = model.vectorsA;
  const normal = crossOf(a1, a2);
  const measure =
    model.periodic === 2 ? Math.hypot(...normal) : Math.abs(normal[0] * a3[0] + normal[1] * a3[1] + normal[2] * a3[2]);
  return sums.map((sum) => sum / (n1 * n2 * n3) / measure);
}

/** Layer, charge, in e^2/h: sigma = -(e^2/hbar) I = -2 pi I e^2/h. */
export const chargeInE2OverH = (integral: number): number => -2 * Math.PI * integral;
/** Layer, moment, in e/2pi = (hbar/e) e^2/h: +2 pi I. */
export const momentInEOver2Pi = (integral: number): number => 2 * Math.PI * integral;
/** Crystal, moment, in (hbar/e) S/cm: e^2/hbar (S) times 1e8 from 1/angstrom to 1/cm (CODATA 2022). */
export const momentInSPerCm = (integral: number): number => 2.434134805788e-4 * 1e8 * integral;
