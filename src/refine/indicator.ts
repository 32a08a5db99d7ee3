// indicator.ts: how far do a box and its halves disagree on the curves that are asked for, in parts of what is tolerated?
import type { NodeAxis } from "../spectrum/axis.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../spectrum/boxes.js";

/** A norm of a difference of two spectra: the largest difference of the occupied weight at any level and column, over its tolerance. */
export interface SpectralNorm {
  /** Adds weight * values, spread over widths about the energy, to the difference. */
  add(energyEv: number, widthsEv: Float64Array, weight: number, values: Float64Array): void;
  /** The norm of what was added since the last call; clears it. */
  take(): number;
}

/** `tolerance[column]`: what counts as 1, in zone-mean units. */
export function createSpectralNorm(axis: NodeAxis, tolerance: Float64Array): SpectralNorm {
  const columns = tolerance.length;
  const store = createBoxStore(axis, columns);
  const shaper = createBoxShaper(axis);
  const weighted = new Float64Array(columns);
  const running = new Float64Array(columns);
  return {
    add(energyEv, widthsEv, weight, values) {
      const shape = shaper(energyEv, widthsEv);
      if (shape.side === 1) return;
      for (let c = 0; c < columns; c++) weighted[c] = weight * values[c];
      depositShape(store, shape, weighted);
    },
    take() {
      settleBoxes(store);
      const nodes = store.copies[0];
      running.set(store.base);
      let worst = 0;
      for (let c = 0; c < columns; c++) worst = Math.max(worst, Math.abs(running[c]) / tolerance[c]);
      for (let at = 0; at < nodes.length; at += columns)
        for (let c = 0; c < columns; c++) {
          running[c] += nodes[at + c];
          worst = Math.max(worst, Math.abs(running[c]) / tolerance[c]);
        }
      nodes.fill(0);
      store.base.fill(0);
      return worst;
    },
  };
}
