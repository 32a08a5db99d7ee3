// sweep-spectrum.ts: which spectra does the result of a sweep carry along, so that it can be read at other temperatures?
import { resolutionOf } from "../curves/assemble.js";
import { defectDetail } from "../curves/refined.js";
import { mostPackedNumbers, packWeights, type SpectrumBlock } from "../curves/spectrum-block.js";
import { columnCount } from "../engine/columns.js";
import { type Computed, type SweepPlan, unitOf } from "./sweep-plan.js";

/** The responses' columns and the states' of the first `rows` of [row][column]; boxes keep one node more than is read. */
function keptColumns(all: Float64Array, rows: number, columns: number, kept: readonly number[]): Float64Array {
  return Float64Array.from(
    { length: rows * kept.length },
    (_, at) => all[Math.floor(at / kept.length) * columns + kept[at % kept.length]],
  );
}

/** The spectra behind the curves of a sweep; undefined where they are too large to be carried along, or there is a single level. */
export function spectrumBlock(
  { job, facts, options, regularEv }: SweepPlan,
  { sections, refined }: Computed,
): SpectrumBlock | undefined {
  const { axis, plan, method } = job;
  const columns = columnCount(plan);
  const kept = [...plan.columns.keys(), columns - 1];
  const each = (axis.nodes.count + 1) * kept.length;
  const named = refined === undefined ? [method] : ["refine", "refine.defect"];
  if (named.length * each > mostPackedNumbers || axis.levelsEv.length < 2) return undefined;
  const packed = (name: string): string =>
    packWeights(
      keptColumns(sections[`${name}.base`], 1, columns, kept),
      keptColumns(sections[`${name}.nodes`], axis.nodes.count, columns, kept),
    );
  const besides = method !== "points" && (named.length + 1) * each <= mostPackedNumbers;
  const { startEv, stepEv, count } = axis.nodes;
  const factors = [
    ...plan.columns.map(({ carrier }) => unitOf(carrier, facts, options).factor),
    facts.electronsPerBand,
  ];
  return {
    start_eV: startEv,
    step_eV: stepEv,
    count,
    resolution_eV: resolutionOf(axis),
    warm_eV: refined === undefined ? 0 : regularEv * defectDetail,
    columns: [...plan.columns.map(({ name }) => name), "states"],
    factor: factors.map((factor) => factor / facts.points),
    weights: packed(named[0]),
    ...(refined === undefined ? {} : { correction: packed(named[1]) }),
    ...(besides ? { points: packed("points") } : {}),
  };
}
