// operators.ts: which operators does the local model turn into its eigenbasis, and what are they near a stored point?
//
// Two Hermitian matrices A and B travel as one general matrix A + i B, which costs 16 n^3 operations to rotate where
// two Hermitian rotations cost 24 n^3; they are told apart afterwards by their symmetry. A velocity of which only the
// slopes are wanted travels as its lower triangle with half the diagonal: <u|A|u> = 2 Re <u|lower|u>.

import { hbar2OverMeEvA2 } from "../base/constants.js";
import type { HessianKind } from "../grid/grid.js";
import { hessianIndex } from "./hamiltonian.js";
import type { MatrixRef, MixedProduct, PointRef, Product } from "./kernel.js";
import { pairCount } from "./pairs.js";
import { copyPadded, multiplyInto } from "./product.js";

/** A weighted sum of velocities (moment -1) and of currents (O v + v O) / 2 of a moment flowing in a direction. */
export type Operator = readonly { readonly moment: number; readonly direction: number; readonly weight: number }[];

/** The velocity of one direction. */
export const velocityOf = (direction: number): Operator => [{ moment: -1, direction, weight: 1 }];

/** The direction of an operator that is a velocity; undefined for any other. */
export function velocityDirection(operator: Operator): number | undefined {
  const [part] = operator;
  return operator.length === 1 && part.moment < 0 && part.weight === 1 ? part.direction : undefined;
}

/** The current of a product as an operator. */
export const currentOf = (product: AnyProduct): Operator =>
  "current" in product
    ? product.current.map(({ moment, flow, weight }) => ({ moment: Math.max(moment, -1), direction: flow, weight }))
    : [{ moment: Math.max(product.moment, -1), direction: product.flow, weight: 1 }];

/** Tells equal operators by equal text. */
export const operatorKey = (operator: Operator): string =>
  operator.map(({ moment, direction, weight }) => `${moment}/${direction}/${weight}`).join("+");

/** One or two operators that are rotated together: matrix(q) = base + sum over terms of q_direction * term. */
export interface Pack {
  /** The first is the Hermitian part, the second i times the anti-Hermitian rest. */
  readonly operators: readonly Operator[];
  readonly shape: "full" | "lower";
  /** Place of the base matrix in the store's data. */
  readonly offset: number;
  /** Place of the first operator's pairs where the pairs of all packs are kept, two operators a pack. */
  readonly pairOffset: number;
  readonly terms: readonly { readonly direction: number; readonly offset: number }[];
}

/** A product of one current, or of a weighted sum of currents. */
export type AnyProduct = Product | MixedProduct;

/** What the packs are made from. */
export interface OperatorSpec {
  readonly bands: number;
  readonly hessian: HessianKind;
  readonly products: readonly AnyProduct[];
  /** Directions whose slopes are wanted; every flow and field of the products is among them. */
  readonly directions: readonly number[];
}

/** The packs and their matrices at the point loaded last, `size` x `size` with size even. */
export interface OperatorStore {
  readonly size: number;
  readonly packs: readonly Pack[];
  readonly data: Float64Array;
  load(point: PointRef): void;
}

/** Operators whose every element is wanted, velocities first, each once; and velocities wanted for slopes only. */
function chooseOperators({ products, directions }: OperatorSpec): { full: Operator[]; slopeOnly: Operator[] } {
  const wanted = products.flatMap((product) => [velocityOf(product.field), currentOf(product)]);
  const distinct = new Map(wanted.map((operator) => [operatorKey(operator), operator]));
  const velocities = directions.map(velocityOf).filter((operator) => distinct.has(operatorKey(operator)));
  const currents = [...distinct.values()].filter((operator) => velocityDirection(operator) === undefined);
  const slopeOnly = directions.map(velocityOf).filter((operator) => !distinct.has(operatorKey(operator)));
  return { full: [...velocities, ...currents], slopeOnly };
}

/** Directions along which an operator changes with q, other than by a multiple of one. */
function changesAlong(operator: Operator, { hessian, directions }: OperatorSpec): readonly number[] {
  if (hessian === "array") return directions;
  if (hessian === "none") return [];
  return operator.filter(({ moment }) => moment >= 0).map(({ direction }) => direction);
}

