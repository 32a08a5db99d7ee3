// assemble.ts: summed spectra -> tables of value, error, electrons and density of states on the asked levels and temperatures.
import { coarseNodes, type LevelAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { type CurveSampler, occupiedWeight, sampleCurves, steppedWeight, weightDensity } from "./occupation.js";
import type { Table } from "./result.js";
import { spreadSampler } from "./spread.js";

/** What is known of the spectra besides their numbers. */
export interface SpectraFacts {
  readonly axis: LevelAxis;
  /** Responses, and last the count of states. */
  readonly columns: number;
  /** Stored points: spectra are sums over them and are divided by it. */
  readonly points: number;
  readonly electronsPerBand: 1 | 2;
  readonly dimension: 2 | 3;
  readonly subMeshes: { readonly stride: number; readonly count: number } | undefined;
}

/** Curves of all columns: [temperature][level][column], zone means. */
export type ColumnCurves = Float64Array[][];

const scaledCurves = (curves: ColumnCurves, factor: number): ColumnCurves =>
  curves.map((rows) => rows.map((row) => row.map((value) => value * factor)));

/** Zone means of the occupied weight of one named spectrum. The plain mesh sum at T = 0 uses its exact steps. */
export function occupiedCurves(sections: Sections, name: string, facts: SpectraFacts): ColumnCurves {
  const { axis, columns, points } = facts;
  const base = sections[`${name}.base`];
  const sampler = occupiedWeight({ axis: axis.nodes, columns, base, nodes: sections[`${name}.nodes`] });
  const curves = sampleCurves(sampler, axis, columns);
  const steps = sections[`${name}.steps`];
  if (steps !== undefined)
    for (const [t, temperature] of axis.temperaturesK.entries())
      if (temperature === 0) curves[t] = steppedWeight(base, steps, columns);
  return scaledCurves(curves, 1 / points);
}

/** States per eV and cell: [temperature][level]. */
export function densityOfStates(sections: Sections, name: string, facts: SpectraFacts): Table {
  const { axis, columns, points, electronsPerBand } = facts;
  const levelStep = axis.nodesPerLevel * axis.nodes.stepEv;
  const last = columns - 1;
  const weights = {
    axis: axis.nodes,
    columns,
    base: sections[`${name}.base`],
    nodes: sections[`${name}.nodes`],
  };
  const smooth = sampleCurves(weightDensity(weights, levelStep), axis, columns);
  const steps = sections[`${name}.steps`];
  return axis.temperaturesK.map((temperature, t) =>
    smooth[t].map((row, level) => {
      const exact = temperature === 0 && steps !== undefined && axis.levelsEv.length > 1;
      const perEv = exact ? steps[Math.max(1, level) * columns + last] / levelStep : row[last];
      return (perEv * electronsPerBand) / points;
    }),
  );
}

/** Error bars of all columns from the contained sub-meshes; NaN where the mesh contains none. */
export function spreadCurves(sections: Sections, name: string, facts: SpectraFacts): ColumnCurves {
  const { axis, columns, points, subMeshes } = facts;
  if (subMeshes === undefined)
    return axis.temperaturesK.map(() => Array.from(axis.levelsEv, () => new Float64Array(columns).fill(Number.NaN)));
  const nodes = coarseNodes(axis);
  const perSub = subMeshes.count / points;
  const samplers = Array.from({ length: subMeshes.count }, (_, i): CurveSampler => {
    const sampler = occupiedWeight({
      axis: nodes,
      columns,
      base: sections[`${name}.sub${i}.base`],
      nodes: sections[`${name}.sub${i}.nodes`],
    });
    return (levelEv, temperatureK, out) => {
      sampler(levelEv, temperatureK, out);
      for (let c = 0; c < columns; c++) out[c] *= perSub;
    };
  });
  const spread = spreadSampler({ stride: subMeshes.stride, dimension: facts.dimension, samplers }, columns);
  return sampleCurves(spread, axis, columns);
}

/** One column of the curves times a factor. */
export const columnTable = (curves: ColumnCurves, column: number, factor: number): Table =>
  curves.map((rows) => rows.map((row) => row[column] * factor));
