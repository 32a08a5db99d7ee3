// algebra.ts: does a moment obey the commutators and the eigenvalues of an angular momentum?
import { createEigensolver } from "../kernel/eigen.js";
import { type HealthFinding, shown } from "./finding.js";

/** What the three matrices of a moment say of themselves, gathered over points. */
export interface Algebra {
  /** lambda of -i [A_a, A_b] = lambda A_c, in the lower half of the bands. */
  readonly scale: number;
  /** Part (squares) of the commutators that is not along A_c; 0: a closed algebra. */
  readonly open: number;
  /** Largest |eigenvalue| of a component. */
  readonly largest: number;
  /** Mean and spread of the diagonal of A.A in the lower half of the bands. */
  readonly square: number;
  readonly squareSpread: number;
}

/** Re and Im sums of (A B - B A)_nm. */
function commutatorElement(a: Float64Array, b: Float64Array, bands: number, n: number, m: number): [number, number] {
  let [re, im] = [0, 0];
  for (let p = 0; p < bands; p++) {
    const [x, y, u, v] = [2 * (n * bands + p), 2 * (p * bands + m), 2 * (n * bands + p), 2 * (p * bands + m)];
    re += a[x] * b[y] - a[x + 1] * b[y + 1] - (b[u] * a[v] - b[u + 1] * a[v + 1]);
    im += a[x] * b[y + 1] + a[x + 1] * b[y] - (b[u] * a[v + 1] + b[u + 1] * a[v]);
  }
  return [re, im];
}

/** Gathers points; each costs about bands^3. */
export function createAlgebra(bands: number) {
  const solve = createEigensolver(bands);
  const values = new Float64Array(bands);
  const vectors = new Float64Array(2 * bands * bands);
  const half = Math.max(1, Math.ceil(bands / 2));
  const sums = { along: 0, own: 0, commutators: 0, largest: 0, square: 0, squares: 0, count: 0 };
  const addCommutator = (a: Float64Array, b: Float64Array, c: Float64Array): void => {
    for (let n = 0; n < half; n++)
      for (let m = 0; m < half; m++) {
        const [re, im] = commutatorElement(a, b, bands, n, m);
        const at = 2 * (n * bands + m);
        // -i (re + i im) = im - i re
        sums.along += im * c[at] - re * c[at + 1];
        sums.own += c[at] ** 2 + c[at + 1] ** 2;
        sums.commutators += re * re + im * im;
      }
  };
  const add = (parts: readonly Float64Array[]): void => {
    for (const part of parts) {
      solve(part.slice(), values, vectors);
      sums.largest = Math.max(sums.largest, -values[0], values[bands - 1]);
    }
    if (parts.length !== 3) return;
    for (let c = 0; c < 3; c++) addCommutator(parts[(c + 1) % 3], parts[(c + 2) % 3], parts[c]);
    for (let n = 0; n < half; n++) {
      let square = 0;
      for (const part of parts) for (let p = 0; p < 2 * bands; p++) square += part[2 * n * bands + p] ** 2;
      sums.square += square;
      sums.squares += square * square;
      sums.count++;
    }
  };
  const result = (): Algebra => {
    const square = sums.square / Math.max(1, sums.count);
    return {
      scale: sums.own === 0 ? 0 : sums.along / sums.own,
      open: sums.commutators === 0 ? 0 : 1 - sums.along ** 2 / (sums.own * sums.commutators),
      largest: sums.largest,
      square,
      squareSpread: Math.sqrt(Math.max(0, sums.squares / Math.max(1, sums.count) - square * square)),
    };
  };
  return { add, result };
}

const measured =
  "eigenvalues of each component, commutators and the square of the three components at sampled k points";

/** A spin of one half up to a factor: closed, and its square one and the same. */
const isHalf = ({ scale, open, square, squareSpread }: Algebra): boolean =>
  open < 0.02 && scale !== 0 && Math.abs(square / scale ** 2 - 0.75) < 0.03 && squareSpread < 0.03 * square;

function factorWords(factor: number): { words: string; cure: string } {
  if (Math.abs(factor - 2) < 0.05)
    return {
      words: "a factor 2 too large: Pauli matrices declared as hbar",
      cure: 'Set arrays.moments.spin.unit to "half-hbar".',
    };
  if (Math.abs(factor - 0.5) < 0.02)
    return {
      words: "a factor 2 too small: a spin in hbar declared as half-hbar",
      cure: 'Set arrays.moments.spin.unit to "hbar".',
    };
  return {
    words: `a factor ${shown(factor, 4)} off`,
    cure: "Write the spin in units of hbar: its components lie between -1/2 and 1/2.",
  };
}

/** What is wrong with the size of a spin. */
export function checkSpinSize(algebra: Algebra): HealthFinding[] {
  const { scale, largest, open, square } = algebra;
  const evidence = `largest eigenvalue of a component ${shown(largest, 5)} (must not exceed 1/2), -i [S_a, S_b] = ${shown(scale, 4)} S_c with ${shown(100 * open, 2)}% of the squares elsewhere, S.S = ${shown(square, 4)}`;
  const wrongHalf = isHalf(algebra) && Math.abs(Math.abs(scale) - 1) > 0.05;
  if (largest <= 0.5 * 1.01 && !wrongHalf) return [];
  const { words, cure } = factorWords(wrongHalf ? Math.abs(scale) : 2 * largest);
  return [{ id: "spin-factor", severity: "fault", message: `the spin is ${words}`, evidence, measured, cure }];
}

/** Whether the commutators of a moment come out with the wrong sign, beyond doubt. */
export const isReversed = ({ scale, open }: Algebra): boolean => scale < 0 && open < 0.5;

/** What is wrong with the size of an orbital moment: only what closes as an angular momentum of whole numbers can be judged. */
export function checkOrbitalSize(name: string, algebra: Algebra): HealthFinding[] {
  const { scale, open, largest } = algebra;
  const whole = largest / Math.abs(scale);
  const judged = open < 1e-3 && scale !== 0 && whole > 0.5 && Math.abs(whole - Math.round(whole)) < 1e-3;
  if (!judged || Math.abs(Math.abs(scale) - 1) < 0.05) return [];
  return [
    {
      id: "orbital-factor",
      severity: "warn",
      message: `${name} closes as an angular momentum, but a factor ${shown(Math.abs(scale))} off`,
      evidence: `-i [L_a, L_b] = ${shown(scale, 4)} L_c, largest eigenvalue ${shown(largest, 4)}`,
      measured,
      cure: `Check arrays.moments.${name}.unit, and that the moment counts hbar.`,
    },
  ];
}

/** The evidence of a reversed commutator. */
export const reversedEvidence = (name: string, { scale, open }: Algebra): string =>
  `-i [${name}_a, ${name}_b] = ${shown(scale, 3)} ${name}_c (${shown(100 * open, 2)}% of the squares elsewhere)`;
