// local.ts: what are energies, slopes and curvatures a small step q away from a stored k point?
//
// k.p perturbation theory on the stored matrices alone (Luttinger and Kohn, Phys. Rev. 97, 869 (1955)):
//   H(q) = diag(E) + q_a v_a + (1/2) q_a q_b W_ab,   v_a(q) = v_a + q_b W_ab,   moments constant,
// all in the eigenbasis of H(q). "none": W = 0. "free-electron": W_ab = (hbar^2 / m) delta_ab, which shifts every
// level alike and adds q_a hbar^2 / m to each diagonal of v_a.

import { hbar2OverMeEvA2 } from "../base/constants.js";
import { createEigensolver } from "./eigen.js";
import { addMultiple, createHamiltonian } from "./hamiltonian.js";
import type { Denominator, PointRef } from "./kernel.js";
import {
  createOperatorStore,
  currentOf,
  type Operator,
  type OperatorSpec,
  type OperatorStore,
  operatorKey,
  type Pack,
  velocityDirection,
  velocityOf,
} from "./operators.js";
import { addPairs, fillInverse, packAntiHermitian, packHermitian, pairCount, weighPairs, writePairs } from "./pairs.js";
import { multiplyInto } from "./product.js";
import { averageOverSets, fillEnds, lowerSquares, rotatedSquares } from "./sets.js";

/** What a local model is asked for. */
export interface LocalSpec extends OperatorSpec {
  /** Every evaluation gives the curvatures with each of these denominators. */
  readonly denominators: readonly Denominator[];
  /** Bands closer than this count as one set in `squares`; default 0. */
  readonly togetherEv?: number;
}

/** The local model of the point loaded last; its arrays are overwritten by each evaluation. One per thread. */
export interface LocalModel {
  /**
   * Takes a stored point: its velocities along spec.directions, the moments of the products, and, for "array", the
   * second derivatives among those directions. Everything needed is copied.
   */
  load(point: PointRef): void;
  /**
   * Moves q (1/angstrom, Cartesian) away from the point and writes the curvatures, angstrom^2 times the moment, at
   * curvature[(denominator * products + product) * bands + band]; bands ascend in energy there. A component of q along
   * a direction that is not among spec.directions counts as zero. Throws a Fault where a matrix is not finite.
   */
  evaluate(qx: number, qy: number, qz: number, curvature: Float64Array): void;
  /**
   * Of the last evaluation, with one of the denominators: what each pair n < m adds to the curvature of n and takes from that of m, at
   * out[product * pairCount + pair].
   */
  pairCurvatures(denominator: number, out: Float64Array): void;
  /** Energies at q, eV, ascending. */
  readonly energyEv: Float64Array;
  /** Slopes dE/dk of the model at q, eV angstrom, [band * 3 + direction]; zero for directions not asked for. */
  readonly slopes: Float64Array;
  /** v_a v_a of every band, (eV angstrom)^2, [band * 3 + direction]; each band of a set has its part of the set's trace. */
  readonly squares: Float64Array;
  /** Row i: the state of energyEv[i] in the stored bands, component j at [2 (i bands + j)]. */
  readonly vectors: Float64Array;
}

/** What a rotation writes; see LocalModel. */
interface Rotated {
  readonly slopes: Float64Array;
  readonly squares: Float64Array;
  readonly pairs: Float64Array;
}

/** Brings the operators of a store into the eigenbasis. */
interface Rotation {
  /** Sets the basis: row i of `vectors` is state i; bands closer than `togetherEv` are one set. */
  setBasis(vectors: Float64Array, energyEv: Float64Array, togetherEv: number): void;
  /** Rotates one pack at q; writes slopes and squares of the velocities in it, and the pairs of all its operators. */
  rotate(pack: Pack, q: Float64Array, into: Rotated): void;
}

