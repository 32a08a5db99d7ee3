// pseudopotential-waves.ts: which plane waves make the basis of an fcc crystal, and where does a k lie in its first zone?
import type { Triple } from "../grid/grid.js";

/**
 * The reciprocal vectors of the fcc lattice with a squared length of at most `cutoff`, in units of 2 pi / a: all three whole numbers
 * even, or all odd. Shortest first, then in the order of their components; closed under inversion and under the cubic group.
 */
export function reciprocalSphere(cutoff: number): readonly Triple[] {
  const reach = Math.floor(Math.sqrt(cutoff));
  const found: Triple[] = [];
  for (let x = -reach; x <= reach; x++) {
    for (let y = -reach; y <= reach; y++) {
      for (let z = -reach; z <= reach; z++) {
        const oneKind = (x + y) % 2 === 0 && (y + z) % 2 === 0;
        if (oneKind && squared([x, y, z]) <= cutoff) found.push([x, y, z]);
      }
    }
  }
  return found.sort((g, h) => squared(g) - squared(h));
}

/** The squared length of a vector. */
export const squared = (g: Triple): number => g[0] * g[0] + g[1] * g[1] + g[2] * g[2];

/** Distances (in units of 2 pi / a) below which two images of a k are equally near: a tie must not be decided by round-off. */
const tie = 1e-9;

/**
 * k (units of 2 pi / a) moved by a reciprocal vector into the first zone of the fcc lattice, the truncated octahedron around 0.
 * On a face the choice between the two images is arbitrary, but the same for every k of that face.
 */
export function foldIntoFccZone(k: Triple): Triple {
  const nearest = (x: number): number => x - 2 * Math.ceil(x / 2 - 0.5 - tie);
  const even: Triple = [nearest(k[0]), nearest(k[1]), nearest(k[2])];
  const odd: Triple = [nearest(k[0] - 1), nearest(k[1] - 1), nearest(k[2] - 1)];
  return squared(odd) < squared(even) - tie ? odd : even;
}
