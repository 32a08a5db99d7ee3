// box-spectrum.ts: a spectrum to which whole samples are added, every band spread over the box that the sample stands for.
import type { Triple } from "../grid/grid.js";
import type { NodeAxis } from "../spectrum/axis.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../spectrum/boxes.js";
import type { Sections } from "../spectrum/sections.js";
import type { BandSample } from "./local-sampler.js";
import { spanWidths } from "./pass.js";

export interface BoxSpectrum {
  /** Adds weight * values of every band, spread over a box of `size` cells (0: at its energy). */
  add(sample: BandSample, size: number, weight: number): void;
  /** Hands over the arrays as `name.base` and `name.nodes`; ends the spectrum. */
  finish(into: Sections, name: string): void;
}

/** An empty spectrum on an axis; `edges` of the whole cell. */
export function createBoxSpectrum(axis: NodeAxis, columns: number, edges: readonly Triple[]): BoxSpectrum {
  const store = createBoxStore(axis, columns);
  const shaper = createBoxShaper(axis);
  const widths = new Float64Array(edges.length);
  const row = new Float64Array(columns);
  return {
    add({ energyEv, slopes, values }, size, weight) {
      for (let band = 0; band < energyEv.length; band++) {
        spanWidths(slopes, band, edges, widths);
        for (let j = 0; j < widths.length; j++) widths[j] *= size;
        const shape = shaper(energyEv[band], widths);
        if (shape.side === 1) continue;
        for (let c = 0; c < columns; c++) row[c] = weight * values[band * columns + c];
        depositShape(store, shape, row);
      }
    },
    finish(into, name) {
      settleBoxes(store);
      into[`${name}.base`] = store.base;
      into[`${name}.nodes`] = store.copies[0];
    },
  };
}