function createRotation(bands: number, store: OperatorStore): Rotation {
  const { size, data } = store;
  const length = 2 * size * size;
  // States as columns, their conjugates as rows, a pack at q, the same times the states, and that in the eigenbasis.
  const [columns, conjugate, packed, moved, rotated] = [0, 0, 0, 0, 0].map(() => new Float64Array(length));

  const ends = new Int32Array(bands);

  const setBasis = (vectors: Float64Array, energyEv: Float64Array, togetherEv: number) => {
    fillEnds(energyEv, togetherEv, ends);
    for (let i = 0; i < bands; i++) {
      for (let j = 0; j < bands; j++) {
        const re = vectors[2 * (i * bands + j)];
        const im = vectors[2 * (i * bands + j) + 1];
        columns[2 * (j * size + i)] = re;
        columns[2 * (j * size + i) + 1] = im;
        conjugate[2 * (i * size + j)] = re;
        conjugate[2 * (i * size + j) + 1] = -im;
      }
    }
  };

  const rotate = (pack: Pack, q: Float64Array, { slopes, squares, pairs }: Rotated) => {
    const { operators, shape, offset, terms } = pack;
    const moves = terms.length > 0;
    if (moves) {
      for (let i = 0; i < length; i++) packed[i] = data[offset + i];
      for (const { direction, offset: from } of terms) addMultiple(length, q[direction], data, from, packed, 0);
    }
    multiplyInto(size, shape, moves ? packed : data, moves ? 0 : offset, columns, 0, moved, 0);
    if (shape === "lower") {
      const { direction } = operators[0][0];
      addLowerSlopes(bands, size, columns, moved, direction, slopes);
      lowerSquares(size, columns, moved, ends, direction, squares);
      return;
    }
    multiplyInto(size, "full", conjugate, 0, moved, 0, rotated, 0);
    for (let i = 0; i < operators.length; i++) {
      const direction = velocityDirection(operators[i]);
      const at = pack.pairOffset + i * bands * (bands - 1);
      if (i === 0) packHermitian(bands, size, rotated, 0, pairs, at);
      else packAntiHermitian(bands, size, rotated, 0, pairs, at);
      if (direction === undefined) continue;
      for (let n = 0; n < bands; n++) slopes[3 * n + direction] = rotated[2 * (n * size + n) + i];
      rotatedSquares(size, rotated, i === 1, ends, direction, squares);
    }
  };
  return { setBasis, rotate };
}

/** slopes[3 band + direction] += 2 Re <u|lower|u> for a velocity that came as its lower triangle. */
function addLowerSlopes(
  bands: number,
  size: number,
  columns: Float64Array,
  moved: Float64Array,
  direction: number,
  slopes: Float64Array,
): void {
  for (let j = 0; j < bands; j++) {
    for (let n = 0; n < bands; n++) {
      const x = 2 * (j * size + n);
      slopes[3 * n + direction] += 2 * (columns[x] * moved[x] + columns[x + 1] * moved[x + 1]);
    }
  }
}

/**
 * Free-electron second derivative: every level moves by hbar^2 q^2 / 2m, every slope by hbar^2 q_a / m; `mean` are the slopes averaged
 * over sets, before.
 */
function addFreeElectron(
  q: Float64Array,
  mean: Float64Array,
  energyEv: Float64Array,
  { slopes, squares }: Rotated,
): void {
  const shift = 0.5 * hbar2OverMeEvA2 * (q[0] * q[0] + q[1] * q[1] + q[2] * q[2]);
  for (let n = 0; n < energyEv.length; n++) {
    energyEv[n] += shift;
    for (let a = 0; a < 3; a++) {
      const more = hbar2OverMeEvA2 * q[a];
      slopes[3 * n + a] += more;
      squares[3 * n + a] += 2 * more * mean[3 * n + a] + more * more;
    }
  }
}

