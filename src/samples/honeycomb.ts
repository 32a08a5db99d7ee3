// honeycomb.ts: the vectors of the honeycomb lattice with neighbours 1 angstrom apart.
import type { Triple } from "../grid/grid.js";

const root3 = Math.sqrt(3);

/** The three vectors d_j from an A site to its B neighbours, angstrom. */
export const neighbourVectorsA: readonly [Triple, Triple, Triple] = [
  [0, 1, 0],
  [-root3 / 2, -0.5, 0],
  [root3 / 2, -0.5, 0],
];

const difference = (a: Triple, b: Triple): Triple => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
const [d1, d2, d3] = neighbourVectorsA;

/** b1 = d2 - d3, b2 = d3 - d1, b3 = d1 - d2: second neighbours, angstrom. */
export const secondVectorsA: readonly [Triple, Triple, Triple] = [
  difference(d2, d3),
  difference(d3, d1),
  difference(d1, d2),
];

/** Lattice vectors of the layer, right-handed, a3 of length 1 angstrom. */
export const honeycombVectorsA: readonly [Triple, Triple, Triple] = [
  [root3, 0, 0],
  [root3 / 2, 1.5, 0],
  [0, 0, 1],
];

/** -v. */
export const reversed = (v: Triple): Triple => [-v[0], -v[1], -v[2]];
