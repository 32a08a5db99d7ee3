// equations.ts: what must hold along a line of the mesh between stored energies, velocities, moments and second derivatives?
import type { Triple } from "../grid/grid.js";
import type { HealthLine, HealthPoint } from "./lines.js";
import { differenceOf, meanDerivative, reachOf } from "./stencil.js";
import {
  alongStep,
  below,
  bump,
  dividedDifferences,
  everything,
  pairTrace,
  sandwich,
  type Window,
  weightedTrace,
} from "./windows.js";

/** What an equation belongs to: the band at its centre (none for the trace over all bands), and how many bands its window holds. */
interface Place {
  readonly band: number | undefined;
  readonly energyEv: number;
  readonly states: number;
  /** How far the window lies below the highest band, in its widths; bands that are missing above change what is nearer than about 2. */
  readonly depth: number;
}

/** Change of the energies per step, against step . sum phi_n v_nn. All in eV. */
export interface SlopeEquation extends Place {
  readonly change: number;
  readonly error: number;
  readonly step: Triple;
  readonly velocity: Triple;
}

/** Change of sum phi_n <n|v_axis|n> per step, against its parts from d2H and from pairs of bands, eV angstrom. */
export interface BendEquation extends Place {
  readonly change: number;
  readonly error: number;
  readonly axis: number;
  readonly step: Triple;
  /** sum phi_n <n|d2H|n> of the pairs xx, yy, zz, yz, zx, xy. */
  readonly seconds: readonly number[];
  readonly pairs: number;
  /** What is left of the equation when it is set up to fourth order instead of sixth; NaN on short lines. */
  readonly coarse: number;
}

/** Change of Tr phi A phi A (less Tr phi^2 A^2 of a moment) per step, A a moment or the velocity, against what the stored matrices say, and with A's partner transposed. */
export interface BondEquation {
  readonly array: string;
  readonly change: number;
  readonly error: number;
  readonly stored: number;
  readonly mirrored: number;
}

/** The equations of all lines looked at. */
export interface Equations {
  readonly slopes: SlopeEquation[];
  readonly bends: BendEquation[];
  readonly bonds: BondEquation[];
}

export const noEquations = (): Equations => ({ slopes: [], bends: [], bonds: [] });

/** Place of d2H / dk_a dk_b among xx, yy, zz, yz, zx, xy. */
export const pairIndex = (a: number, b: number): number => (a === b ? a : 6 - a - b);

/** Bands of a line that get a window of their own: at most this many, evenly spread. */
const mostBands = 12;

/** Root mean square change of the energies from point to point of a line, eV. */
export function stepEv({ points }: HealthLine): number {
  let sum = 0;
  let count = 0;
  for (let i = 1; i < points.length; i++)
    for (const [band, energy] of points[i].energyEv.entries()) {
      sum += (energy - points[i - 1].energyEv[band]) ** 2;
      count++;
    }
  return Math.sqrt(sum / Math.max(1, count));
}

interface Prepared {
  readonly point: HealthPoint;
  /** step . v */
  readonly along: Float64Array;
  /** sum_a step_a d2H_(a, axis), by axis; undefined where none is stored. */
  readonly second: readonly Float64Array[] | undefined;
}

function prepared(line: HealthLine): Prepared[] {
  return line.points.map((point) => {
    const { hessian } = point;
    const second =
      hessian &&
      [0, 1, 2].map((axis) =>
        alongStep(
          line.step,
          [0, 1, 2].map((a) => hessian[pairIndex(a, axis)]),
        ),
      );
    return { point, along: alongStep(line.step, point.velocity), second };
  });
}

/** What the equations of a line may use. */
export interface EquationFacts {
  readonly periodic: 2 | 3;
  /** d2H of a free electron, hbar^2/m delta_ab, eV angstrom^2; 0 where it is an array or not given. */
  readonly freeElectron: number;
}

/** Adds the equations of one line. */
export function addEquations(line: HealthLine, facts: EquationFacts, out: Equations): void {
  const reach = reachOf(line.points.length);
  const points = prepared(line);
  const widthEv = Math.max(1.5 * stepEv(line), 1e-6);
  for (let at = reach; at < points.length - reach; at += reach) {
    const near = points.slice(at - reach, at + reach + 1);
    const energies = near[reach].point.energyEv;
    const windows: [Window, number | undefined][] = bandsOf(energies).map((band) => [
      bump(energies[band], widthEv),
      band,
    ]);
    for (const [window, band] of [...windows, [everything, undefined] as const])
      addBandEquations(near, line, window, { band, widthEv }, facts, out);
    addBondEquations(near, widthEv, out);
  }
}

function bandsOf({ length }: Float64Array): number[] {
  const stride = Math.ceil(length / mostBands);
  return Array.from({ length: Math.ceil(length / stride) }, (_, i) => i * stride);
}

