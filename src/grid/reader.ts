// reader.ts: streams a band grid from disk as blocks of k points in canonical units, checked as they come.
import ndarray from "ndarray";
import { dataFault, usageFault } from "../base/errors.js";
import { type ArrayPlan, elementBytes } from "./arrays.js";
import { createScratch, energiesOf, matricesOf } from "./canonical.js";
import type { Block, BlockReader, GridFacts, MatrixBlock, Want } from "./grid.js";
import { createHandles } from "./handles.js";
import { load, type Source } from "./load.js";
import type { Grid } from "./open.js";
import { stageOf } from "./pieces.js";
import { checkRange } from "./range.js";
import { neededDirections, unfoldedReader } from "./unfolded.js";
import { type Finding, verifyEnergies, verifyMatrices } from "./verify.js";
import { storedFacts, viewReader } from "./view.js";

export { type Grid, openGrid } from "./open.js";

/** Everything that the grid stores. */
export function wantAll(grid: Grid): Want {
  return {
    velocity: [0, 1, 2],
    moments: grid.facts.moments.flatMap(({ name, directions }) =>
      Array.from({ length: directions }, (_, direction) => ({ name, direction })),
    ),
    hessian: grid.facts.hessian === "array",
  };
}

/**
 * A reader of the energies and the wanted matrices. Its blocks are checked: finite, energies ascending within 1e-9 eV,
 * matrices Hermitian within 1e-6 (32-bit numbers: 1e-4) of their largest element, or of 0.1 where that is larger.
 * `read` throws a data Fault that names array, k point and bands. Throws a usage Fault for a want that the grid cannot give.
 */
export function openReader(grid: Grid, want: Want): BlockReader {
  if (grid.facts.view !== undefined) return viewReader(openReader(storedGrid(grid), want), grid.facts);
  if (grid.unfolding !== undefined)
    return unfoldedReader(openReader(storedPart(grid), wholly(want, grid.facts)), grid.facts, grid.unfolding);
  const reader = openUncheckedReader(grid, want);
  const report = ({ message, cure }: Finding): never => {
    throw dataFault(message, cure);
  };
  return {
    ...reader,
    read(first, count) {
      const block = reader.read(first, count);
      verifyEnergies(grid.facts, grid.arrays[0], block, report);
      forEachMatrix(grid, block, (plan, component, matrices) => {
        verifyMatrices(grid.facts, plan, block, matrices, component, report);
      });
      return block;
    },
  };
}

/** The whole grid of which `grid` shows a sub-mesh. */
const storedGrid = (grid: Grid): Grid => ({ ...grid, facts: storedFacts(grid.facts) });

/** A reduced grid as what lies on disk: its stored points alone, in their order. Any other grid as it is. */
export const storedPart = (grid: Grid): Grid =>
  grid.unfolding === undefined
    ? grid
    : { ...grid, unfolding: undefined, facts: { ...grid.facts, points: grid.unfolding.stored } };

/** Turning a point mixes directions: where one is wanted, all are read. */
function wholly(want: Want, { moments }: GridFacts): Want {
  const names = new Set(want.moments.map(({ name }) => name));
  return {
    ...want,
    velocity: neededDirections(want.velocity, 3),
    moments: [
      ...moments
        .filter(({ name }) => names.has(name))
        .flatMap(({ name, directions }) => Array.from({ length: directions }, (_, direction) => ({ name, direction }))),
      ...want.moments.filter(({ name }) => !moments.some((moment) => moment.name === name)),
    ],
  };
}

/** Calls `visit` for every matrix component that a block holds, in the order of the grid's arrays. */
export function forEachMatrix(
  grid: Grid,
  block: Block,
  visit: (plan: ArrayPlan, component: number, matrices: MatrixBlock) => void,
): void {
  for (const plan of grid.arrays) {
    matricesOfBlock(block, plan)?.forEach((matrices, component) => {
      if (matrices !== undefined) visit(plan, component, matrices);
    });
  }
}

function matricesOfBlock(block: Block, plan: ArrayPlan): readonly (MatrixBlock | undefined)[] | undefined {
  if (plan.role === "velocity") return block.velocity;
  if (plan.role === "hessian") return block.hessian;
  return plan.role === "moment" ? block.moments.get(momentName(plan)) : undefined;
}