/** Place among the packed pairs of an operator. */
function pairsOf(packs: readonly Pack[], bands: number, wanted: Operator): number {
  const key = operatorKey(wanted);
  for (const { operators, shape, pairOffset } of packs) {
    const index = operators.findIndex((operator) => operatorKey(operator) === key);
    if (shape === "full" && index >= 0) return pairOffset + index * bands * (bands - 1);
  }
  return -1;
}

/** What is done with the pairs of one product: current elements at one offset, weighted field elements at another. */
type TakePairs = (product: number, currentOffset: number, weights: Float64Array, weightOffset: number) => void;

/** From the pairs of all operators to those of every product's current and field, with one of the denominators. */
function createProducts({ bands, products, denominators }: LocalSpec, packs: readonly Pack[]) {
  const count = pairCount(bands);
  const inverse = new Float64Array(count);
  const weights = new Float64Array(3 * 2 * count);
  const fields = [...new Set(products.map((product) => product.field))];
  const fieldPairs = fields.map((field) => pairsOf(packs, bands, velocityOf(field)));
  const currentPairs = products.map((product) => pairsOf(packs, bands, currentOf(product)));
  return (energyEv: Float64Array, pairs: Float64Array, denominator: number, take: TakePairs): void => {
    fillInverse(bands, energyEv, 0, denominators[denominator], inverse, 0);
    for (let i = 0; i < fields.length; i++)
      weighPairs(count, pairs, fieldPairs[i], inverse, 0, weights, fields[i] * 2 * count);
    for (let p = 0; p < products.length; p++) take(p, currentPairs[p], weights, products[p].field * 2 * count);
  };
}

/** A local model for points of spec.bands bands. Nothing is allocated per step. */
export function createLocalModel(spec: LocalSpec): LocalModel {
  const { bands, hessian, directions, products, denominators, togetherEv = 0 } = spec;
  const store = createOperatorStore(spec);
  const rotation = createRotation(bands, store);
  const hamiltonian = createHamiltonian(bands, hessian, directions);
  const solve = createEigensolver(bands);
  const visitProducts = createProducts(spec, store.packs);
  const energyEv = new Float64Array(bands);
  const slopes = new Float64Array(3 * bands);
  const squares = new Float64Array(3 * bands);
  const mean = new Float64Array(3 * bands);
  const vectors = new Float64Array(2 * bands * bands);
  const count = pairCount(bands);
  const pairs = new Float64Array(store.packs.length * 4 * count);
  const step = new Float64Array(3);
  const into: Rotated = { slopes, squares, pairs };

  const evaluate = (qx: number, qy: number, qz: number, curvature: Float64Array) => {
    step.fill(0);
    for (let i = 0; i < directions.length; i++) {
      const direction = directions[i];
      step[direction] = direction === 0 ? qx : direction === 1 ? qy : qz;
    }
    solve(hamiltonian.at(step), energyEv, vectors);
    rotation.setBasis(vectors, energyEv, togetherEv);
    slopes.fill(0);
    squares.fill(0);
    for (let i = 0; i < store.packs.length; i++) rotation.rotate(store.packs[i], step, into);
    if (hessian === "free-electron") {
      mean.set(slopes);
      averageOverSets(energyEv, mean, togetherEv);
      addFreeElectron(step, mean, energyEv, into);
    }
    curvature.fill(0, 0, denominators.length * products.length * bands);
    for (let d = 0; d < denominators.length; d++)
      visitProducts(energyEv, pairs, d, (p, current, weights, field) =>
        addPairs(bands, pairs, current, weights, field, curvature, (d * products.length + p) * bands),
      );
  };
  const pairCurvatures = (denominator: number, out: Float64Array) =>
    visitProducts(energyEv, pairs, denominator, (p, current, weights, field) =>
      writePairs(count, pairs, current, weights, field, out, p * count),
    );
  const load = (point: PointRef) => {
    store.load(point);
    hamiltonian.load(point);
  };
  return { load, evaluate, pairCurvatures, energyEv, slopes, squares, vectors };
}