function addBandEquations(
  near: readonly Prepared[],
  line: HealthLine,
  window: Window,
  { band, widthEv }: { readonly band: number | undefined; readonly widthEv: number },
  facts: EquationFacts,
  out: Equations,
): void {
  const middle = (near.length - 1) / 2;
  const reach = middle === 2 ? 2 : 1;
  const weights = near.map(({ point }) => Float64Array.from(point.energyEv, window.weight));
  const heights = near.map(({ point }) => point.energyEv.reduce((sum, e) => sum + window.primitive(e), 0));
  const own = near[middle].point.energyEv;
  const states = weights[middle].reduce((sum, w) => sum + w, 0);
  const energyEv = band === undefined ? own[own.length - 1] : own[band];
  const place: Place = { band, energyEv, states, depth: (cutOf(near) - energyEv) / widthEv };
  const sums = near.map(({ point }, i) => point.velocity.map((v) => weightedTrace(weights[i], v)));
  const mean = (values: readonly number[]): number => meanDerivative(values, middle, reach);
  const { value, error } = differenceOf(heights, middle, reach);
  const velocity = [0, 1, 2].map((axis) => mean(sums.map((s) => s[axis]))) as unknown as Triple;
  out.slopes.push({ ...place, change: value, error, step: line.step, velocity });
  if (near[middle].second === undefined && facts.freeElectron === 0) return;
  const divided = near.map(({ point }) => dividedDifferences(window, point.energyEv));
  const traces = near.map(({ point: { hessian } }, i) =>
    [0, 1, 2, 3, 4, 5].map((pair) => secondTrace(weights[i], hessian?.[pair], pair, facts.freeElectron)),
  );
  const seconds = [0, 1, 2, 3, 4, 5].map((pair) => mean(traces.map((trace) => trace[pair])));
  for (let axis = 0; axis < facts.periodic; axis++) {
    const bend = differenceOf(
      sums.map((s) => s[axis]),
      middle,
      reach,
    );
    const parts = near.map(({ along, point }, i) => pairTrace(divided[i], along, point.velocity[axis]));
    const whole = parts.map((pair, i) =>
      line.step.reduce((sum, step, a) => sum + step * traces[i][pairIndex(a, axis)], pair),
    );
    const change = sums.map((s) => s[axis]);
    const coarse = reach === 2 ? differenceOf(change, middle, 1).value - meanDerivative(whole, middle, 1) : Number.NaN;
    const pairs = mean(parts);
    out.bends.push({ ...place, change: bend.value, error: bend.error, axis, step: line.step, seconds, pairs, coarse });
  }
}

/** sum phi_n <n|d2H|n> of one pair of axes. */
function secondTrace(weights: Float64Array, stored: Float64Array | undefined, pair: number, free: number): number {
  if (stored !== undefined) return weightedTrace(weights, stored);
  return pair < 3 ? free * weights.reduce((sum, w) => sum + w, 0) : 0;
}

/** Where bands may be missing: the lowest energy of the highest band. */
const cutOf = (near: readonly Prepared[]): number =>
  Math.min(...near.map(({ point }) => point.energyEv[point.energyEv.length - 1]));

/** One lower and one middle level of the bands at the centre, well below the cut. */
function levelsOf(near: readonly Prepared[], widthEv: number): number[] {
  const energies = near[(near.length - 1) / 2].point.energyEv;
  const highest = cutOf(near) - 2 * widthEv;
  const inside = energies.filter((energy) => energy <= highest);
  const from = inside.length > 1 ? inside : energies.subarray(0, Math.max(1, energies.length - 1));
  return [from[Math.floor(from.length / 3)], from[Math.floor((2 * from.length) / 3)]].filter(
    (level, i, all) => all.indexOf(level) === i,
  );
}

function addBondEquations(near: readonly Prepared[], widthEv: number, out: Equations): void {
  const middle = (near.length - 1) / 2;
  const reach = middle === 2 ? 2 : 1;
  for (const level of levelsOf(near, widthEv)) {
    const window = below(level, widthEv);
    const divided = near.map(({ point }) => dividedDifferences(window, point.energyEv));
    const weights = near.map(({ point }) => Float64Array.from(point.energyEv, window.weight));
    const names = [...near[middle].point.moments.keys()];
    for (const name of near[middle].second === undefined ? names : ["velocity", ...names]) {
      const readings = near.map((each, i) => bondReading(each, name, weights[i], divided[i]));
      const { value, error } = differenceOf(
        readings.map((r) => r.value),
        middle,
        reach,
      );
      const stored = meanDerivative(
        readings.map((r) => r.stored),
        middle,
        reach,
      );
      const mirrored = meanDerivative(
        readings.map((r) => r.mirrored),
        middle,
        reach,
      );
      out.bonds.push({ array: name, change: value, error, stored, mirrored });
    }
  }
}

/**
 * Tr phi A phi A - Tr phi^2 A^2 summed over components (what commutes with H gives nothing), and its change per step. Of the velocity, which itself
 * changes by d2H, Tr phi A phi A alone.
 */
function bondReading({ point, along, second }: Prepared, name: string, weights: Float64Array, divided: Float64Array) {
  const parts = name === "velocity" ? point.velocity : (point.moments.get(name) as readonly Float64Array[]);
  const total = { value: 0, stored: 0, mirrored: 0 };
  const products = pairwise(weights, (n, m) => weights[n] * weights[m]);
  for (const [axis, a] of parts.entries()) {
    const inner = sandwich(a, weights);
    const twice = divided.map((f) => 2 * f);
    if (name === "velocity") {
      const moved = pairTrace(twice, along, inner);
      const bent = (second as readonly Float64Array[])[axis];
      total.value += pairTrace(products, a, a);
      total.stored += moved + 2 * pairTrace(products, bent, a);
      total.mirrored += moved + 2 * pairTrace(products, bent, a, -1);
      continue;
    }
    const square = sandwich(a, new Float64Array(weights.length).fill(1));
    const sums = pairwise(weights, (n, m) => divided[n * weights.length + m] * (weights[n] + weights[m]));
    total.value -= pairTrace(
      pairwise(weights, (n, m) => 0.5 * (weights[n] - weights[m]) ** 2),
      a,
      a,
    );
    for (const [key, sign] of [
      ["stored", 1],
      ["mirrored", -1],
    ] as const)
      total[key] += pairTrace(twice, along, inner, sign) - pairTrace(sums, along, square, sign);
  }
  return total;
}

function pairwise({ length }: Float64Array, of: (n: number, m: number) => number): Float64Array {
  return Float64Array.from({ length: length * length }, (_, i) => of(Math.floor(i / length), i % length));
}
