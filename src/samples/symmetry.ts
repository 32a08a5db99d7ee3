// symmetry.ts: which operations leave a model and its mesh as they are, and which points are enough then?
import { usageFault } from "../base/errors.js";
import { randomStream } from "../base/random.js";
import type { Block, GridFacts, MatrixBlock, Triple } from "../grid/grid.js";
import type { ReducedPoints } from "../grid/layout.js";
import { flatIndex } from "../grid/stars.js";
import { applied, type KOperation, kOperation, type Rows } from "../grid/symmetry.js";
import type { PointData } from "../grid/target.js";
import { unfoldedReader } from "../grid/unfolded.js";
import { reciprocalVectors } from "../zone/lattice.js";
import { cartesianK, fractionalK } from "../zone/mesh.js";
import { createSampler } from "./eigenbasis.js";
import type { SampleModel } from "./model.js";
import { sampleMoments } from "./write.js";

type Mesh = Pick<GridFacts, "divisions" | "offset" | "vectorsA" | "periodic">;

/** Energies and invariants at a k and at its image agree within this (eV, and its products with angstrom and hbar). */
const same = 1e-7;
/** Bands closer than this are one set: no basis inside it is preferred. */
const togetherEv = 1e-5;

const built = (at: (i: number, j: number) => number): Rows =>
  [0, 1, 2].map((i) => [0, 1, 2].map((j) => at(i, j))) as unknown as Rows;

/** Rotations, proper or not, that map a lattice to itself; of a layer those that keep its plane. */
function latticeRotations({ vectorsA, periodic }: Mesh): Rows[] {
  const reciprocal = reciprocalVectors(vectorsA);
  const found: Rows[] = [];
  const free = periodic === 3 ? 9 : 5;
  for (let code = 0; code < 3 ** free; code++) {
    const digits = Array.from({ length: free }, (_, place) => (Math.floor(code / 3 ** place) % 3) - 1);
    const [m1, m2, m3, m4, m5] = digits;
    const whole = periodic === 3 ? built((i, j) => digits[3 * i + j]) : built2(m1, m2, m3, m4, m5);
    // R with R a_i = sum_j whole_ij a_j, written with a_j . b_k = 2 pi delta_jk.
    const rotation = built((x, y) => {
      let sum = 0;
      for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) sum += whole[i][j] * vectorsA[j][x] * reciprocal[i][y];
      return sum / (2 * Math.PI);
    });
    if (isOrthogonal(rotation)) found.push(rotation);
  }
  return found;
}

const built2 = (a: number, b: number, c: number, d: number, e: number): Rows => [
  [a, b, 0],
  [c, d, 0],
  [0, 0, e],
];

function isOrthogonal(m: Rows): boolean {
  for (let i = 0; i < 3; i++)
    for (let j = 0; j < 3; j++) {
      const product = m[i][0] * m[j][0] + m[i][1] * m[j][1] + m[i][2] * m[j][2];
      if (Math.abs(product - (i === j ? 1 : 0)) > 1e-6) return false;
    }
  return true;
}

/** True where the operation carries mesh points to mesh points. */
function keepsMesh({ action }: KOperation, { divisions, offset }: Mesh): boolean {
  const corners = [0, 1, 2, 3].map(
    (j) => [0, 1, 2].map((i) => (offset[i] + (j === i + 1 ? 1 : 0)) / divisions[i]) as unknown as Triple,
  );
  return corners.every((k) => flatIndex(applied(action, k), { divisions, offset }) >= 0);
}

/** A block of one point. */
function blockOf({ energyEv, velocity, moments, hessian }: PointData, bands: number): Block {
  const matrix = (data: Float64Array): MatrixBlock => ({ data: data.slice(), offset: 0, stride: 2 * bands * bands });
  return {
    first: 0,
    count: 1,
    bands,
    energyEv: energyEv.slice(),
    velocity: velocity.map(matrix),
    moments: new Map([...moments].map(([name, parts]) => [name, parts.map(matrix)])),
    hessian: hessian?.map(matrix),
  };
}

/**
 * Numbers of a point that no choice of basis changes: energies, and tr(P A Q B) for velocities A and any matrices B, P and Q the
 * projectors on neighbouring sets of bands; their imaginary parts tell time reversal.
 */
