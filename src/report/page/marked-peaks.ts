// marked-peaks.ts: which peaks of the shown curves are marked, and what is told of each?
import { dopingAt } from "../../curves/doping.js";
import { findPeaks, type Peak } from "../../curves/peaks.js";
import type { Curves, Source } from "./state.js";

/** A peak with the doping that puts the level there. */
export interface MarkedPeak extends Peak {
  readonly dopingPerCell: number;
}

/** Peaks that stand out by less than this part of the largest value are left out. */
const leastProminence = 0.05;
const mostPeaks = 6;

/** Peaks of one response at the shown temperature, highest first; judged as `tidegauge dope` does. */
export function markedPeaks(source: Source, curves: Curves, response: number): MarkedPeak[] {
  const { method, regular_eV } = source.result.sampling;
  const meshEv = method === "refine" ? 0 : Number(regular_eV ?? 0);
  const curve = { levelsEv: source.result.level_eV, value: curves.value[response], error: curves.error[response] };
  const resolution = { temperatureK: curves.temperatureK, meshEv, barFactor: 1, leastProminence };
  return findPeaks(curve, resolution)
    .sort((a, b) => Number(b.resolved) - Number(a.resolved) || Math.abs(b.value) - Math.abs(a.value))
    .slice(0, mostPeaks)
    .map((peak) => ({ ...peak, dopingPerCell: dopingAt(curves.dopings, peak.levelEv) }));
}
