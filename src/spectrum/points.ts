// points.ts: deposits of the plain mesh sum: exact steps at the asked levels, and exact Fermi factors through anterpolation.
import type { LevelAxis, NodeAxis } from "./axis.js";

/** Nodes over which a point's weight is anterpolated; with 8 nodes per kT a Fermi factor is reproduced to 1e-12. */
const stencil = 12;

export interface PointStore {
  readonly axis: LevelAxis;
  readonly columns: number;
  /** [column]: weight below the axis, which counts at every level and temperature. */
  readonly base: Float64Array;
  /** [level][column]: weight of energies up to the level and above the level before it. */
  readonly steps: Float64Array;
  /** [node][column]: anterpolated weight. */
  readonly nodes: Float64Array;
}

/** An empty store; owns its memory. */
export function createPointStore(axis: LevelAxis, columns: number): PointStore {
  return {
    axis,
    columns,
    base: new Float64Array(columns),
    steps: new Float64Array(axis.levelsEv.length * columns),
    nodes: new Float64Array(axis.nodes.count * columns),
  };
}

/** Products of the distances of a stencil's nodes from each other: the denominators of Lagrange's weights. */
const denominators = Float64Array.from({ length: stencil }, (_, j) => {
  let product = 1;
  for (let i = 0; i < stencil; i++) if (i !== j) product *= j - i;
  return product;
});

/** Lagrange weights at `part` in [0, 1) between the two middle nodes. */
function lagrange(part: number, out: Float64Array): void {
  const position = stencil / 2 - 1 + part;
  let product = 1;
  for (let i = 0; i < stencil; i++) {
    const distance = position - i;
    if (distance === 0) {
      out.fill(0);
      out[i] = 1;
      return;
    }
    product *= distance;
  }
  for (let j = 0; j < stencil; j++) out[j] = product / ((position - j) * denominators[j]);
}

/** Deposits values[column] at one energy. `energy <= level` counts as filled at T = 0. */
export type PointDeposit = (energyEv: number, values: Float64Array) => void;

/** The deposit function of a store; allocates nothing per call. */
export function createPointDeposit(store: PointStore): PointDeposit {
  const { axis, columns, base, steps, nodes } = store;
  const { levelsEv } = axis;
  const weights = new Float64Array(stencil);
  const { startEv, stepEv, count } = axis.nodes;
  const smooth = axis.levelsEv.length === 1 || axis.temperaturesK.some((t) => t > 0);
  const levelStep = axis.nodesPerLevel * stepEv;
  return (energyEv, values) => {
    const position = (energyEv - startEv) / stepEv;
    const node = Math.floor(position);
    if (node >= count - stencil / 2) return;
    if (node < stencil / 2 - 1) {
      for (let c = 0; c < columns; c++) base[c] += values[c];
      return;
    }
    if (smooth) {
      lagrange(position - node, weights);
      let at = (node - stencil / 2 + 1) * columns;
      for (let j = 0; j < stencil; j++) for (let c = 0; c < columns; c++) nodes[at++] += weights[j] * values[c];
    }
    let level = Math.max(0, Math.ceil((energyEv - levelsEv[0]) / levelStep - 1e-6));
    if (level > 0 && energyEv <= levelsEv[Math.min(level, levelsEv.length) - 1]) level--;
    while (level < levelsEv.length && energyEv > levelsEv[level]) level++;
    if (level >= levelsEv.length) return;
    for (let c = 0; c < columns; c++) steps[level * columns + c] += values[c];
  };
}

/**
 * The other way round: what weight deposited at an energy counts for where every node counts for parts[node] and the base for 1, so that the sum of
 * a deposit's reading is the reading of the sum.
 */
export function createPointReader(axis: NodeAxis, parts: Float64Array): (energyEv: number) => number {
  const weights = new Float64Array(stencil);
  const { startEv, stepEv, count } = axis;
  return (energyEv) => {
    const position = (energyEv - startEv) / stepEv;
    const node = Math.floor(position);
    if (node >= count - stencil / 2) return 0;
    if (node < stencil / 2 - 1) return 1;
    lagrange(position - node, weights);
    let sum = 0;
    for (let j = 0, at = node - stencil / 2 + 1; j < stencil; j++, at++) sum += weights[j] * parts[at];
    return sum;
  };
}