function planPacks(spec: OperatorSpec, matrixLength: number): { packs: Pack[]; length: number } {
  const { full, slopeOnly } = chooseOperators(spec);
  // A lone last operator takes a slope-only velocity along, free of charge.
  if (full.length % 2 === 1 && slopeOnly.length > 0) full.push(slopeOnly.pop() as Operator);
  const packs: Pack[] = [];
  let length = 0;
  const place = () => {
    length += matrixLength;
    return length - matrixLength;
  };
  const add = (operators: readonly Operator[], shape: Pack["shape"]) => {
    const along = [...new Set(operators.flatMap((operator) => changesAlong(operator, spec)))].sort();
    const terms = along.map((direction) => ({ direction, offset: place() }));
    const pairOffset = packs.length * 4 * pairCount(spec.bands);
    packs.push({ operators, shape, offset: place(), pairOffset, terms });
  };
  for (let i = 0; i < full.length; i += 2) add(full.slice(i, i + 2), "full");
  for (const operator of slopeOnly) add([operator], "lower");
  return { packs, length };
}

/** out += factor A, or i factor A for the second of a pack. */
function addMatrix(
  bands: number,
  size: number,
  { data, offset }: MatrixRef,
  factor: number,
  second: boolean,
  out: Float64Array,
  at: number,
): void {
  for (let n = 0; n < bands; n++) {
    const from = offset + 2 * n * bands;
    const to = at + 2 * n * size;
    for (let m = 0; m < 2 * bands; m += 2) {
      const re = factor * data[from + m];
      const im = factor * data[from + m + 1];
      out[to + m] += second ? -im : re;
      out[to + m + 1] += second ? re : im;
    }
  }
}

/** out += factor (M + M^H) / 2, or i times that for the second of a pack. */
function addHermitianPart(
  size: number,
  m: Float64Array,
  factor: number,
  second: boolean,
  out: Float64Array,
  at: number,
): void {
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) {
      const x = 2 * (i * size + j);
      const y = 2 * (j * size + i);
      const re = 0.5 * factor * (m[x] + m[y]);
      const im = 0.5 * factor * (m[x + 1] - m[y + 1]);
      out[at + x] += second ? -im : re;
      out[at + x + 1] += second ? re : im;
    }
  }
}

/** Leaves the lower triangle with half the diagonal. */
function keepLower(size: number, data: Float64Array, at: number): void {
  for (let i = 0; i < size; i++) {
    data[at + 2 * (i * size + i)] *= 0.5;
    data[at + 2 * (i * size + i) + 1] *= 0.5;
    data.fill(0, at + 2 * (i * size + i + 1), at + 2 * (i + 1) * size);
  }
}

/** Room for the operators that `spec` calls for. */
export function createOperatorStore(spec: OperatorSpec): OperatorStore {
  const { bands, hessian } = spec;
  const size = bands + (bands & 1);
  const matrixLength = 2 * size * size;
  const { packs, length } = planPacks(spec, matrixLength);
  const data = new Float64Array(length);
  const left = new Float64Array(matrixLength);
  const right = new Float64Array(matrixLength);
  const product = new Float64Array(matrixLength);

  /** Adds the part that is made of the moment (if any) and of `velocity`, which may be a derivative of it. */
  const add = (point: PointRef, part: Operator[number], velocity: MatrixRef, second: boolean, at: number) => {
    const { moment, weight } = part;
    if (moment < 0) return addMatrix(bands, size, velocity, weight, second, data, at);
    const o = point.moments[moment];
    copyPadded(bands, size, o.data, o.offset, left, 0);
    copyPadded(bands, size, velocity.data, velocity.offset, right, 0);
    multiplyInto(size, "full", left, 0, right, 0, product, 0);
    addHermitianPart(size, product, weight, second, data, at);
  };

  const loadTerm = (point: PointRef, part: Operator[number], direction: number, second: boolean, at: number) => {
    const { moment, weight } = part;
    if (hessian === "array") {
      const w = (point.hessian as readonly MatrixRef[])[hessianIndex(part.direction, direction)];
      add(point, part, w, second, at);
    } else if (moment >= 0 && part.direction === direction) {
      addMatrix(bands, size, point.moments[moment], weight * hbar2OverMeEvA2, second, data, at);
    }
  };

  const loadPart = (point: PointRef, pack: Pack, part: Operator[number], second: boolean) => {
    add(point, part, point.velocity[part.direction] as MatrixRef, second, pack.offset);
    for (const { direction, offset } of pack.terms) loadTerm(point, part, direction, second, offset);
  };

  const load = (point: PointRef) => {
    data.fill(0);
    for (const pack of packs) {
      for (const [index, operator] of pack.operators.entries())
        for (const part of operator) loadPart(point, pack, part, index === 1);
      if (pack.shape === "full") continue;
      keepLower(size, data, pack.offset);
      for (const { offset } of pack.terms) keepLower(size, data, offset);
    }
  };
  return { size, packs, data, load };
}
