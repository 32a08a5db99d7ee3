// live.ts: what does a finished sweep say at a temperature that it was not asked for? Read from the spectra it carries. No k points.
import { boltzmannEvPerK } from "../base/constants.js";
import { neutralElectrons } from "./doping.js";
import { type CurveSampler, densityReading, occupiedReading, type Reading } from "./occupation.js";
import type { CurvesResult } from "./result.js";
import { type PackedWeights, type SpectrumBlock, unpackWeights } from "./spectrum-block.js";

/** A result at one temperature; every row is along the levels, those of responses in their order. */
export interface CurvesAtTemperature {
  readonly temperatureK: number;
  readonly value: readonly (readonly number[])[];
  /** One standard bar; between computed temperatures the larger of the two neighbouring ones. */
  readonly error: readonly (readonly number[])[];
  /** Plain mesh sums; undefined where they are not known at this temperature. */
  readonly points: readonly (readonly number[])[] | undefined;
  readonly electrons: readonly number[];
  readonly doping: readonly number[];
  readonly states: readonly number[];
  /** True where the sweep itself computed this temperature. */
  readonly computed: boolean;
}

/** Curves at any temperature between `leastK` and `mostK`, besides those computed. */
export interface LiveCurves {
  readonly leastK: number;
  readonly mostK: number;
  at(temperatureK: number): CurvesAtTemperature;
}

/**
 * Nodes per kT that a temperature needs: 12-point anterpolation of a Fermi factor then errs by less than 1e-7 of a state. (A sweep asked
 * for a temperature has 8, and 1e-12.)
 */
const leastNodesPerKt = 3;
/** Nodes must reach this many kT beyond the levels: what is left out weighs less than 1e-10 of a state. */
const reachInKt = 24;

/** The computed temperature number `t` of a result. */
export function computedCurves(result: CurvesResult, t: number): CurvesAtTemperature {
  return {
    temperatureK: result.temperature_K[t],
    value: result.responses.map(({ value }) => value[t]),
    error: result.responses.map(({ error }) => error[t]),
    points: result.responses.map(({ points }) => points[t]),
    electrons: result.electrons_per_cell[t],
    doping: result.doping_per_cell[t],
    states: result.states_per_eV[t],
    computed: true,
  };
}

/** Temperatures that the nodes resolve and cover, K. */
function coveredTemperatures(result: CurvesResult, block: SpectrumBlock): { leastK: number; mostK: number } {
  const { level_eV: levels, reference_eV: reference } = result;
  const end = block.start_eV + (block.count - 1) * block.step_eV;
  const margin = Math.min(levels[0] + reference - block.start_eV, end - reference - levels[levels.length - 1]);
  const leastEv = leastNodesPerKt * block.step_eV;
  return { leastK: leastEv / boltzmannEvPerK, mostK: margin / (reachInKt * boltzmannEvPerK) };
}

/** The larger of the bars at the neighbouring computed temperatures, [response][level]. */
function neighbouringBars(result: CurvesResult, temperatureK: number): number[][] {
  const kelvins = result.temperature_K;
  const above = kelvins.findIndex((kelvin) => kelvin >= temperatureK);
  const after = above < 0 ? kelvins.length - 1 : above;
  const before = above <= 0 ? after : above - 1;
  return result.responses.map(({ error }) => error[after].map((bar, level) => Math.max(bar, error[before][level])));
}

type Table = number[][];

/** Curves of every column at one temperature, [column][level], in the units of the result. */
type TemperatureReader = (temperatureK: number, levelsEv: readonly number[]) => Table;

function readerOf(block: SpectrumBlock, packed: PackedWeights, reading: Reading): TemperatureReader | undefined {
  const weights = unpackWeights(packed, block);
  if (weights === undefined) return undefined;
  const columns = block.columns.length;
  const axis = { startEv: block.start_eV, stepEv: block.step_eV, count: block.count };
  const sampler: CurveSampler = reading.read({ axis, columns, ...weights });
  const out = new Float64Array(columns);
  return (temperatureK, levelsEv) => {
    const table = block.columns.map(() => new Array<number>(levelsEv.length).fill(0));
    for (const [level, levelEv] of levelsEv.entries()) {
      sampler(levelEv, temperatureK, out);
      for (let c = 0; c < columns; c++) table[c][level] = out[c] * block.factor[c];
    }
    return table;
  };
}

/** The refined reading: the trees as warm as asked, the neighbours' correction no colder than the mesh shows it. */
function correctedReader(block: SpectrumBlock, reading: Reading): TemperatureReader | undefined {
  const trees = readerOf(block, block.weights, reading);
  if (trees === undefined || block.correction === undefined) return trees;
  const correction = readerOf(block, block.correction, reading);
  if (correction === undefined) return undefined;
  return (temperatureK, levelsEv) => {
    const warmK = Math.max(temperatureK, block.warm_eV / boltzmannEvPerK);
    const share = reading.warmed(temperatureK, warmK);
    const added = correction(warmK, levelsEv);
    return trees(temperatureK, levelsEv).map((row, c) => row.map((value, level) => value + share * added[c][level]));
  };
}

/**
 * The curves of a result at any temperature that its spectra resolve; undefined where it carries none, or where they cover no temperature.
 * The numbers are those of a sweep that was asked for this temperature on the same nodes, to 1e-7 of a state.
 */
export function liveCurves(result: CurvesResult): LiveCurves | undefined {
  const block = result.spectrum;
  if (block === undefined) return undefined;
  const { leastK, mostK } = coveredTemperatures(result, block);
  const occupied = correctedReader(block, occupiedReading);
  const density = correctedReader(block, densityReading(block.resolution_eV));
  if (!(mostK > leastK) || occupied === undefined || density === undefined) return undefined;
  const plain = block.points === undefined ? undefined : readerOf(block, block.points, occupiedReading);
  const levels = result.level_eV.map((level) => level + result.reference_eV);
  const neutral = neutralElectrons(result);
  const last = block.columns.length - 1;
  const read = (temperatureK: number): CurvesAtTemperature => {
    const rows = occupied(temperatureK, levels);
    return {
      temperatureK,
      value: rows.slice(0, last),
      error: neighbouringBars(result, temperatureK),
      points: plain?.(temperatureK, levels).slice(0, last),
      electrons: rows[last],
      doping: rows[last].map((count) => count - neutral),
      states: density(temperatureK, levels)[last],
      computed: false,
    };
  };
  return {
    leastK,
    mostK,
    at(temperatureK) {
      const t = result.temperature_K.indexOf(temperatureK);
      return t >= 0 ? computedCurves(result, t) : read(temperatureK);
    },
  };
}
