// state.ts: what is shown of a sweep: at which temperature, read at which level, along which axis; and which numbers follow from that?
import { type DopingCurve, dopingAt, dopingCurve, dopingRange, levelAt, responseAt } from "../../curves/doping.js";
import { type CurvesAtTemperature, computedCurves, type LiveCurves, liveCurves } from "../../curves/live.js";
import type { CurvesResult } from "../../curves/result.js";

/** What stays as it is when the temperature changes: the level, or the doping. */
export type Held = { readonly kind: "level" | "doping"; readonly at: number };

export interface Shown {
  readonly temperatureK: number;
  readonly axis: "level" | "doping";
  readonly held: Held;
  /** Numbers of the responses on show. */
  readonly responses: readonly number[];
  /** Number of the computed temperature drawn beside; undefined: none. */
  readonly beside: number | undefined;
}

/** Curves at one temperature with the doping that belongs to each level. */
export interface Curves extends CurvesAtTemperature {
  readonly dopings: DopingCurve;
}

/** A sweep that can be read at temperatures. */
export interface Source {
  readonly result: CurvesResult;
  /** Undefined: at the computed temperatures only. */
  readonly live: LiveCurves | undefined;
  at(temperatureK: number): Curves;
}

/** Numbers read at one level. */
export interface ReadOut {
  readonly levelEv: number;
  readonly dopingPerCell: number;
  readonly electrons: number;
  readonly states: number;
  readonly values: readonly { readonly value: number; readonly error: number; readonly points: number | undefined }[];
}

/** Opens a result; the last curves are kept, since every part of the page asks for the same. */
export function openSource(result: CurvesResult): Source {
  const live = liveCurves(result);
  const kept = new Map<number, Curves>();
  const read = (temperatureK: number): CurvesAtTemperature => {
    const t = result.temperature_K.indexOf(temperatureK);
    if (t >= 0) return computedCurves(result, t);
    return live?.at(temperatureK) ?? computedCurves(result, 0);
  };
  return {
    result,
    live,
    at(temperatureK) {
      const known = kept.get(temperatureK);
      if (known !== undefined) return known;
      const curves = read(temperatureK);
      const rows = {
        temperature_K: [curves.temperatureK],
        doping_per_cell: [[...curves.doping]],
        states_per_eV: [[...curves.states]],
      };
      const made = { ...curves, dopings: dopingCurve({ ...result, ...rows }, 0) };
      if (kept.size > 8) kept.clear();
      kept.set(temperatureK, made);
      return made;
    },
  };
}

/** The held level, or mu(T) of the held doping; at the window's end where it does not hold that doping. */
export function heldLevel({ dopings }: Curves, { kind, at }: Held): number {
  if (kind === "level") return at;
  const [least] = dopingRange(dopings);
  const ends = dopings.levelsEv;
  return levelAt(dopings, at) ?? (at < least ? ends[0] : ends[ends.length - 1]);
}

/** Everything at one level of the window; values by the same cubic as `tidegauge dope` reads them. */
export function readAt({ result }: Source, curves: Curves, levelEv: number): ReadOut {
  const levels = result.level_eV;
  const along = (row: readonly number[]): number => responseAt(levels, row, row, levelEv).value;
  return {
    levelEv,
    dopingPerCell: dopingAt(curves.dopings, levelEv),
    electrons: along(curves.electrons),
    states: along(curves.states),
    values: curves.value.map((row, r) => ({
      ...responseAt(levels, row, curves.error[r], levelEv),
      points: curves.points === undefined ? undefined : along(curves.points[r]),
    })),
  };
}
