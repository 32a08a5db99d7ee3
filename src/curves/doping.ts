// doping.ts: which level does a doping give at a temperature, and which doping a level? Rigid bands; no k points.
import { ascending, ascendingSlopes, cubicAt, linearAt, parabolicSlopes, type Samples } from "./interpolate.js";
import type { CurvesResult } from "./result.js";

/** Doping (added electrons per cell) against the level at one temperature, ascending throughout. */
export interface DopingCurve {
  readonly temperatureK: number;
  readonly levelsEv: readonly number[];
  readonly perCell: readonly number[];
  readonly slopes: readonly number[];
}

/** Dopings this close (electrons per cell) are one: the level is anywhere between. Round-off of the counts. */
const sameDoping = 1e-10;

/** The doping curve of temperature number `t`; above 0 K its slope is the density of states, which a cold curve lacks. */
export function dopingCurve(curves: CurvesResult, t: number): DopingCurve {
  const temperatureK = curves.temperature_K[t];
  const samples: Samples = { x: curves.level_eV, y: ascending(curves.doping_per_cell[t]) };
  const wanted = temperatureK > 0 ? curves.states_per_eV[t] : parabolicSlopes(samples);
  const slopes = ascendingSlopes(samples, wanted);
  return { temperatureK, levelsEv: samples.x, perCell: samples.y, slopes };
}

/** Added electrons per cell at a level inside the window. */
export const dopingAt = ({ levelsEv, perCell, slopes }: DopingCurve, levelEv: number): number =>
  cubicAt({ x: levelsEv, y: perCell }, slopes, levelEv);

/** Smallest and largest doping of the window. */
export const dopingRange = ({ perCell }: DopingCurve): readonly [least: number, most: number] => [
  perCell[0],
  perCell[perCell.length - 1],
];

/**
 * The level of a doping: mu(T) at fixed doping. Where the doping does not change over a range of levels (a gap, at 0 K) the middle of that
 * range. Undefined where the window does not hold this doping.
 */
export function levelAt(curve: DopingCurve, perCell: number): number | undefined {
  const { levelsEv, perCell: sampled } = curve;
  const [least, most] = dopingRange(curve);
  if (!(perCell >= least - sameDoping && perCell <= most + sameDoping)) return undefined;
  const above = sampled.findIndex((value) => value >= perCell - sameDoping);
  const below = sampled.findLastIndex((value) => value <= perCell + sameDoping);
  if (above <= below) return (levelsEv[above] + levelsEv[below]) / 2;
  let [low, high] = [levelsEv[below], levelsEv[above]];
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    if (dopingAt(curve, middle) < perCell) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Value and bar of a sampled response at a level: a cubic for the value, a straight line for the bar. */
export function responseAt(
  levelsEv: readonly number[],
  value: readonly number[],
  error: readonly number[],
  levelEv: number,
): { value: number; error: number } {
  const samples = { x: levelsEv, y: value };
  return {
    value: cubicAt(samples, parabolicSlopes(samples), levelEv),
    error: linearAt({ x: levelsEv, y: error }, levelEv),
  };
}

/** Electrons per cell at zero doping. */
export const neutralElectrons = ({ electrons_per_cell: electrons, doping_per_cell: doping }: CurvesResult): number =>
  electrons[0][0] - doping[0][0];

/** Added electrons per cell below which a level counts as still inside the gap. */
const emptyGap = 1e-5;
/** States per eV at the reference, in parts of the window's mean, below which carriers are few: a gap, a band edge, a semimetal. */
const fewStates = 0.1;

/** From here on heat bridges the gaps between the points of a usual mesh. */
const smoothK = 300;

/**
 * Whether the reference level lies in a gap, at a band's edge or where states are few (then concentrations span decades), and the
 * levels between which the coldest curve of the result counts as neutral.
 */
export function carriersOf(curves: CurvesResult): { few: boolean; neutralEv: readonly [number, number] } {
  const { level_eV: levels, states_per_eV, sampling, temperature_K: temperatures } = curves;
  const warm = temperatures.findIndex((kelvin) => kelvin >= smoothK);
  // The plain sum of a metal has no states between its points: it is asked where heat bridges them.
  const states = states_per_eV[sampling.method === "points" && warm >= 0 ? warm : 0];
  const mean = states.reduce((sum, value) => sum + value, 0) / levels.length;
  const few =
    levels[0] <= 0 && levels[levels.length - 1] >= 0 && linearAt({ x: levels, y: states }, 0) < fewStates * mean;
  const cold = dopingCurve(curves, 0);
  const neutral = levels.filter((_, i) => Math.abs(cold.perCell[i]) < emptyGap);
  const inside = few && neutral.length > 0 && neutral[0] <= 0 && neutral[neutral.length - 1] >= 0;
  return { few, neutralEv: inside ? [neutral[0], neutral[neutral.length - 1]] : [0, 0] };
}
