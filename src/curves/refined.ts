// refined.ts: error bars of a refined sweep: what sampling left undecided, and what the local models got wrong.
import { boltzmannEvPerK } from "../base/constants.js";
import type { HessianKind } from "../grid/grid.js";
import { coarseNodes, indicatorNodes, type LevelAxis, type NodeAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import type { ColumnCurves, SpectraFacts } from "./assemble.js";
import { type CurveSampler, occupiedReading, type Reading, sampleCurves } from "./occupation.js";

/**
 * Once the neighbours have corrected the local models, their error falls like the fourth power of a fine mesh step; on the meshes
 * that people store it falls more slowly. Calibrated on random crystals so that two bars hold about 95 times in 100.
 */
const modelOrder = 3.4;
/** Without second derivatives the models are of lower order. */
const lowerOrder = 2;

/** How the error of refined values falls with the mesh step: error ~ step^order. */
export const modelOrderOf = (hessian: HessianKind): number => (hessian === "none" ? lowerOrder : modelOrder);

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

/** What is let pass, or wrong with a model, runs smoothly over this part of the energy that the mesh resolves. */
const passedDetail = 1 / 4;

/** What the refinement left behind, besides its sections. */
export interface RefinedFacts extends SpectraFacts {
  /** Energy that the mesh resolves, eV; see engine/mesh-step. */
  readonly regularEv: number;
  readonly hessian: HessianKind;
  readonly bands: number;
  /** Where patches stand in for some cells: the part of the models' error that is left, out[column] at an absolute level. */
  readonly modelShare?: (levelEv: number, out: Float64Array) => void;
}

/** Standard error bars by cause, zone means: [temperature][level][column]. */
export interface RefinedErrors {
  readonly sampling: ColumnCurves;
  readonly model: ColumnCurves;
}

/** The defect is known at stored points alone: below this part of the energy that the mesh resolves it is not followed. */
export const defectDetail = 1 / 12;

/**
 * A reading of a refined mesh: the trees of cells at the asked temperature, and the neighbour defect at no less than the
 * temperature whose kT the mesh can follow (`detailEv`), so that a cold curve keeps no steps from single points.
 */
function refinedSampler(
  sections: Sections,
  name: string,
  { axis, columns, reading }: HowRead,
  detailEv: number,
): CurveSampler {
  const trees = samplerOf(sections, name, { axis, columns, reading });
  const defect = samplerOf(sections, `${name}.defect`, { axis, columns, reading });
  const part = new Float64Array(columns);
  return (levelEv, temperatureK, out) => {
    const warmK = Math.max(temperatureK, detailEv / boltzmannEvPerK);
    trees(levelEv, temperatureK, out);
    defect(levelEv, warmK, part);
    const share = reading.warmed(temperatureK, warmK);
    for (let c = 0; c < columns; c++) out[c] += share * part[c];
  };
}

/** Curves of all columns, zone means: of occupied weight, or of another reading, of densities for one. */
export function refinedCurves(
  sections: Sections,
  facts: RefinedFacts,
  reading: Reading = occupiedReading,
): ColumnCurves {
  const { axis, columns, points } = facts;
  const how = { axis: axis.nodes, columns, reading };
  const sampler = refinedSampler(sections, "refine", how, facts.regularEv * defectDetail);
  return sampleCurves(
    (levelEv, temperatureK, out) => {
      sampler(levelEv, temperatureK, out);
      for (let c = 0; c < columns; c++) out[c] /= points;
    },
    axis,
    columns,
  );
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
function samplingSquares(sections: Sections, { axis, columns, reading }: HowRead, detailEv: number): Squares {
  const squares = sections["refine.square"];
  return (levelEv, temperatureK, out) => {
    const gain = (likeness * reading.gain(temperatureK, detailEv)) ** 2;
    const position = Math.min(axis.count - 1.001, Math.max(0, (levelEv - axis.startEv) / axis.stepEv));
    const node = Math.floor(position);
    const part = position - node;
    for (let c = 0; c < columns; c++)
      out[c] = gain * ((1 - part) * squares[node * columns + c] + part * squares[(node + 1) * columns + c]);
  };
}

/** Along which nodes, for how many columns, and what. */
interface HowRead {
  readonly axis: NodeAxis;
  readonly columns: number;
  readonly reading: Reading;
}

const samplerOf = (sections: Sections, name: string, { axis, columns, reading }: HowRead): CurveSampler =>
  reading.read({ axis, columns, base: sections[`${name}.base`], nodes: sections[`${name}.nodes`] });

/**
 * What the models got wrong and the neighbours did not mend: the difference to the same calculation on a contained mesh of
 * `stride` times the step, scaled by 1 / (stride^order - 1); without such a mesh a part of the neighbour defect.
 */
function modelSquares(sections: Sections, facts: RefinedFacts, reading: Reading): Squares {
  const { axis, columns, points, subMeshes } = facts;
  const how = { axis: axis.nodes, columns, reading };
  const defect = samplerOf(sections, "refine.defect", how);
  const wrong = new Float64Array(columns);
  if (subMeshes === undefined)
    return (levelEv, temperatureK, out) => {
      defect(levelEv, temperatureK, wrong);
      for (let c = 0; c < columns; c++) out[c] = ((remainingDefect * wrong[c]) / points) ** 2;
    };
  const detail = facts.regularEv * defectDetail;
  const { modelShare } = facts;
  const fine = refinedSampler(sections, modelShare === undefined ? "refine" : "parent", how, detail);
  const share = new Float64Array(columns).fill(1);
  const coarse = refinedSampler(sections, "coarse", { ...how, axis: coarseNodes(axis) }, detail * subMeshes.stride);
  const ofFine = new Float64Array(columns);
  const ofCoarse = new Float64Array(columns);
  const scale = 1 / (subMeshes.stride ** modelOrderOf(facts.hessian) - 1);
  return (levelEv, temperatureK, out) => {
    fine(levelEv, temperatureK, ofFine);
    coarse(levelEv, temperatureK, ofCoarse);
    defect(levelEv, temperatureK, wrong);
    modelShare?.(levelEv, share);
    for (let c = 0; c < columns; c++) {
      const difference = ofFine[c] / points - (ofCoarse[c] * subMeshes.count) / points;
      out[c] = (scale * share[c] * difference) ** 2 + ((leastDefect * wrong[c]) / points) ** 2;
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

/** Error bars of all columns of a reading; `curves` are those of occupied weight, which tell where the level stands among the bands. */
export function refinedErrors(
  sections: Sections,
  facts: RefinedFacts,
  curves: ColumnCurves,
  reading: Reading = occupiedReading,
): RefinedErrors {
  const { axis, columns } = facts;
  const warmth = (temperatureK: number): number => 2 * boltzmannEvPerK * temperatureK;
  const sampling = averaged(
    samplingSquares(sections, { axis: indicatorNodes(axis), columns, reading }, facts.regularEv * passedDetail),
    columns,
    axis,
    warmth,
  );
  const model = averaged(modelSquares(sections, facts, reading), columns, axis, (t) =>
    Math.max(facts.regularEv * passedDetail, warmth(t)),
  );
  widenNearTop(model, curves, facts);
  return { sampling, model };
}
