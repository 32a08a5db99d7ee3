// indicator.ts: how far do a box and its halves disagree on the curves that are asked for, in parts of what is tolerated?
import type { NodeAxis } from "../spectrum/axis.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../spectrum/boxes.js";

/** A norm of the difference of two spectra: the largest difference of the occupied weight at any node and column, over its tolerance. */
export interface SpectralNorm {
  /** Adds weight * values[from + column], spread over widths about the energy, to the difference. */
  add(energyEv: number, widthsEv: Float64Array, weight: number, values: Float64Array, from: number): void;
  /** The norm of what was added since the last call; the difference is kept until the next `add`. */
  take(): number;
  /** Adds the squares of the difference taken last to `squares`: the spread of many differences of random sign. */
  keepSquares(): void;
  /** [node][column] */
  readonly squares: Float64Array;
}

/** `tolerance[column]`: what counts as 1, in zone-mean units. Only nodes from `first` to `last` are compared. */
export function createSpectralNorm(axis: NodeAxis, tolerance: Float64Array, first: number, last: number): SpectralNorm {
  const columns = tolerance.length;
  const store = createBoxStore(axis, columns);
  const shaper = createBoxShaper(axis);
  const weighted = new Float64Array(columns);
  const inverse = tolerance.map((value) => 1 / value);
  const running = new Float64Array(axis.count * columns);
  const squares = new Float64Array(axis.count * columns);
  return {
    squares,
    add(energyEv, widthsEv, weight, values, from) {
      const shape = shaper(energyEv, widthsEv);
      if (shape.side === 1) return;
      for (let c = 0; c < columns; c++) weighted[c] = weight * values[from + c];
      depositShape(store, shape, weighted);
    },
    take() {
      settleBoxes(store);
      const nodes = store.copies[0];
      let worst = 0;
      for (let c = 0; c < columns; c++) {
        let sum = store.base[c];
        let largest = 0;
        for (let node = 0, at = c; node <= last; node++, at += columns) {
          sum += nodes[at];
          running[at] = sum;
          if (node >= first) largest = Math.max(largest, Math.abs(sum));
        }
        worst = Math.max(worst, largest * inverse[c]);
      }
      nodes.fill(0);
      store.base.fill(0);
      return worst;
    },
    keepSquares() {
      for (let at = first * columns; at < (last + 1) * columns; at++) squares[at] += running[at] * running[at];
    },
  };
}