function momentName(plan: ArrayPlan): string {
  return plan.name.slice("moments.".length);
}

/** As openReader, without looking at the numbers. */
export function openUncheckedReader(grid: Grid, want: Want): BlockReader {
  if (grid.facts.view !== undefined) return viewReader(openUncheckedReader(storedGrid(grid), want), grid.facts);
  if (grid.unfolding !== undefined)
    return unfoldedReader(openUncheckedReader(storedPart(grid), wholly(want, grid.facts)), grid.facts, grid.unfolding);
  const sources = sourcesOf(grid, want);
  const handles = createHandles();
  const { facts } = grid;
  return {
    facts,
    read(first, count) {
      checkRange(first, count, facts.points);
      const velocity: (MatrixBlock | undefined)[] = [undefined, undefined, undefined];
      const moments = new Map<string, (MatrixBlock | undefined)[]>();
      let energyEv = new Float64Array(0) as Float64Array;
      let hessian: MatrixBlock[] | undefined;
      for (const source of sources) {
        const stage = load(source, handles, first, count);
        const { plan, components, scratch } = source;
        if (plan.role === "energy") {
          energyEv = energiesOf(plan, stage, scratch);
          continue;
        }
        const blocks = matricesOf(plan, stage, scratch, components);
        if (plan.role === "hessian") hessian = blocks;
        else {
          const target = plan.role === "velocity" ? velocity : new Array<MatrixBlock | undefined>(plan.components);
          components.forEach((component, index) => {
            target[component] = blocks[index];
          });
          if (plan.role === "moment") moments.set(momentName(plan), target);
        }
      }
      return { first, count, bands: facts.bands, energyEv, velocity, moments, hessian };
    },
    close: () => handles.close(),
  };
}

function sourcesOf(grid: Grid, want: Want): Source[] {
  const sources: Source[] = [];
  for (const plan of grid.arrays) {
    const components = plan.role === "energy" ? [0] : wantedOf(plan, want);
    if (components.length > 0) sources.push({ plan, components, scratch: createScratch() });
  }
  for (const { name } of want.moments) {
    if (grid.facts.moments.some((moment) => moment.name === name)) continue;
    const known = grid.facts.moments.map((moment) => moment.name).join(", ");
    throw usageFault(
      `the grid stores no moment ${JSON.stringify(name)}`,
      known === "" ? "It stores no moments at all." : `It stores ${known}.`,
    );
  }
  return sources;
}

function wantedOf(plan: ArrayPlan, want: Want): number[] {
  const all = Array.from({ length: plan.components }, (_, index) => index);
  if (plan.role === "hessian") return want.hessian ? all : [];
  const asked =
    plan.role === "velocity"
      ? want.velocity
      : want.moments.filter(({ name }) => name === momentName(plan)).map(({ direction }) => direction);
  for (const direction of asked) {
    if (!all.includes(direction)) {
      throw usageFault(
        `direction ${direction} of ${plan.name} was asked for; it has ${plan.components}`,
        "Directions count from 0.",
      );
    }
  }
  return all.filter((component) => asked.includes(component));
}

/** How many k points fill about `bytes` bytes of a reader's memory (at least 1, at most all). */
export function pointsPerBlock(grid: Grid, want: Want, bytes = 32 * 1024 * 1024): number {
  let perPoint = 0;
  for (const { plan, components } of sourcesOf(grid, want)) {
    perPoint += stageOf(plan, 1, components).elements * 2 * elementBytes[plan.type];
  }
  return Math.max(1, Math.min(grid.facts.points, Math.floor(bytes / perPoint)));
}

/** A view [k][bra][ket][re, im] of a block's matrices, on the reader's memory. */
export function viewOf(matrices: MatrixBlock, count: number, bands: number): ndarray.NdArray<Float64Array> {
  return ndarray(
    matrices.data,
    [count, bands, bands, 2],
    [matrices.stride, 2 * bands, 2, 1],
    matrices.offset,
  ) as ndarray.NdArray<Float64Array>;
}
