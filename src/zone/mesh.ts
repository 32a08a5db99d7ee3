// mesh.ts: turns a flat mesh index into k and back, and names the cell around a mesh point; knows nothing of energies.
import type { GridFacts, Triple } from "../grid/grid.js";
import { reciprocalVectors, type Vectors } from "./lattice.js";

export type MeshFacts = Pick<GridFacts, "vectorsA" | "divisions" | "offset" | "periodic" | "patch">;

/** (i1, i2, i3) of a flat index; i3 runs fastest. */
export function meshIndices(flat: number, divisions: Triple): Triple {
  const i3 = flat % divisions[2];
  const rest = Math.floor(flat / divisions[2]);
  return [Math.floor(rest / divisions[1]), rest % divisions[1], i3];
}

/** Flat index of the mesh point `step` steps along edge j, around the zone. */
export function neighbourIndex(flat: number, divisions: Triple, j: number, step: number): number {
  const index = [...meshIndices(flat, divisions)];
  const n = divisions[j];
  index[j] = (((index[j] + step) % n) + n) % n;
  return (index[0] * divisions[1] + index[1]) * divisions[2] + index[2];
}

/** Indices of a stored point on the mesh of its facts: of a patch's point on the finer mesh. */
function storedIndices(flat: number, { divisions, patch }: MeshFacts): Triple {
  if (patch === undefined) return meshIndices(flat, divisions);
  const m = patch.divisions;
  const perCell = m[0] * m[1] * m[2];
  const coarse: Triple = [divisions[0] / m[0], divisions[1] / m[1], divisions[2] / m[2]];
  const cell = meshIndices(patch.cells[Math.floor(flat / perCell)], coarse);
  const place = meshIndices(flat % perCell, m);
  return [cell[0] * m[0] + place[0], cell[1] * m[1] + place[1], cell[2] * m[2] + place[2]];
}

/** Fractional coordinates of a stored point in b1, b2, b3. */
export function fractionalK(flat: number, mesh: MeshFacts): Triple {
  const index = storedIndices(flat, mesh);
  return [0, 1, 2].map((j) => (index[j] + mesh.offset[j]) / mesh.divisions[j]) as unknown as Triple;
}

/** Cartesian k (1/angstrom) of fractional coordinates. */
export function cartesianK(fractional: Triple, reciprocal: Vectors): Triple {
  const k = (axis: 0 | 1 | 2): number =>
    fractional[0] * reciprocal[0][axis] + fractional[1] * reciprocal[1][axis] + fractional[2] * reciprocal[2][axis];
  return [k(0), k(1), k(2)];
}

/** Edges b_j / n_j of the cell around each mesh point, Cartesian rows, 1/angstrom. A layer has two, a crystal three. */
export function cellEdges(mesh: MeshFacts): readonly Triple[] {
  const reciprocal = reciprocalVectors(mesh.vectorsA);
  return reciprocal.slice(0, mesh.periodic).map((b, j): Triple => {
    const n = mesh.divisions[j];
    return [b[0] / n, b[1] / n, b[2] / n];
  });
}

/** The contained sub-meshes of stride s: how many there are, and to which one a flat index belongs. */
export interface SubMeshes {
  readonly stride: number;
  readonly count: number;
}

/** Smallest prime up to 5 that divides the mesh in every periodic direction; undefined when there is none. */
export function smallestSubMeshes(mesh: MeshFacts): SubMeshes | undefined {
  const active = mesh.divisions.slice(0, mesh.periodic);
  const stride = [2, 3, 5].find((s) => active.every((n) => n % s === 0 && n > s));
  return stride === undefined ? undefined : { stride, count: stride ** active.length };
}

/**
 * Sub-meshes whose spread tells an error: smallestSubMeshes, but not of stride 2 on a mesh that is moved by half a step. There the
 * two halves of a direction lie at +-1/4 of their own step, so that the mirrors of a crystal carry every sub-mesh into every other: their sums
 * are equal, whatever the error. Strides 3, 4 and 5 are tried instead; where only 2 divides the mesh, it is kept.
 */
export function spreadSubMeshes(mesh: MeshFacts): SubMeshes | undefined {
  const smallest = smallestSubMeshes(mesh);
  const moved = mesh.offset.slice(0, mesh.periodic).some((x) => Math.abs(x - 0.5) < 1e-9);
  if (smallest?.stride !== 2 || !moved) return smallest;
  const active = mesh.divisions.slice(0, mesh.periodic);
  const stride = [3, 4, 5].find((s) => active.every((n) => n % s === 0 && n > s));
  return stride === undefined ? smallest : { stride, count: stride ** active.length };
}

/** Which of the sub-meshes a mesh point belongs to. */
export function subMeshOf(flat: number, mesh: MeshFacts, sub: SubMeshes): number {
  const index = meshIndices(flat, mesh.divisions);
  let coset = 0;
  for (let j = 0; j < mesh.periodic; j++) coset = coset * sub.stride + (index[j] % sub.stride);
  return coset;
}
