// occupation.ts: turns weight kept on energy nodes into curves against level and temperature. No k points.
import { boltzmannEvPerK } from "../base/constants.js";
import { fermiReach, type LevelAxis, type NodeAxis } from "../spectrum/axis.js";

/** Fermi factor of x = (E - mu) / kT, without overflow. */
export function fermi(x: number): number {
  if (x > 0) {
    const small = Math.exp(-x);
    return small / (1 + small);
  }
  return 1 / (1 + Math.exp(x));
}

/** -df/dE times kT at x = (E - mu) / kT. */
export function fermiSlope(x: number): number {
  const small = Math.exp(-Math.abs(x));
  return small / ((1 + small) * (1 + small));
}

/** Weight on nodes: `base` lies below the axis, `nodes` is [node][column]. */
export interface NodeWeights {
  readonly axis: NodeAxis;
  readonly columns: number;
  readonly base: Float64Array;
  readonly nodes: Float64Array;
}

/** Running sums below each node: [node][column], node = 0 .. count. */
function runningSums({ axis, columns, base, nodes }: NodeWeights): Float64Array {
  const sums = new Float64Array((axis.count + 1) * columns);
  sums.set(base);
  const lost = new Float64Array(columns);
  for (let at = 0; at < axis.count * columns; at++) {
    const column = at % columns;
    // Kahan: near-degenerate pairs leave large weights of both signs close together.
    const term = nodes[at] - lost[column];
    const next = sums[at] + term;
    lost[column] = next - sums[at] - term;
    sums[at + columns] = next;
  }
  return sums;
}

/** A curve of every column: values[level * columns + column]. */
export type CurveSampler = (levelEv: number, temperatureK: number, out: Float64Array) => void;

/** Nodes that a level splits: all before `first` count fully, those up to `last` by `part`, none beyond. */
interface SplitNodes {
  readonly first: number;
  readonly last: number;
  readonly part: (node: number) => number;
}

/** At T = 0 a node counts by the part of its hat (one step to either side) that lies below the level. */
function splitNodes(axis: NodeAxis, levelEv: number, temperatureK: number): SplitNodes {
  const scale = temperatureK > 0 ? temperatureK * boltzmannEvPerK : 0;
  const centre = (levelEv - axis.startEv) / axis.stepEv;
  const reach = scale > 0 ? (scale * fermiReach) / axis.stepEv : 1;
  return {
    first: Math.min(axis.count, Math.max(0, Math.ceil(centre - reach))),
    last: Math.min(axis.count - 1, Math.floor(centre + reach)),
    part: (node) => (scale > 0 ? fermi(((node - centre) * axis.stepEv) / scale) : hatBelow(centre - node)),
  };
}

/** Occupied weight at any level and temperature: sum_i weight_i f(E_i - mu); of a split hat at T = 0 the part below. */
export function occupiedWeight(weights: NodeWeights): CurveSampler {
  const { axis, columns, nodes } = weights;
  const sums = runningSums(weights);
  return (levelEv, temperatureK, out) => {
    const { first, last, part } = splitNodes(axis, levelEv, temperatureK);
    for (let c = 0; c < columns; c++) out[c] = sums[first * columns + c];
    for (let i = first; i <= last; i++) {
      const filled = part(i);
      for (let c = 0, at = i * columns; c < columns; c++, at++) out[c] += filled * nodes[at];
    }
  };
}

/** What every node's weight counts for in `occupiedWeight` at one level and temperature, 0 to 1; the base counts fully. */
export function occupiedParts(axis: NodeAxis, levelEv: number, temperatureK: number): Float64Array {
  const { first, last, part } = splitNodes(axis, levelEv, temperatureK);
  const parts = new Float64Array(axis.count);
  parts.fill(1, 0, first);
  for (let i = first; i <= last; i++) parts[i] = part(i);
  return parts;
}

/** A way to read curves off weights on nodes: linear in the weights. */
export interface Reading {
  readonly read: (weights: NodeWeights) => CurveSampler;
  /** Factor for what was read at `warmK` to stand for `askedK`, where weights are too rough to be read colder. */
  readonly warmed: (askedK: number, warmK: number) => number;
  /** The most by which the reading can err where the occupied weight is unsure by 1 at every level, and smooth over `detailEv`. */
  readonly gain: (temperatureK: number, detailEv: number) => number;
}

/** Reads occupied weight: the curves of responses. */
export const occupiedReading: Reading = { read: occupiedWeight, warmed: () => 1, gain: () => 1 };

/** Reads weight per eV; `resolutionEv` as of weightDensity. */
export const densityReading = (resolutionEv: number): Reading => ({
  read: (weights) => weightDensity(weights, resolutionEv),
  warmed: () => 1,
  // The integral of the magnitude of the kernel's slope: twice the height of -df/dE, or of the hat.
  gain: (temperatureK, detailEv) =>
    1 / Math.max(detailEv, temperatureK > 0 ? 2 * temperatureK * boltzmannEvPerK : resolutionEv / 2),
});

/** Part of a unit hat centred at 0 that lies below x, -1 <= x <= 1. */
const hatBelow = (x: number): number => (x < 0 ? (1 + x) ** 2 / 2 : 1 - (1 - x) ** 2 / 2);

/** Weight per eV at the level, broadened by -df/dE, or at T = 0 by a hat of half width `resolutionEv`. */
export function weightDensity(weights: NodeWeights, resolutionEv: number): CurveSampler {
  const { axis, columns, nodes } = weights;
  return (levelEv, temperatureK, out) => {
    const scale = temperatureK > 0 ? temperatureK * boltzmannEvPerK : Math.max(resolutionEv, axis.stepEv);
    const centre = (levelEv - axis.startEv) / axis.stepEv;
    const reach = ((temperatureK > 0 ? fermiReach : 1) * scale) / axis.stepEv;
    const first = Math.max(0, Math.ceil(centre - reach));
    const last = Math.min(axis.count - 1, Math.floor(centre + reach));
    out.fill(0);
    for (let i = first; i <= last; i++) {
      const x = ((i - centre) * axis.stepEv) / scale;
      const part = (temperatureK > 0 ? fermiSlope(x) : 1 - Math.abs(x)) / scale;
      for (let c = 0, at = i * columns; c < columns; c++, at++) out[c] += part * nodes[at];
    }
  };
}

/** [temperature][level][column] of a sampler on the asked levels. */
export function sampleCurves(sampler: CurveSampler, axis: LevelAxis, columns: number): Float64Array[][] {
  return axis.temperaturesK.map((temperatureK) =>
    Array.from(axis.levelsEv, (levelEv) => {
      const out = new Float64Array(columns);
      sampler(levelEv, temperatureK, out);
      return out;
    }),
  );
}

/** T = 0 of the plain mesh sum: exact steps. `steps` is [level][column]. */
export function steppedWeight(base: Float64Array, steps: Float64Array, columns: number): Float64Array[] {
  const running = base.slice();
  return Array.from({ length: steps.length / columns }, (_, level) => {
    for (let c = 0; c < columns; c++) running[c] += steps[level * columns + c];
    return running.slice();
  });
}
