// dirac.ts: closed forms of the recipes' model, written from H = e + d.sigma alone.
// With P the projectors on the bands, Tr(P- g.sigma P+ h.sigma) = g.h - (g.D)(h.D) - i D.(g x h), D = d / |d|; so for a
// current with matrix vector A and a field B, Omega of the lower band = D.(A x B) / (2 |d|^2), of the upper band its negative.

type Vector = readonly [number, number, number];

const side = 3; // angstrom
const hopping = 1; // eV
const scalarHopping = 0.2; // eV
const mass = -1;

/** Divisions of the recipes' mesh along each axis. */
export const meshDivisions = 24;
/** Area of the cell, angstrom^2. */
export const cellAreaA2 = side * side;

const dot = (a: Vector, b: Vector): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const cross = (a: Vector, b: Vector): Vector => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

export interface ClosedForm {
  /** Lower and upper band, eV. */
  readonly energyEv: readonly [number, number];
  /** dE/dk_x, dE/dk_y per band, eV angstrom. */
  readonly slopeEvA: readonly [readonly [number, number], readonly [number, number]];
  /** Expectation value of the spin of the upper band in hbar; the lower band has its negative. */
  readonly spinUpper: Vector;
  /** charge:xy curvature of the lower band, angstrom^2. */
  readonly chargeXyA2: number;
  /** spin:xy:g curvature of the lower band per component g, hbar angstrom^2. */
  readonly spinXyA2: Vector;
}

/** The model at flat mesh index `k` of the recipes' mesh. */
export function closedForm(k: number): ClosedForm {
  const x = (2 * Math.PI * Math.floor(k / meshDivisions)) / meshDivisions;
  const y = (2 * Math.PI * (k % meshDivisions)) / meshDivisions;
  const d: Vector = [hopping * Math.sin(x), hopping * Math.sin(y), hopping * (mass + Math.cos(x) + Math.cos(y))];
  const e = scalarHopping * (Math.cos(x) + Math.cos(y));
  const length = Math.hypot(...d);
  const unit: Vector = [d[0] / length, d[1] / length, d[2] / length];
  const dx: Vector = [hopping * side * Math.cos(x), 0, -hopping * side * Math.sin(x)];
  const dy: Vector = [0, hopping * side * Math.cos(y), -hopping * side * Math.sin(y)];
  const scalar = [-scalarHopping * side * Math.sin(x), -scalarHopping * side * Math.sin(y)] as const;
  const omega = (a: Vector, b: Vector): number => dot(unit, cross(a, b)) / (2 * length * length);
  // (s_g/2 v_x + v_x s_g/2) / 2: the scalar part of v_x times s_g/2, and a multiple of 1 that has no interband part.
  const half = scalar[0] / 2;
  return {
    energyEv: [e - length, e + length],
    slopeEvA: [
      [scalar[0] - dot(unit, dx), scalar[1] - dot(unit, dy)],
      [scalar[0] + dot(unit, dx), scalar[1] + dot(unit, dy)],
    ],
    spinUpper: [unit[0] / 2, unit[1] / 2, unit[2] / 2],
    chargeXyA2: omega(dx, dy),
    spinXyA2: [omega([half, 0, 0], dy), omega([0, half, 0], dy), omega([0, 0, half], dy)],
  };
}
