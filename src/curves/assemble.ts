// assemble.ts: summed spectra -> tables of value, error, electrons and density of states on the asked levels and temperatures.
import { coarseNodes, type LevelAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import {
  type CurveSampler,
  densityReading,
  occupiedReading,
  type Reading,
  sampleCurves,
  steppedWeight,
} from "./occupation.js";
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

/** Zone means read off one named spectrum. */
export function curvesRead(sections: Sections, name: string, facts: SpectraFacts, reading: Reading): ColumnCurves {
  const { axis, columns, points } = facts;
  const [base, nodes] = [sections[`${name}.base`], sections[`${name}.nodes`]];
  const sampler = reading.read({ axis: axis.nodes, columns, base, nodes });
  return scaledCurves(sampleCurves(sampler, axis, columns), 1 / points);
}

/** Zone means of the occupied weight of one named spectrum. The plain mesh sum at T = 0 uses its exact steps. */
export function occupiedCurves(sections: Sections, name: string, facts: SpectraFacts): ColumnCurves {
  const { axis, columns, points } = facts;
  const curves = curvesRead(sections, name, facts, occupiedReading);
  const steps = sections[`${name}.steps`];
  if (steps !== undefined)
    for (const [t, temperature] of axis.temperaturesK.entries())
      if (temperature === 0) {
        const stepped = steppedWeight(sections[`${name}.base`], steps, columns);
        curves[t] = stepped.map((row) => row.map((value) => value / points));
      }
  return curves;
}

/** Energy over which densities at 0 K are taken: the step of the levels. */
export const resolutionOf = (axis: LevelAxis): number => axis.nodesPerLevel * axis.nodes.stepEv;

/** Weight per eV of one named spectrum, zone means. The plain mesh sum at T = 0 uses its exact steps. */
export function densityCurves(sections: Sections, name: string, facts: SpectraFacts): ColumnCurves {
  const { axis, columns, points } = facts;
  const levelStep = resolutionOf(axis);
  const curves = curvesRead(sections, name, facts, densityReading(levelStep));
  const steps = sections[`${name}.steps`];
  if (steps === undefined || axis.levelsEv.length === 1) return curves;
  return axis.temperaturesK.map((temperature, t) =>
    temperature > 0
      ? curves[t]
      : curves[t].map((_, level) => {
          const at = Math.max(1, level) * columns;
          return steps.slice(at, at + columns).map((value) => value / (levelStep * points));
        }),
  );
}

/** Error bars of all columns from the contained sub-meshes; NaN where the mesh contains none. */
export function spreadCurves(
  sections: Sections,
  name: string,
  facts: SpectraFacts,
  reading: Reading = occupiedReading,
): ColumnCurves {
  const { axis, columns, points, subMeshes } = facts;
  if (subMeshes === undefined)
    return axis.temperaturesK.map(() => Array.from(axis.levelsEv, () => new Float64Array(columns).fill(Number.NaN)));
  const nodes = coarseNodes(axis);
  const perSub = subMeshes.count / points;
  const samplers = Array.from({ length: subMeshes.count }, (_, i): CurveSampler => {
    const sampler = reading.read({
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
