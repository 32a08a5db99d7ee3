// doped-curves.ts: what does a computed sweep say at fixed doping, and what of its peaks? Shared by `dope` and `series`.
import { usageFault } from "../base/errors.js";
import {
  carriersOf,
  type DopingCurve,
  dopingAt,
  dopingCurve,
  dopingRange,
  levelAt,
  neutralElectrons,
  responseAt,
} from "../curves/doping.js";
import { findPeaks, type Peak, type PeakCurve } from "../curves/peaks.js";
import type { CurvesResult, ResponseCurve } from "../curves/result.js";
import type { DopedValue, DopePeak, RigidBandStretch } from "./dope-result.js";
import { type DopingScale, dopingAmount, rigidBandStretch } from "./doping-amount.js";

/** How a doping is told and asked for. */
export const dopingUnits = ["per_cell", "per_cm3", "per_cm2"] as const;
export type DopingUnit = (typeof dopingUnits)[number];

/** Heights at fixed doping are compared at these: liquid nitrogen, a room, a warm device. */
export const robustnessK: readonly number[] = [77, 300, 500];

/** Where carriers are few and no doping is asked for: concentrations to tell of, per cm^3 (a layer: per cm^2). */
const roundDensities = { per_cm3: [1e17, 1e18, 1e19, 1e20, 1e21], per_cm2: [1e11, 1e12, 1e13, 1e14] } as const;

/** Refuses a unit of the other dimension by name. */
export function checkDopingUnit(unit: DopingUnit, periodic: 2 | 3): void {
  if (unit === (periodic === 3 ? "per_cm2" : "per_cm3"))
    throw usageFault(
      `--doping-unit ${unit} does not fit a ${periodic === 3 ? "crystal" : "layer"}`,
      `Use per_cell or ${periodic === 3 ? "per_cm3" : "per_cm2"}.`,
    );
}

/** What every reading of one sweep needs. */
export interface Doped {
  readonly curves: CurvesResult;
  /** One for each temperature of the sweep. */
  readonly dopings: readonly DopingCurve[];
  readonly scale: DopingScale;
  readonly neutralEv: readonly [number, number];
  readonly few: boolean;
}

/** Prepares the reading of a sweep. */
export function preparedDoping(curves: CurvesResult, substitute: readonly number[], sites: number): Doped {
  const { few, neutralEv } = carriersOf(curves);
  const largest = curves.doping_per_cell
    .flat()
    .reduce((most, each) => (Math.abs(each) > Math.abs(most) ? each : most), 0);
  const at = curves.doping_per_cell.flat().indexOf(largest);
  const densityOfOne = largest === 0 ? Number.NaN : curves.doping_density.flat()[at] / largest;
  const dopings = curves.temperature_K.map((_, t) => dopingCurve(curves, t));
  return {
    curves,
    dopings,
    few,
    neutralEv,
    scale: { densityOfOne, substitute, sites, electrons: neutralElectrons(curves) },
  };
}

/** One response at a doping and temperature number `t`. */
export function dopedValue(
  { curves, dopings }: Doped,
  response: ResponseCurve,
  t: number,
  perCell: number,
): DopedValue {
  const temperature_K = curves.temperature_K[t];
  const level = levelAt(dopings[t], perCell);
  if (level === undefined) return { temperature_K, level_eV: null, value: null, error: null };
  return {
    temperature_K,
    level_eV: level,
    ...responseAt(curves.level_eV, response.value[t], response.error[t], level),
  };
}

/** Indices of the temperatures that exist in the sweep. */
export const indicesOf = (curves: CurvesResult, temperaturesK: readonly number[]): number[] =>
  temperaturesK.map((kelvin) => curves.temperature_K.indexOf(kelvin)).filter((t) => t >= 0);

/** Dopings that every given temperature of the window holds. */
export function heldByAll({ dopings }: Doped, temperatures: readonly number[]): [least: number, most: number] {
  const ranges = temperatures.map((t) => dopingRange(dopings[t]));
  return [Math.max(...ranges.map(([least]) => least)), Math.min(...ranges.map(([, most]) => most))];
}

/** How far a level and a doping stretch the rigid bands. */
export function stretchOf({ neutralEv, scale }: Doped, levelEv: number, perCell: number): RigidBandStretch {
  const [low, high] = neutralEv;
  const shift = levelEv > high ? levelEv - high : levelEv < low ? levelEv - low : 0;
  return rigidBandStretch(shift, dopingAmount(perCell, scale), scale);
}

