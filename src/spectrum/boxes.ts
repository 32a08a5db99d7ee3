// boxes.ts: spreads the weight of one band over the energies that its cell spans, at a cost that does not grow with the spread.
//
// Inside a cell a band is continued linearly: E + sum_j t_j w_j with t_j in [-1/2, 1/2] and w_j its slope along edge j.
// Its density is the convolution of boxes of widths |w_j| (Gilat and Raubenheimer, Phys. Rev. 144, 390 (1966), for any
// lattice). A wide spread is kept on a coarser copy of the axis (steps doubled until
// it spans at most `mostSpan` of them), and the copies are joined at the end by linear interpolation of the density.
import { dataFault } from "../base/errors.js";
import type { NodeAxis } from "./axis.js";

/** A spread covers at most this many nodes of the copy it is kept on, and more than half of it unless it is the finest. */
const mostSpan = 24;
/** A box narrower than a step has a single lag and changes nothing. */
const narrowest = 1;

/** Weight per column. `base` lies below the axis; `copies[k]` has steps of 2^k: [node][column]. */
export interface BoxStore {
  readonly axis: NodeAxis;
  readonly columns: number;
  readonly base: Float64Array;
  readonly copies: readonly Float64Array[];
}

/** Enough for a spread of 10^8 steps; the coarse copies hold two or three nodes each. */
const copyCount = 23;
const nodesOfCopy = (axis: NodeAxis, k: number): number => Math.floor((axis.count - 1) / 2 ** k) + 2;

/** An empty store; owns its memory. */
export function createBoxStore(axis: NodeAxis, columns: number): BoxStore {
  const copies = Array.from({ length: copyCount }, (_, k) => new Float64Array(nodesOfCopy(axis, k) * columns));
  return { axis, columns, base: new Float64Array(columns), copies };
}

/** A stencil prepared once per band and applied to every column. */
export interface BoxShape {
  /** Which copy of the axis. */
  copy: number;
  /** First node of the stencil; may be negative. */
  first: number;
  entries: number;
  readonly weight: Float64Array;
  /** Where the whole spread lies: -1 below the axis, 0 touching it, 1 above. */
  side: -1 | 0 | 1;
}

/** energyEv: centre of the spread; widthsEv: |slope| along each edge (2 or 3 of them). The shape returned is reused by the next call. */
export type BoxShaper = (energyEv: number, widthsEv: Float64Array) => BoxShape;

/** Convolves the stencil with a box of `width` steps, in place; mass is kept, and the mean moves by meanLag(width). */
function convolveBox(weight: Float64Array, entries: number, width: number): void {
  const whole = Math.floor(width);
  const part = width - whole;
  let sum = 0;
  for (let i = 0; i < entries; i++) {
    sum += weight[i];
    weight[i] = sum;
  }
  for (let i = entries - 1; i >= 0; i--) {
    const near = i >= whole ? weight[i - whole] : 0;
    const far = i > whole ? weight[i - whole - 1] : 0;
    weight[i] = (weight[i] - (1 - part) * near - part * far) / width;
  }
}

/** Mean lag of the discrete box of `width` steps: ones at lags 0 .. floor(width) - 1, the fraction at the next. */
function meanLag(width: number): number {
  const part = width - Math.floor(width);
  return (width - 1 + (part * (1 - part)) / width) / 2;
}

/** A shaper for one axis. */
export function createBoxShaper(axis: NodeAxis): BoxShaper {
  const shape: BoxShape = { copy: 0, first: 0, entries: 0, weight: new Float64Array(mostSpan + 4), side: 0 };
  const last = axis.startEv + (axis.count - 1) * axis.stepEv;
  return (energyEv, widthsEv) => {
    let total = 0;
    for (let j = 0; j < widthsEv.length; j++) total += widthsEv[j];
    shape.side = energyEv + total / 2 < axis.startEv ? -1 : energyEv - total / 2 > last ? 1 : 0;
    if (shape.side !== 0) return shape;
    let step = axis.stepEv;
    shape.copy = 0;
    while (total > mostSpan * step && shape.copy < copyCount - 1) {
      step *= 2;
      shape.copy++;
    }
    if (!(total <= mostSpan * step))
      throw dataFault(
        `a band at ${energyEv} eV spreads over ${total} eV within one cell`,
        "Check the unit of the velocity.",
      );
    let position = (energyEv - axis.startEv) / step;
    for (let j = 0; j < widthsEv.length; j++)
      if (widthsEv[j] > narrowest * step) position -= meanLag(widthsEv[j] / step);
    shape.first = Math.floor(position);
    shape.entries = Math.ceil(total / step) + 3;
    const { weight } = shape;
    weight.fill(0, 0, shape.entries);
    weight[0] = 1 - (position - shape.first);
    weight[1] = position - shape.first;
    for (let j = 0; j < widthsEv.length; j++)
      if (widthsEv[j] > narrowest * step) convolveBox(weight, shape.entries, widthsEv[j] / step);
    return shape;
  };
}

/** Adds values[column] spread by the shape. A spread that lies above the axis adds nothing, one below adds to the base. */
export function depositShape(store: BoxStore, shape: BoxShape, values: Float64Array): void {
  const { columns, base } = store;
  if (shape.side === 1) return;
  if (shape.side === -1) {
    for (let c = 0; c < columns; c++) base[c] += values[c];
    return;
  }
  const target = store.copies[shape.copy];
  const nodes = target.length / columns;
  for (let e = 0; e < shape.entries; e++) {
    const node = shape.first + e;
    const weight = shape.weight[e];
    if (node >= nodes) return;
    if (node < 0) for (let c = 0; c < columns; c++) base[c] += weight * values[c];
    else for (let c = 0, at = node * columns; c < columns; c++, at++) target[at] += weight * values[c];
  }
}

/** Joins the copies into the finest one, in place, coarsest first: a node gives half its weight, and a quarter to each neighbour at half the step. */
export function settleBoxes(store: BoxStore): void {
  const { columns, base, copies } = store;
  for (let k = copies.length - 1; k > 0; k--) {
    const coarse = copies[k];
    const fine = copies[k - 1];
    const fineNodes = fine.length / columns;
    for (let at = 0; at < coarse.length; at++) {
      const value = coarse[at];
      if (value === 0) continue;
      const column = at % columns;
      const node = (2 * (at - column)) / columns;
      if (node === 0) base[column] += value / 4;
      else if (node - 1 < fineNodes) fine[(node - 1) * columns + column] += value / 4;
      if (node < fineNodes) fine[node * columns + column] += value / 2;
      if (node + 1 < fineNodes) fine[(node + 1) * columns + column] += value / 4;
    }
    coarse.fill(0);
  }
}
