// luttinger-sphere.ts: what is the spin Hall conductivity of strained holes by quadrature over spheres of k, without eigenvectors?
import { angularMomentum, identity, productOf, scaled, sumOf } from "../../src/samples/matrix.js";

// CODATA 2022: hbar^2/m_e in eV angstrom^2, e^2/hbar in S.
const hbar2OverMeEvA2 = 7.619964231;
const e2OverHbarS = 2.434134805788e-4;
const [g1, g2, b] = [6.98, 2.582, -2];
const J = angularMomentum(1.5);
const one = identity(4);
const squares = J.map((m) => productOf(m, m));

/** Nodes and weights on [0, 1] of Gauss and Legendre, by Newton's method on the three-term recurrence. */
export function gauss(count: number): [node: number, weight: number][] {
  return Array.from({ length: count }, (_, i) => {
    let x = Math.cos((Math.PI * (i + 0.75)) / (count + 0.5));
    let slope = 1;
    for (let step = 0; step < 60; step++) {
      let [previous, current] = [1, x];
      for (let n = 2; n <= count; n++)
        [previous, current] = [current, ((2 * n - 1) * x * current - (n - 1) * previous) / n];
      slope = (count * (x * current - previous)) / (x * x - 1);
      x -= current / slope;
    }
    return [(1 + x) / 2, 1 / ((1 - x * x) * slope * slope)];
  });
}

const trace = (m: Float64Array): number => m[0] + m[10] + m[20] + m[30];

/**
 * At one k: the mean of the two twofold levels, half their splitting, and the curvature of the upper pair for spin:xy:z, spin = J/3.
 * Both levels being twofold (time reversal and inversion), their projectors are (1 +- D / d) / 2 with D = H - tr H / 4, D^2 = d^2,
 * and Omega = -2 Im tr(P+ j P- v_y) / (2 d)^2; the lower pair has the opposite.
 */
function atK(k: readonly number[], strain: readonly number[]): { mean: number; half: number; curvature: number } {
  const kJ = sumOf(...J.map((m, a) => scaled(m, k[a])));
  const square = k[0] ** 2 + k[1] ** 2 + k[2] ** 2;
  const kinetic = sumOf(scaled(one, (g1 + 2.5 * g2) * square), scaled(productOf(kJ, kJ), -2 * g2));
  const pressed = squares.map((m, a) => scaled(sumOf(m, scaled(one, -1.25)), -b * strain[a]));
  const h = sumOf(scaled(kinetic, -hbar2OverMeEvA2 / 2), ...pressed);
  const mean = trace(h) / 4;
  const d = sumOf(h, scaled(one, -mean));
  const half = Math.sqrt(trace(productOf(d, d)) / 4);
  const velocity = [0, 1].map((a) =>
    scaled(
      sumOf(scaled(one, 2 * (g1 + 2.5 * g2) * k[a]), scaled(sumOf(productOf(J[a], kJ), productOf(kJ, J[a])), -2 * g2)),
      -hbar2OverMeEvA2 / 2,
    ),
  );
  const current = scaled(sumOf(productOf(J[2], velocity[0]), productOf(velocity[0], J[2])), 1 / 6);
  const [upper, lower] = [1, -1].map((sign) => scaled(sumOf(one, scaled(d, sign / half)), 0.5));
  const loop = productOf(productOf(upper, current), productOf(lower, velocity[1]));
  let imaginary = 0;
  for (let i = 0; i < 4; i++) imaginary += loop[2 * (5 * i) + 1];
  return { mean, half, curvature: (-2 * imaginary) / (4 * half * half) };
}

/** spin:xy:z in (hbar/e) S/cm at absolute levels in eV; strain exx = eyy (axial), ezz; all k up to `reach` in 1/angstrom. */
export function sphereSpinHall(strain: readonly number[], levelsEv: readonly number[], thermalEv: number): number[] {
  const reach = 0.4;
  const turns = 8;
  const sums = levelsEv.map(() => 0);
  for (const [r, wr] of gauss(64))
    for (const [t, wt] of gauss(24))
      for (let turn = 0; turn < turns; turn++) {
        // cos(theta) over the upper half suffices: inversion. The curvature is a polynomial of low order in cos and sin of phi.
        const [radius, cosine, phi] = [reach * r, t, (2 * Math.PI * (turn + 0.3)) / turns];
        const across = radius * Math.sqrt(1 - cosine * cosine);
        const { mean, half, curvature } = atK(
          [across * Math.cos(phi), across * Math.sin(phi), radius * cosine],
          strain,
        );
        const weight = ((2 * wt * wr * reach * radius * radius * 2 * Math.PI) / turns) * curvature;
        for (const [i, mu] of levelsEv.entries()) {
          const filled = (energy: number): number => 1 / (1 + Math.exp((energy - mu) / thermalEv));
          sums[i] += weight * (filled(mean + half) - filled(mean - half));
        }
      }
  return sums.map((sum) => (e2OverHbarS * 1e8 * sum) / (2 * Math.PI) ** 3);
}
