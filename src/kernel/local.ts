// local.ts: what are energies, slopes and curvatures a small step q away from a stored k point?
//
// k.p perturbation theory on the stored matrices alone (Luttinger and Kohn, Phys. Rev. 97, 869 (1955)):
//   H(q) = diag(E) + q_a v_a + (1/2) q_a q_b W_ab,   v_a(q) = v_a + q_b W_ab,   moments constant,
// all in the eigenbasis of H(q). "none": W = 0. "free-electron": W_ab = (hbar^2 / m) delta_ab, which shifts every
// level alike and adds q_a hbar^2 / m to each diagonal of v_a.

import { hbar2OverMeEvA2 } from "../base/constants.js";
import { fillInverse } from "./denominators.js";
import { createEigensolver } from "./eigen.js";
import type { Denominator, MatrixRef, PointRef, Product } from "./kernel.js";
import { createOperatorStore, hessianIndex, type Operator, type OperatorSpec, type Pack } from "./operators.js";
import { multiplyInto } from "./product.js";

/** What a local model is asked for. */
export interface LocalSpec extends OperatorSpec {
  /** Every evaluation gives the curvatures with each of these denominators. */
  readonly denominators: readonly Denominator[];
}

/** The local model of the point loaded last; its arrays are overwritten by each evaluation. One per thread. */
export interface LocalModel {
  /**
   * Takes a stored point: its velocities along spec.directions, the moments of the products, and, for "array", the
   * second derivatives among those directions. Everything needed is copied.
   */
  load(point: PointRef): void;
  /**
   * Moves q (1/angstrom, Cartesian) away from the point and writes curvature[(denominator * products + product) * bands + band], in
   * angstrom^2 times the moment. Bands are in ascending order of energy there. A component of q along a direction that is not among
   * spec.directions counts as zero. Throws a Fault where the matrices hold numbers that are not finite.
   */
  evaluate(qx: number, qy: number, qz: number, curvature: Float64Array): void;
  /** Energies at q, eV, ascending. */
  readonly energyEv: Float64Array;
  /** Slopes dE/dk of the model at q, eV angstrom, [band * 3 + direction]; zero for directions not asked for. */
  readonly slopes: Float64Array;
  /** Row i: the state of energyEv[i] in the stored bands, component j at [2 (i bands + j)]. */
  readonly vectors: Float64Array;
}

/** Where the elements of an operator are after rotation: in `data` at `offset`, as the first or second of its pack. */
interface Place {
  readonly offset: number;
  readonly second: boolean;
}

/** out[at ...] += factor * from[fromAt ...], `length` numbers. */
function addMultiple(
  length: number,
  factor: number,
  from: Float64Array,
  fromAt: number,
  out: Float64Array,
  at: number,
): void {
  for (let i = 0; i < length; i++) out[at + i] += factor * from[fromAt + i];
}

/** columns[j][i] = conjugate of rows[i][j]'s conjugate, both padded: eigenvectors as columns, and conjugated as rows. */
function spreadVectors(
  bands: number,
  size: number,
  vectors: Float64Array,
  columns: Float64Array,
  conjugate: Float64Array,
): void {
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
}

/** Elements <n|A|m>, n < m, of one operator of a rotated pack, packed row by row, interleaved. */
function extractPairs(
  bands: number,
  size: number,
  rotated: Float64Array,
  place: Place,
  out: Float64Array,
  outAt: number,
): void {
  let to = outAt;
  const { offset, second } = place;
  for (let n = 0; n < bands; n++) {
    for (let m = n + 1; m < bands; m++) {
      const x = offset + 2 * (n * size + m);
      const y = offset + 2 * (m * size + n);
      // A = (C + C^H) / 2, or B = (C - C^H) / 2i.
      out[to] = 0.5 * (second ? rotated[x + 1] + rotated[y + 1] : rotated[x] + rotated[y]);
      out[to + 1] = 0.5 * (second ? rotated[y] - rotated[x] : rotated[x + 1] - rotated[y + 1]);
      to += 2;
    }
  }
}

