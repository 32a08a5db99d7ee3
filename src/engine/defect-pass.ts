// defect-pass.ts: what do the local models get wrong, cell by cell? The neighbour defect of every cell at a few levels.
import { fermi } from "../curves/occupation.js";
import type { GridFacts } from "../grid/grid.js";
import type { Sections } from "../spectrum/sections.js";
import { neighbourIndex } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import { columnCount } from "./columns.js";
import type { DefectJob, Task } from "./job.js";
import { type BandSample, createLocalSampler, newSample } from "./local-sampler.js";
import { regionFor } from "./pass.js";
import { neighbourSteps } from "./refiner.js";

/** Names of a task's arrays, which are its own: every cell is in one task. */
const truthOf = (first: number): string => `truth.${first}`;
const modelOf = (first: number): string => `model.${first}`;

/** Adds the sample's occupied weight at every level, out[level * columns + column]. */
function addOccupied({ energyEv, values }: BandSample, { levelsEv, thermalEv }: DefectJob, out: Float64Array): void {
  const columns = values.length / energyEv.length;
  for (const [l, levelEv] of levelsEv.entries())
    for (let band = 0; band < energyEv.length; band++) {
      const filled = fermi((energyEv[band] - levelEv) / thermalEv);
      for (let c = 0; c < columns; c++) out[l * columns + c] += filled * values[band * columns + c];
    }
}

/**
 * Of every point of one task on the parent's mesh: what is stored (`truth`), and what its own model says of its neighbours, summed
 * (`model`); occupied weight with regularised denominators, [point][level][column].
 */
export function defectPass(job: DefectJob, task: Task): Sections {
  const region = regionFor(job, task, true);
  const { parent, edges } = region;
  const columns = columnCount(job.plan);
  const size = job.levelsEv.length * columns;
  const sampler = createLocalSampler(job, parent);
  const sample = newSample(parent, columns);
  const steps = neighbourSteps(parent.periodic);
  const truth = new Float64Array(task.count * size);
  const model = new Float64Array(task.count * size);
  walkPoints(region.reader, task, job.plan.moments, (flat, point) => {
    const at = (flat - task.first) * size;
    sampler.load(point);
    sample.t.fill(0);
    sampler.evaluateRegular(sample, edges);
    addOccupied(sample, job, truth.subarray(at, at + size));
    for (const t of steps) {
      sample.t.set(t);
      sampler.evaluateRegular(sample, edges);
      addOccupied(sample, job, model.subarray(at, at + size));
    }
  });
  region.reader.close();
  return { [truthOf(task.first)]: truth, [modelOf(task.first)]: model };
}

/** Neighbour defect of every cell, in zone-mean units: [cell][level][column], `size` numbers a cell. `tasks`: those that were performed. */
export function cellDefects(facts: GridFacts, tasks: readonly Task[], sections: Sections, size: number): Float64Array {
  const truth = new Float64Array(facts.points * size);
  const defect = new Float64Array(facts.points * size);
  for (const { first } of tasks) {
    truth.set(sections[truthOf(first)], first * size);
    defect.set(sections[modelOf(first)], first * size);
  }
  for (let cell = 0; cell < facts.points; cell++) {
    const own = defect.subarray(cell * size, (cell + 1) * size);
    for (let i = 0; i < size; i++) own[i] = -own[i];
    for (let j = 0; j < facts.periodic; j++)
      for (const step of [-1, 1]) {
        const from = neighbourIndex(cell, facts.divisions, j, step) * size;
        for (let i = 0; i < size; i++) own[i] += truth[from + i];
      }
    for (let i = 0; i < size; i++) own[i] /= 24 * facts.points;
  }
  return defect;
}