function peakResult(doped: Doped, response: ResponseCurve, t: number, peak: Peak): DopePeak {
  const { curves, dopings, scale } = doped;
  const perCell = dopingAt(dopings[t], peak.levelEv);
  const { fromEv, toEv, openBelow, openAbove } = peak.keeps;
  return {
    temperature_K: curves.temperature_K[t],
    level_eV: peak.levelEv,
    value: peak.value,
    error: peak.error,
    prominence: peak.prominence,
    width_eV: peak.widthEv,
    resolved: peak.resolved,
    unresolved_why: peak.why,
    doping: dopingAmount(perCell, scale),
    keeps_90_percent: {
      from_per_cell: openBelow ? null : dopingAt(dopings[t], fromEv),
      to_per_cell: openAbove ? null : dopingAt(dopings[t], toEv),
    },
    at_temperatures: indicesOf(curves, robustnessK).map((other) => dopedValue(doped, response, other, perCell)),
    rigid_band: stretchOf(doped, peak.levelEv, perCell),
  };
}

/** The bars of `points` and `cells` came out up to this many times too narrow on crystals whose truth is known. */
const uncalibrated = 10;

/** Responses that nowhere exceed this, in any unit on offer, are the round-off of sums over large terms that cancel: zero. */
const roundOff = 1e-7;

/** A response at temperature number `t` as the search for peaks takes it. */
export function peakCurve(curves: CurvesResult, response: ResponseCurve, t: number): PeakCurve {
  const largest = response.value[t].reduce((most, each) => Math.max(most, Math.abs(each) || 0), 0);
  const value = largest < roundOff ? response.value[t].map(() => 0) : response.value[t];
  return { levelsEv: curves.level_eV, value, error: response.error[t] };
}

/** The peaks of a response at temperature number `t`: resolved ones first, then by height. */
export function peaksOf(
  doped: Doped,
  response: ResponseCurve,
  t: number,
  resolution: { meshEv: number; prominence: number },
): DopePeak[] {
  const { curves } = doped;
  return findPeaks(peakCurve(curves, response, t), {
    temperatureK: curves.temperature_K[t],
    meshEv: resolution.meshEv,
    barFactor: curves.sampling.method === "refine" ? 1 : uncalibrated,
    leastProminence: resolution.prominence,
  })
    .map((peak) => peakResult(doped, response, t, peak))
    .sort((a, b) => Number(b.resolved) - Number(a.resolved) || Math.abs(b.value) - Math.abs(a.value));
}

/** Round concentrations inside a range of electrons per cell, for where carriers are few. */
export function roundDopings(
  densityOfOne: number,
  unit: "per_cm3" | "per_cm2",
  [least, most]: readonly [number, number],
): number[] {
  const round = roundDensities[unit].map((density) => density / densityOfOne);
  return [...round.map((each) => -each).reverse(), ...round].filter((each) => each >= least && each <= most);
}

/** Three digits, powers of ten for concentrations. */
const short = (value: number): string =>
  Math.abs(value) < 1e6 ? String(Number(value.toPrecision(3))) : value.toExponential(2).replace(/\.?0*e\+/, "e");

/** The dopings asked for, in electrons per cell; none asked for and carriers few: round concentrations inside the window. */
export function askedDopings(
  { curves, scale, few }: Doped,
  { doping, dopingUnit }: { doping?: readonly number[] | undefined; dopingUnit: DopingUnit },
  [least, most]: readonly [number, number],
  where = "",
): number[] {
  const inCell = (value: number): number => (dopingUnit === "per_cell" ? value : value / scale.densityOfOne);
  if (doping === undefined) {
    if (!few) return [];
    return roundDopings(scale.densityOfOne, curves.doping_density_unit, [least, most]);
  }
  checkDopingUnit(dopingUnit, curves.doping_density_unit === "per_cm3" ? 3 : 2);
  for (const value of doping) {
    if (inCell(value) >= least && inCell(value) <= most) continue;
    const told = (perCell: number): string => short(dopingUnit === "per_cell" ? perCell : perCell * scale.densityOfOne);
    const [from, to] = [curves.level_eV[0], curves.level_eV[curves.level_eV.length - 1]];
    throw usageFault(
      `${where}--doping ${short(value)} ${dopingUnit}: the window from ${short(from)} to ${short(to)} eV holds only ${told(least)} to ${told(most)} at every temperature asked`,
      `Widen it with ${inCell(value) < least ? `--from below ${short(from)}` : `--to above ${short(to)}`}, or ask for a doping inside.`,
    );
  }
  return doping.map(inCell);
}