/**
 * Adds -2 Im(j conj(v)) / denominator of each pair to its lower band and takes it from its upper one:
 * omega[at + band], for one product and one denominator.
 */
function addPairs(
  bands: number,
  pairs: Float64Array,
  current: number,
  field: number,
  inverse: Float64Array,
  inverseAt: number,
  omega: Float64Array,
  at: number,
): void {
  let i = 0;
  for (let n = 0; n < bands; n++) {
    let own = 0;
    const row = inverseAt + n * bands;
    for (let m = n + 1; m < bands; m++) {
      const numerator = pairs[current + i] * pairs[field + i + 1] - pairs[current + i + 1] * pairs[field + i];
      const pair = 2 * numerator * inverse[row + m];
      own += pair;
      omega[at + m] -= pair;
      i += 2;
    }
    omega[at + n] += own;
  }
}

/** slopes[3 band + direction] of a velocity sent as its lower triangle: 2 Re <u|lower|u>. */
function slopesOfLower(
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

/** A local model for points of spec.bands bands. Nothing is allocated per point or step. */
export function createLocalModel(spec: LocalSpec): LocalModel {
  const { bands, hessian, products, denominators, directions } = spec;
  const store = createOperatorStore(spec);
  const { size, packs } = store;
  const [small, large] = [2 * bands * bands, 2 * size * size];
  const solve = createEigensolver(bands);
  const energyEv = new Float64Array(bands);
  const slopes = new Float64Array(3 * bands);
  const vectors = new Float64Array(small);
  const columns = new Float64Array(large);
  const conjugate = new Float64Array(large);
  const packed = new Float64Array(large);
  const moved = new Float64Array(large);
  const rotated = new Float64Array(packs.length * large);
  const pairLength = bands * (bands - 1);
  const inverse = new Float64Array(denominators.length * bands * bands);
  const { places, currents, fields } = placeOperators(packs, products, large);
  const pairs = new Float64Array(places.length * pairLength);
  const hamiltonian = createHamiltonian(bands, hessian, directions);
  const step = new Float64Array(3);

  const rotatePack = (pack: Pack, index: number) => {
    let matrix = store.data;
    let at = pack.offset;
    if (pack.terms.length > 0) {
      for (let i = 0; i < large; i++) packed[i] = store.data[at + i];
      for (const term of pack.terms) addMultiple(large, step[term.direction], store.data, term.offset, packed, 0);
      matrix = packed;
      at = 0;
    }
    multiplyInto(size, pack.shape, matrix, at, columns, 0, moved, 0);
    if (pack.shape === "lower") {
      slopesOfLower(bands, size, columns, moved, pack.operators[0].direction, slopes);
      return;
    }
    multiplyInto(size, "full", conjugate, 0, moved, 0, rotated, index * large);
    for (let i = 0; i < pack.operators.length; i++) {
      const { moment, direction } = pack.operators[i];
      if (moment >= 0) continue;
      for (let n = 0; n < bands; n++) slopes[3 * n + direction] = rotated[index * large + 2 * (n * size + n) + i];
    }
  };

  const evaluate = (qx: number, qy: number, qz: number, curvature: Float64Array) => {
    step.fill(0);
    for (let i = 0; i < directions.length; i++) {
      const direction = directions[i];
      step[direction] = direction === 0 ? qx : direction === 1 ? qy : qz;
    }
    solve(hamiltonian.at(step), energyEv, vectors);
    spreadVectors(bands, size, vectors, columns, conjugate);
    slopes.fill(0);
    for (let index = 0; index < packs.length; index++) rotatePack(packs[index], index);
    if (hessian === "free-electron") addFreeElectron(bands, step, energyEv, slopes);
    for (let i = 0; i < places.length; i++) extractPairs(bands, size, rotated, places[i], pairs, i * pairLength);
    curvature.fill(0, 0, denominators.length * products.length * bands);
    for (let d = 0; d < denominators.length; d++) {
      fillInverse(bands, bands, energyEv, 0, denominators[d], inverse, d * bands * bands);
      for (let p = 0; p < products.length; p++) {
        const [current, field] = [currents[p] * pairLength, fields[p] * pairLength];
        const at = (d * products.length + p) * bands;
        addPairs(bands, pairs, current, field, inverse, d * bands * bands, curvature, at);
      }
    }
  };

  const load = (point: PointRef) => {
    store.load(point);
    hamiltonian.load(point);
  };
  return { load, evaluate, energyEv, slopes, vectors };
}

/** Free-electron second derivative: every level moves by hbar^2 q^2 / 2m, every slope by hbar^2 q_a / m. */
function addFreeElectron(bands: number, q: Float64Array, energyEv: Float64Array, slopes: Float64Array): void {
  const shift = 0.5 * hbar2OverMeEvA2 * (q[0] * q[0] + q[1] * q[1] + q[2] * q[2]);
  for (let n = 0; n < bands; n++) {
    energyEv[n] += shift;
    for (let a = 0; a < 3; a++) slopes[3 * n + a] += hbar2OverMeEvA2 * q[a];
  }
}

/** Where each operator of the full packs lies after rotation, and which two of them each product multiplies. */
function placeOperators(packs: readonly Pack[], products: readonly Product[], matrixLength: number) {
  const operators: Operator[] = [];
  const places: Place[] = [];
  for (const [index, pack] of packs.entries()) {
    if (pack.shape === "lower") continue;
    for (const [i, operator] of pack.operators.entries()) {
      operators.push(operator);
      places.push({ offset: index * matrixLength, second: i === 1 });
    }
  }
  const find = (moment: number, direction: number) =>
    operators.findIndex((operator) => operator.moment === moment && operator.direction === direction);
  const currents = Int32Array.from(products, (product) => find(Math.max(product.moment, -1), product.flow));
  const fields = Int32Array.from(products, (product) => find(-1, product.field));
  return { places, currents, fields };
}

/** The Hamiltonian near the point loaded last, without the free-electron shift; `at` returns its own scratch. */
function createHamiltonian(bands: number, hessian: LocalSpec["hessian"], directions: readonly number[]) {
  const length = 2 * bands * bands;
  const seconds: [number, number][] = [];
  if (hessian === "array") for (const a of directions) for (const b of directions) if (a <= b) seconds.push([a, b]);
  const energyEv = new Float64Array(bands);
  const first = new Float64Array(directions.length * length);
  const second = new Float64Array(seconds.length * length);
  const matrix = new Float64Array(length);

  const copy = (from: MatrixRef, out: Float64Array, at: number) => {
    for (let i = 0; i < length; i++) out[at + i] = from.data[from.offset + i];
  };
  const load = (point: PointRef) => {
    for (let n = 0; n < bands; n++) energyEv[n] = point.energyEv[point.energyOffset + n];
    for (const [i, direction] of directions.entries()) copy(point.velocity[direction] as MatrixRef, first, i * length);
    for (const [i, [a, b]] of seconds.entries()) {
      copy((point.hessian as readonly MatrixRef[])[hessianIndex(a, b)], second, i * length);
    }
  };
  const at = (q: Float64Array): Float64Array => {
    matrix.fill(0);
    for (let i = 0; i < directions.length; i++) addMultiple(length, q[directions[i]], first, i * length, matrix, 0);
    for (let i = 0; i < seconds.length; i++) {
      const [a, b] = seconds[i];
      addMultiple(length, (a === b ? 0.5 : 1) * q[a] * q[b], second, i * length, matrix, 0);
    }
    for (let n = 0; n < bands; n++) matrix[2 * (n * bands + n)] += energyEv[n];
    return matrix;
  };
  return { load, at };
}
