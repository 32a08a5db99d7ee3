// axis.ts: the energy axis of a spectrum: asked levels, temperatures, and the fine nodes on which weight is kept.
import { boltzmannEvPerK } from "../base/constants.js";
import { usageFault } from "../base/errors.js";

/** Beyond this many kT a Fermi factor is 0 or 1 to double precision. */
export const fermiReach = 38;
/** Nodes per kT, which makes 12-point anterpolation of a Fermi factor good to 1e-12. */
const nodesPerThermalEnergy = 8;
/** Nodes per level step where zero temperature is asked: the stated energy resolution of `cells` and `refine`. */
const nodesPerLevel = 4;
const mostNodes = 200_000;
/** A single level is resolved at 0 K as if its neighbours were this far away. */
const singleLevelStepEv = 0.001;

/** Uniform nodes in absolute energy (eV). */
export interface NodeAxis {
  readonly startEv: number;
  readonly stepEv: number;
  readonly count: number;
}

export interface LevelAxis {
  /** Absolute energies of the asked levels, uniform. */
  readonly levelsEv: Float64Array;
  /** Temperatures in kelvin; 0 is the step. */
  readonly temperaturesK: readonly number[];
  /** Nodes; every level lies on one: level i is node firstLevelNode + i * nodesPerLevel. */
  readonly nodes: NodeAxis;
  readonly firstLevelNode: number;
  readonly nodesPerLevel: number;
}

/** The window asked for, absolute. */
export interface Window {
  readonly fromEv: number;
  readonly toEv: number;
  readonly points: number;
}

/** Energy of node i. */
export const nodeEv = (axis: NodeAxis, i: number): number => axis.startEv + i * axis.stepEv;

/**
 * Chooses nodes so fine that the lowest temperature is resolved, and so wide that the highest one is covered.
 * `leastMarginEv` is kept free beyond the window at least. Throws a usage Fault when the window and the lowest temperature together ask for too many nodes.
 */
export function planAxis(window: Window, temperaturesK: readonly number[], leastMarginEv = 0): LevelAxis {
  const { fromEv, toEv, points } = window;
  const single = points === 1;
  const levelStep = single ? singleLevelStepEv : (toEv - fromEv) / (points - 1);
  const warm = temperaturesK.filter((t) => t > 0).map((t) => t * boltzmannEvPerK);
  const lowest = warm.length > 0 ? Math.min(...warm) : Number.POSITIVE_INFINITY;
  const cold = warm.length < temperaturesK.length;
  const finest = Math.min(levelStep / (cold ? nodesPerLevel : 1), lowest / nodesPerThermalEnergy);
  const perLevel = Math.ceil(levelStep / finest - 1e-9);
  const stepEv = levelStep / perLevel;
  const reach = warm.length > 0 ? Math.max(...warm) * fermiReach : 0;
  const margin = Math.ceil(Math.max(reach, 2 * levelStep, leastMarginEv) / stepEv) + 8;
  const count = (points - 1) * perLevel + 1 + 2 * margin;
  if (count > mostNodes)
    throw usageFault(
      `${points} levels over ${(toEv - fromEv).toFixed(3)} eV at ${Math.min(...temperaturesK)} to ${Math.max(...temperaturesK)} K need ${count} energy nodes, more than ${mostNodes}`,
      "Narrow --from/--to, ask for fewer levels, or ask for the lowest and the highest temperatures in sweeps of their own.",
    );
  return {
    levelsEv: Float64Array.from({ length: points }, (_, i) => fromEv + i * levelStep),
    temperaturesK,
    nodes: { startEv: fromEv - margin * stepEv, stepEv, count },
    firstLevelNode: margin,
    nodesPerLevel: perLevel,
  };
}

/** Longest axis on which error bars are kept: they need no fine structure. */
const mostErrorNodes = 1200;

/** A coarser copy of the nodes for spreads over sub-meshes: step a multiple of the fine one, levels not necessarily on nodes. */
export function coarseNodes(axis: LevelAxis): NodeAxis {
  const { startEv, stepEv, count } = axis.nodes;
  const multiple = Math.max(1, Math.ceil(count / mostErrorNodes));
  return { startEv, stepEv: stepEv * multiple, count: Math.ceil(count / multiple) + 1 };
}

/** Longest axis on which boxes and their halves are compared. */
const mostIndicatorNodes = 128;

/** A still coarser copy, for judging single cells: features below it average out between cells. */
export function indicatorNodes(axis: LevelAxis): NodeAxis {
  const { startEv, stepEv, count } = axis.nodes;
  const multiple = Math.max(1, Math.ceil(count / mostIndicatorNodes));
  return { startEv, stepEv: stepEv * multiple, count: Math.ceil(count / multiple) + 1 };
}
