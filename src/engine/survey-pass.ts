// survey-pass.ts: the first of the two passes of a refined sweep: the plain mesh sum, and how large each response is at all.
import { createPairPass } from "../kernel/pair.js";
import { averageOverSets, storedSquares } from "../kernel/sets.js";
import { coarseNodes, type LevelAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { walkPoints } from "./blocks.js";
import { createBoxSpectrum } from "./box-spectrum.js";
import { columnCount, fillColumns } from "./columns.js";
import type { SweepJob, Task } from "./job.js";
import { newSample } from "./local-sampler.js";
import { regionFor } from "./pass.js";
import { createPointTally } from "./tally.js";

/** Levels at which the size without cancellation between k points is taken. */
const sizeLevels = 16;

/** Those levels, absolute. */
export function levelsForSize(axis: LevelAxis): number[] {
  const [first, last] = [axis.levelsEv[0], axis.levelsEv[axis.levelsEv.length - 1]];
  return Array.from({ length: sizeLevels }, (_, i) => first + ((last - first) * (i + 0.5)) / sizeLevels);
}

/**
 * Sections `points.` (plain denominators), `regular.` (denominators regularised by `regularEv`: free of the noise of
 * near-degeneracies) and `size` [level][column]: sums over k of the magnitude of what one k point contributes.
 */
export function surveyPass(job: SweepJob, regularEv: number, task: Task): Sections {
  const region = regionFor(job, task);
  const { parent, edges, weight } = region;
  const { bands } = parent;
  const columns = columnCount(job.plan);
  const { broadenEv } = job.denominator;
  const plain = createPairPass(bands, job.plan.products, job.denominator);
  const smooth = createPairPass(bands, job.plan.products, {
    degenerateEv: 0,
    broadenEv: Math.hypot(regularEv, broadenEv),
  });
  const points = createPointTally(job.axis, columns, 0);
  const regular = createBoxSpectrum(coarseNodes(job.axis), columns, edges);
  const sample = newSample(parent, columns);
  const curvature = new Float64Array(job.plan.products.length * bands);
  const squares = new Float64Array(3 * bands);
  const quantities = { products: curvature, squares, bands };
  const row = new Float64Array(columns);
  const none = new Float64Array(0);
  const levels = levelsForSize(job.axis);
  const size = new Float64Array(levels.length * columns);
  walkPoints(region.reader, task, job.plan.moments, (flat, point) => {
    if (!region.counts(flat)) return;
    const energies = point.energyEv.subarray(point.energyOffset, point.energyOffset + bands);
    storedSquares(point, job.denominator.degenerateEv, squares);
    plain.run(point, curvature);
    for (let band = 0; band < bands; band++) {
      fillColumns(job.plan, quantities, band, row);
      for (let c = 0; c < columns; c++) row[c] *= weight;
      points.add(energies[band], none, row, 0);
    }
    smooth.run(point, curvature);
    smooth.slopes(point, sample.slopes);
    sample.energyEv.set(energies);
    averageOverSets(sample.energyEv, sample.slopes, job.denominator.degenerateEv);
    for (let band = 0; band < bands; band++) {
      fillColumns(job.plan, quantities, band, row);
      sample.values.set(row, band * columns);
    }
    regular.add(sample, 1, weight);
    addMagnitudes(energies, sample.values, levels, { columns, weight, out: size });
  });
  region.reader.close();
  const sections: Sections = { size };
  points.finish(sections, "points");
  regular.finish(sections, "regular");
  return sections;
}

/** out[level][column] += weight |sum over the bands below the level|. */
function addMagnitudes(
  energies: Float64Array,
  values: Float64Array,
  levels: readonly number[],
  { columns, weight, out }: { readonly columns: number; readonly weight: number; readonly out: Float64Array },
): void {
  for (let c = 0; c < columns; c++) {
    let band = 0;
    let sum = 0;
    for (const [i, level] of levels.entries()) {
      for (; band < energies.length && energies[band] <= level; band++) sum += values[band * columns + c];
      out[i * columns + c] += weight * Math.abs(sum);
    }
  }
}
