// occupancy.ts: how full is every band of a sample, exactly as a sweep counts it at its one level and temperature?
import { boltzmannEvPerK } from "../base/constants.js";
import { occupiedParts } from "../curves/occupation.js";
import { defectDetail } from "../curves/refined.js";
import type { Triple } from "../grid/grid.js";
import { createBoxReader } from "../spectrum/box-reader.js";
import { createPointReader } from "../spectrum/points.js";
import type { LocateJob } from "./job.js";
import type { BandSample } from "./local-sampler.js";
import { spanWidths } from "./pass.js";

/** Filled parts of bands, 0 to 1 but for the round-off and ringing of nodes; arrays are reused by the next call. */
export interface Occupancy {
  /** Of a sample that stands for a box of `size` cells. */
  box(sample: BandSample, size: number): Float64Array;
  /** Of a sample of the neighbour defect: at its energy, no colder than the mesh can follow. */
  warm(sample: BandSample): Float64Array;
  /** Of one band at its energy, spread over widths (method cells) or not (method points). */
  stored(energyEv: number, widthsEv: Float64Array): number;
}

/** For cells with these edges. */
export function createOccupancy(job: LocateJob, edges: readonly Triple[], bands: number): Occupancy {
  const { nodes, levelsEv, temperaturesK } = job.axis;
  const [levelEv, temperatureK] = [levelsEv[0], temperaturesK[0]];
  const parts = occupiedParts(nodes, levelEv, temperatureK);
  const read = createBoxReader(nodes, parts);
  const warmK = Math.max(temperatureK, (job.regularEv * defectDetail) / boltzmannEvPerK);
  const readWarm = createBoxReader(nodes, occupiedParts(nodes, levelEv, warmK));
  const readPoint = createPointReader(nodes, parts);
  const widths = new Float64Array(edges.length);
  const none = new Float64Array(0);
  const out = new Float64Array(bands);
  return {
    box({ energyEv, slopes }, size) {
      for (let band = 0; band < bands; band++) {
        spanWidths(slopes, band, edges, widths);
        for (let j = 0; j < widths.length; j++) widths[j] *= size;
        out[band] = read(energyEv[band], widths);
      }
      return out;
    },
    warm({ energyEv }) {
      for (let band = 0; band < bands; band++) out[band] = readWarm(energyEv[band], none);
      return out;
    },
    stored(energyEv, widthsEv) {
      if (job.method === "cells") return read(energyEv, widthsEv);
      if (temperatureK === 0) return energyEv <= levelEv ? 1 : 0;
      return readPoint(energyEv);
    },
  };
}
