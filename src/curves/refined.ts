// refined.ts: error bars of a refined sweep: what sampling left undecided, and what the local models got wrong.
import { boltzmannEvPerK } from "../base/constants.js";
import type { HessianKind } from "../grid/grid.js";
import { coarseNodes, indicatorNodes, type LevelAxis, type NodeAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { type ColumnCurves, densityOfStates, type SpectraFacts } from "./assemble.js";
import { type CurveSampler, occupiedWeight, sampleCurves } from "./occupation.js";
import type { Table } from "./result.js";

/**
 * Once the neighbours have corrected the local models, their error falls like the fourth power of a fine mesh step; on the meshes
 * that people store it falls more slowly. Calibrated on random crystals so that two bars hold about 95 times in 100.
 */
const modelOrder = 3.4;
/** Without second derivatives the models are of lower order. */
const lowerOrder = 2;
/** From this many bands below the top on, sums over bands cut from plane waves are not to be trusted. */
const untrustedBands = 2;
/** Families let pass disagree alike where the crystal's symmetry makes them alike; calibrated likewise. */
const likeness = 1.5;
/** Where no sub-mesh shows how the error falls: the part of the neighbour defect that may remain. */
const remainingDefect = 0.1;
/** Never claim to know the defect itself better than this. */
const leastDefect = 0.01;
/** Levels over which an error is averaged: a difference that passes through zero does not mean certainty. */
const neighbouringLevels = 9;

/** What the refinement left behind, besides its sections. */
export interface RefinedFacts extends SpectraFacts {
  /** Energy that the mesh resolves, eV; see engine/mesh-step. */
  readonly regularEv: number;
  readonly hessian: HessianKind;
  readonly bands: number;
}

/** Standard error bars by cause, zone means: [temperature][level][column]. */
export interface RefinedErrors {
  readonly sampling: ColumnCurves;
  readonly model: ColumnCurves;
}

/** The defect is known at stored points alone: below this part of the energy that the mesh resolves it is not followed. */
const defectDetail = 1 / 12;

/**
 * Occupied weight of a refined mesh: the trees of cells at the asked temperature, and the neighbour defect at no less than the
 * temperature whose kT the mesh can follow (`detailEv`), so that a cold curve keeps no steps from single points.
 */
function refinedSampler(
  sections: Sections,
  name: string,
  axis: NodeAxis,
  columns: number,
  detailEv: number,
): CurveSampler {
  const trees = samplerOf(sections, name, axis, columns);
  const defect = samplerOf(sections, `${name}.defect`, axis, columns);
  const part = new Float64Array(columns);
  return (levelEv, temperatureK, out) => {
    trees(levelEv, temperatureK, out);
    defect(levelEv, Math.max(temperatureK, detailEv / boltzmannEvPerK), part);
    for (let c = 0; c < columns; c++) out[c] += part[c];
  };
}

/** Curves of all columns, zone means. */
export function refinedCurves(sections: Sections, facts: RefinedFacts): ColumnCurves {
  const { axis, columns, points } = facts;
  const sampler = refinedSampler(sections, "refine", axis.nodes, columns, facts.regularEv * defectDetail);
  return sampleCurves(
    (levelEv, temperatureK, out) => {
      sampler(levelEv, temperatureK, out);
      for (let c = 0; c < columns; c++) out[c] /= points;
    },
    axis,
    columns,
  );
}

/**
 * States per eV and cell, [temperature][level]: the slope of the electrons of `refinedCurves` at the resolution of the levels, the
 * neighbour defect included and blurred alike.
 */
export function refinedStates(sections: Sections, facts: RefinedFacts): Table {
  const coldestK = (facts.regularEv * defectDetail) / boltzmannEvPerK;
  const temperaturesK = facts.axis.temperaturesK.map((temperatureK) => Math.max(temperatureK, coldestK));
  const trees = densityOfStates(sections, "refine", facts);
  const defect = densityOfStates(sections, "refine.defect", { ...facts, axis: { ...facts.axis, temperaturesK } });
  return trees.map((row, t) => row.map((perEv, level) => perEv + defect[t][level]));
}

type Squares = (levelEv: number, temperatureK: number, out: Float64Array) => void;

/** Root mean square of a quantity's square over levels within `halfWidthEv`. */
function averaged(
  squares: Squares,
  columns: number,
  axis: LevelAxis,
  halfWidthEv: (temperatureK: number) => number,
): ColumnCurves {
  const { startEv, stepEv, count } = axis.nodes;
  const [low, high] = [startEv, startEv + (count - 1) * stepEv];
  const out = new Float64Array(columns);
  return axis.temperaturesK.map((temperatureK) =>
    Array.from(axis.levelsEv, (levelEv) => {
      const mean = new Float64Array(columns);
      for (let i = 0; i < neighbouringLevels; i++) {
        const offset = ((2 * i) / (neighbouringLevels - 1) - 1) * halfWidthEv(temperatureK);
        squares(Math.min(high, Math.max(low, levelEv + offset)), temperatureK, out);
        for (let c = 0; c < columns; c++) mean[c] += out[c] / neighbouringLevels;
      }
      return mean.map(Math.sqrt);
    }),
  );
}

/** Families that were let pass disagree by amounts of random sign: the root of the sum of their squares. */
function samplingSquares(sections: Sections, axis: NodeAxis, columns: number): Squares {
  const squares = sections["refine.square"];
  return (levelEv, _temperatureK, out) => {
    const position = Math.min(axis.count - 1.001, Math.max(0, (levelEv - axis.startEv) / axis.stepEv));
    const node = Math.floor(position);
    const part = position - node;
    for (let c = 0; c < columns; c++)
      out[c] = likeness ** 2 * ((1 - part) * squares[node * columns + c] + part * squares[(node + 1) * columns + c]);
  };
}

function samplerOf(sections: Sections, name: string, axis: NodeAxis, columns: number): CurveSampler {
  return occupiedWeight({ axis, columns, base: sections[`${name}.base`], nodes: sections[`${name}.nodes`] });
}

/**
 * What the models got wrong and the neighbours did not mend: the difference to the same calculation on a contained mesh of
 * `stride` times the step, scaled by 1 / (stride^3 - 1); without such a mesh a part of the neighbour defect.
 */
function modelSquares(sections: Sections, facts: RefinedFacts): Squares {
  const { axis, columns, points, subMeshes } = facts;
  const nodes = coarseNodes(axis);
  const defect = samplerOf(sections, "refine.defect", axis.nodes, columns);
  const wrong = new Float64Array(columns);
  if (subMeshes === undefined)
    return (levelEv, temperatureK, out) => {
      defect(levelEv, temperatureK, wrong);
      for (let c = 0; c < columns; c++) out[c] = ((remainingDefect * wrong[c]) / points) ** 2;
    };
  const detail = facts.regularEv * defectDetail;
  const fine = refinedSampler(sections, "refine", axis.nodes, columns, detail);
  const coarse = refinedSampler(sections, "coarse", nodes, columns, detail * subMeshes.stride);
  const ofFine = new Float64Array(columns);
  const ofCoarse = new Float64Array(columns);
  const scale = 1 / (subMeshes.stride ** (facts.hessian === "none" ? lowerOrder : modelOrder) - 1);
  return (levelEv, temperatureK, out) => {
    fine(levelEv, temperatureK, ofFine);
    coarse(levelEv, temperatureK, ofCoarse);
    defect(levelEv, temperatureK, wrong);
    for (let c = 0; c < columns; c++) {
      const difference = ofFine[c] / points - (ofCoarse[c] * subMeshes.count) / points;
      out[c] = (scale * difference) ** 2 + ((leastDefect * wrong[c]) / points) ** 2;
    }
  };
}

/** Doubles the bars where the level is near the top of bands that were cut from plane waves; in place. */
function widenNearTop(errors: ColumnCurves, curves: ColumnCurves, { hessian, bands, columns }: RefinedFacts): void {
  if (hessian !== "free-electron") return;
  for (const [t, rows] of errors.entries())
    for (const [level, row] of rows.entries())
      if (curves[t][level][columns - 1] > bands - untrustedBands) for (let c = 0; c < columns; c++) row[c] *= 2;
}

/** Error bars of all columns. */
export function refinedErrors(sections: Sections, facts: RefinedFacts, curves: ColumnCurves): RefinedErrors {
  const { axis, columns } = facts;
  const warmth = (temperatureK: number): number => 2 * boltzmannEvPerK * temperatureK;
  const sampling = averaged(samplingSquares(sections, indicatorNodes(axis), columns), columns, axis, warmth);
  const model = averaged(modelSquares(sections, facts), columns, axis, (t) => Math.max(facts.regularEv / 4, warmth(t)));
  widenNearTop(model, curves, facts);
  return { sampling, model };
}
