// windows.ts: smooth sums over bands and their exact change with k, blind to crossings and to bases of degenerate sets.
//
// For a smooth function phi of the energy, with primitive g: the traces Tr g(H(k)) and Tr phi(H(k)) A(k) are smooth in k wherever bands cross.
// d Tr g(H) = Tr phi dH, and (d phi)_nm = F_nm (dH)_nm with the divided differences F_nm = (phi_n - phi_m) / (E_n - E_m), F_nn = phi'.

/** A weight of the energy: phi, its derivative and its primitive. */
export interface Window {
  readonly weight: (energyEv: number) => number;
  readonly slope: (energyEv: number) => number;
  readonly primitive: (energyEv: number) => number;
  /** Energies closer than this take the derivative instead of the divided difference. */
  readonly closeEv: number;
}

/** 1 at the centre, sech^2((E - centre) / 2 width): the bands within about two widths of an energy. */
export function bump(centreEv: number, widthEv: number): Window {
  const tanh = (e: number): number => Math.tanh((e - centreEv) / (2 * widthEv));
  return {
    weight: (e) => 1 - tanh(e) ** 2,
    slope: (e) => (-tanh(e) * (1 - tanh(e) ** 2)) / widthEv,
    primitive: (e) => 2 * widthEv * tanh(e),
    closeEv: 1e-3 * widthEv,
  };
}

/** The bands below an energy: a Fermi function of width `widthEv`. */
export function below(levelEv: number, widthEv: number): Window {
  const weight = (e: number): number => 1 / (1 + Math.exp(Math.min(700, (e - levelEv) / widthEv)));
  return {
    weight,
    slope: (e) => (-weight(e) * (1 - weight(e))) / widthEv,
    primitive: (e) => {
      const x = (levelEv - e) / widthEv;
      return -widthEv * (x > 30 ? x : Math.log1p(Math.exp(x)));
    },
    closeEv: 1e-3 * widthEv,
  };
}

/** All bands alike: the trace. */
export const everything: Window = { weight: () => 1, slope: () => 0, primitive: (e) => e, closeEv: 0 };

/** Divided differences F[n * bands + m], symmetric. */
export function dividedDifferences(window: Window, energyEv: Float64Array): Float64Array {
  const bands = energyEv.length;
  const out = new Float64Array(bands * bands);
  const weights = Float64Array.from(energyEv, window.weight);
  for (let n = 0; n < bands; n++)
    for (let m = 0; m <= n; m++) {
      const apart = energyEv[n] - energyEv[m];
      const close = Math.abs(apart) <= window.closeEv;
      const f = close ? window.slope((energyEv[n] + energyEv[m]) / 2) : (weights[n] - weights[m]) / apart;
      out[n * bands + m] = f;
      out[m * bands + n] = f;
    }
  return out;
}

/** sum_n weights_n A_nn. */
export function weightedTrace(weights: Float64Array, a: Float64Array): number {
  const bands = weights.length;
  let sum = 0;
  for (let n = 0; n < bands; n++) sum += weights[n] * a[2 * n * (bands + 1)];
  return sum;
}

/** sum_nm F_nm Re(A_nm B_mn) for Hermitian A and B; `mirrored`: with B transposed. */
export function pairTrace(f: Float64Array, a: Float64Array, b: Float64Array, mirrored = 1): number {
  let sum = 0;
  for (let i = 0; i < f.length; i++) sum += f[i] * (a[2 * i] * b[2 * i] + mirrored * a[2 * i + 1] * b[2 * i + 1]);
  return sum;
}

/** step_x A_x + step_y A_y + step_z A_z. */
export function alongStep(step: readonly number[], parts: readonly Float64Array[]): Float64Array {
  const out = new Float64Array(parts[0].length);
  for (let axis = 0; axis < 3; axis++) for (let i = 0; i < out.length; i++) out[i] += step[axis] * parts[axis][i];
  return out;
}

/** A diag(weights) A, Hermitian for Hermitian A: out_ij = sum_p A_ip w_p A_pj. */
export function sandwich(a: Float64Array, weights: Float64Array): Float64Array {
  const bands = weights.length;
  const out = new Float64Array(a.length);
  for (let i = 0; i < bands; i++)
    for (let p = 0; p < bands; p++) {
      const re = a[2 * (i * bands + p)] * weights[p];
      const im = a[2 * (i * bands + p) + 1] * weights[p];
      if (re === 0 && im === 0) continue;
      for (let j = 0; j < bands; j++) {
        const at = 2 * (p * bands + j);
        out[2 * (i * bands + j)] += re * a[at] - im * a[at + 1];
        out[2 * (i * bands + j) + 1] += re * a[at + 1] + im * a[at];
      }
    }
  return out;
}
