// lattice.ts: direct and reciprocal vectors, cell volume; knows nothing of meshes or energies.
import type { Triple } from "../grid/grid.js";

export type Vectors = readonly [Triple, Triple, Triple];

export const dot = (a: Triple, b: Triple): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

export const cross = (a: Triple, b: Triple): Triple => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

export const length = (a: Triple): number => Math.sqrt(dot(a, a));

const scaled = (a: Triple, factor: number): Triple => [a[0] * factor, a[1] * factor, a[2] * factor];

/** Volume of the cell spanned by the rows, cubed unit of the rows; never negative. */
export const cellVolume = (rows: Vectors): number => Math.abs(dot(rows[0], cross(rows[1], rows[2])));

/** Area spanned by a1 and a2: the cell of a layer. */
export const cellArea = (rows: Vectors): number => length(cross(rows[0], rows[1]));

/** Rows b1, b2, b3 with a_i . b_j = 2 pi delta_ij; unit: 1 / unit of the rows. */
export function reciprocalVectors(rows: Vectors): Vectors {
  const signedVolume = dot(rows[0], cross(rows[1], rows[2]));
  const factor = (2 * Math.PI) / signedVolume;
  return [
    scaled(cross(rows[1], rows[2]), factor),
    scaled(cross(rows[2], rows[0]), factor),
    scaled(cross(rows[0], rows[1]), factor),
  ];
}