function invariants({ energyEv, velocity, moments, bands }: Block): number[] {
  const sets: [number, number][] = [];
  for (let first = 0, end = 1; first < bands; first = end++) {
    while (end < bands && energyEv[end] - energyEv[end - 1] < togetherEv) end++;
    sets.push([first, end]);
  }
  const flows = velocity as readonly MatrixBlock[];
  const others = [...flows, ...[...moments.values()].flatMap((parts) => parts as readonly MatrixBlock[])];
  const out = [...energyEv];
  for (const [s, p] of sets.entries())
    for (const q of sets.slice(s, s + 3))
      for (const a of flows) for (const b of others) out.push(...traceOf(a.data, b.data, p, q, bands));
  return out;
}

/** tr(P A Q B): real and imaginary part. */
function traceOf(
  a: Float64Array,
  b: Float64Array,
  [p0, p1]: readonly [number, number],
  [q0, q1]: readonly [number, number],
  bands: number,
): [number, number] {
  let [re, im] = [0, 0];
  for (let n = p0; n < p1; n++)
    for (let m = q0; m < q1; m++) {
      const [x, y] = [2 * (n * bands + m), 2 * (m * bands + n)];
      re += a[x] * b[y] - a[x + 1] * b[y + 1];
      im += a[x] * b[y + 1] + a[x + 1] * b[y];
    }
  return [re, im];
}

/** Operations under which the model's matrices at general points turn as they should, and which keep the mesh. */
export function symmetryOf(model: SampleModel, mesh: Mesh): KOperation[] {
  const sampler = createSampler(model, "none");
  const reciprocal = reciprocalVectors(mesh.vectorsA);
  const at = (k: Triple): Block => blockOf(sampler(cartesianK(k, reciprocal)), model.bands);
  const random = randomStream(20_261_201);
  const places = [0, 1].map(
    (): Triple => [random.uniform(), random.uniform(), mesh.periodic === 3 ? random.uniform() : 0],
  );
  const known = places.map(at);
  const facts = { bands: model.bands, moments: sampleMoments(model) } as unknown as GridFacts;
  const turned = (block: Block, operation: KOperation): Block =>
    unfoldedReader({ facts, read: () => block, close: () => {} }, facts, {
      operations: [operation],
      stored: 1,
      storedOf: Int32Array.of(0),
      operationOf: Uint16Array.of(0),
      flatOf: Int32Array.of(0),
    }).read(0, 1);
  const holds = (operation: KOperation): boolean =>
    places.every((k, i) => {
      const image = invariants(at(applied(operation.action, k)));
      const expected = invariants(turned(known[i], operation));
      return (
        image.length === expected.length &&
        image.every((x, j) => Math.abs(x - expected[j]) < same * Math.max(1, Math.abs(x)))
      );
    });
  return latticeRotations(mesh)
    .flatMap((rotation) => [false, true].map((timeReversal) => kOperation({ rotation, timeReversal }, mesh.vectorsA)))
    .filter((operation) => operation !== undefined)
    .filter((operation) => keepsMesh(operation, mesh) && holds(operation));
}

/** One point of every star of a model's mesh, the first of the mesh's order. Throws a usage Fault where no symmetry makes it fewer. */
export function reducedPoints(model: SampleModel, mesh: Mesh): ReducedPoints {
  const operations = symmetryOf(model, mesh);
  const total = mesh.divisions[0] * mesh.divisions[1] * mesh.divisions[2];
  const seen = new Uint8Array(total);
  const flats: number[] = [];
  const weights: number[] = [];
  for (let flat = 0; flat < total; flat++) {
    if (seen[flat] === 1) continue;
    let size = 0;
    for (const { action } of operations) {
      const image = flatIndex(applied(action, fractionalK(flat, mesh)), mesh);
      if (seen[image] === 0) size++;
      seen[image] = 1;
    }
    flats.push(flat);
    weights.push(size / total);
  }
  if (flats.length === total)
    throw usageFault(
      `no symmetry of ${model.name} makes any point of this mesh from another`,
      "Leave --reduced out, or choose divisions and an offset that keep the symmetry.",
    );
  return {
    operations: operations.map(({ rotation, timeReversal }) => ({ rotation, timeReversal })),
    points: flats.map((flat) => fractionalK(flat, mesh)),
    weights,
  };
}
