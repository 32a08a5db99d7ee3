// patched.ts: joins what patches give to the parent's spectra, and says how much of the models' error they leave.
import { boltzmannEvPerK } from "../base/constants.js";
import { defectDetail } from "../curves/refined.js";
import type { GridFacts } from "../grid/grid.js";
import type { Grid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";
import type { Sections } from "../spectrum/sections.js";
import { columnCount } from "./columns.js";
import { cellDefects } from "./defect-pass.js";
import type { DefectJob, RefineJob, Task } from "./job.js";

const parts = [".base", ".nodes", ".defect.base", ".defect.nodes"];

function added(a: Float64Array, b: Float64Array): Float64Array {
  return a.map((value, i) => value + b[i]);
}

/**
 * From the sections of a refinement over regions: `refine` becomes that of the whole zone, `parent` what the parent's mesh alone would
 * have given. Without patches the sections are returned as they are.
 */
export function joinPatches(sections: Sections): Sections {
  if (sections["patch.nodes"] === undefined) return sections;
  const joined: Sections = { ...sections };
  for (const part of parts) {
    joined[`parent${part}`] = added(sections[`refine${part}`], sections[`replaced${part}`]);
    joined[`refine${part}`] = added(sections[`refine${part}`], sections[`patch${part}`]);
  }
  for (const part of [".square", ".counters"])
    joined[`refine${part}`] = added(sections[`refine${part}`], sections[`patch${part}`]);
  return joined;
}

/** Numbers that the defects of all cells may take: 32 MB, and four times that while they are gathered. */
const mostNumbers = 1 << 22;
const mostLevels = 16;

/** The job that finds every cell's defect at a few levels across the window, as many as memory allows. */
export function planDefects(job: RefineJob, points: number): DefectJob {
  const { levelsEv, temperaturesK } = job.axis;
  const fitting = Math.floor(mostNumbers / (points * columnCount(job.plan)));
  const count = Math.max(1, Math.min(mostLevels, levelsEv.length, fitting));
  const [first, last] = [levelsEv[0], levelsEv[levelsEv.length - 1]];
  return {
    ...job,
    levelsEv: Array.from({ length: count }, (_, i) =>
      count === 1 ? (first + last) / 2 : first + ((last - first) * i) / (count - 1),
    ),
    thermalEv: Math.max(job.regularEv * defectDetail, Math.min(...temperaturesK) * boltzmannEvPerK),
  };
}

/** Part of the models' error that is left: out[column] at an absolute level. */
export type ModelShare = (levelEv: number, out: Float64Array) => void;

/**
 * What is left of the models' error once patches stand in for some cells, from how the neighbour defect is spread over the
 * cells: errors of single cells are taken to add up with one sign, which is on the safe side where cells of the largest defect are replaced.
 */
export function modelShare(grid: Grid, job: DefectJob, tasks: readonly Task[], sections: Sections, order: number) {
  const columns = columnCount(job.plan);
  const size = job.levelsEv.length * columns;
  const defects = cellDefects(grid.facts, tasks, sections, size);
  const keeps = new Float64Array(grid.facts.points).fill(1);
  for (const { facts } of grid.patches)
    for (const cell of facts.patch?.cells ?? []) keeps[cell] = keptPart(partsOf(facts), order);
  const left = new Float64Array(size);
  const all = new Float64Array(size);
  for (let cell = 0; cell < keeps.length; cell++)
    for (let i = 0; i < size; i++) {
      const magnitude = Math.abs(defects[cell * size + i]);
      all[i] += magnitude;
      left[i] += keeps[cell] * magnitude;
    }
  const share = left.map((value, i) => (all[i] > 0 ? value / all[i] : 1));
  return interpolated(job.levelsEv, columns, share);
}

/** Part of the fall that the neighbour defect promises and that came, on the mean of random layers whose cells were computed. */
const delivered = 2 / 3;

/** Part of a cell's error that is left when each edge is divided into `parts`: what goes with `parts^-order`, less what does not come. */
export const keptPart = (parts: number, order: number): number => 1 - delivered * (1 - parts ** -order);

/** Parts per edge of a patch's cells, on the mean. */
const partsOf = ({ patch, periodic }: GridFacts): number =>
  patch === undefined ? 1 : pointsPerCell(patch) ** (1 / periodic);

function interpolated(levelsEv: readonly number[], columns: number, share: Float64Array): ModelShare {
  const last = levelsEv.length - 1;
  return (levelEv, out) => {
    const position =
      last === 0 ? 0 : Math.min(last, Math.max(0, (last * (levelEv - levelsEv[0])) / (levelsEv[last] - levelsEv[0])));
    const low = Math.min(Math.max(0, last - 1), Math.floor(position));
    const high = Math.min(last, low + 1);
    for (let c = 0; c < columns; c++)
      out[c] = share[low * columns + c] * (low + 1 - position) + share[high * columns + c] * (position - low);
  };
}

/** Tasks on the parent's mesh. */
export const parentTasks = (tasks: readonly Task[]): Task[] => tasks.filter(({ patch }) => patch === undefined);
