// pack.ts: how is an open band grid written again, in canonical form and in another precision or order where asked?
import { rmSync } from "node:fs";
import { join } from "node:path";
import { dataFault, Fault, isFault } from "../base/errors.js";
import type { ArrayPlan } from "./arrays.js";
import type { Block, GridFacts, MatrixBlock, Triple } from "./grid.js";
import type { ArrayLayout, GridDescription, GridLayout, ReducedPoints } from "./layout.js";
import { listPatch } from "./list-patch.js";
import type { Axis, NumberType } from "./manifest.js";
import { type Grid, openGrid } from "./open.js";
import { openReader, pointsPerBlock, storedPart, wantAll } from "./reader.js";
import { checkTarget, makeBeside, putInPlace } from "./replace.js";
import type { Unfolding } from "./stars.js";
import { energyUnits, hessianUnits, momentUnits, velocityUnits } from "./units.js";
import { meshIndices } from "./verify.js";
import { createGridWriter, type PointData } from "./writer.js";

/** What is to change beside the form. What is left out stays as it is. */
export interface PackChanges {
  /** Width of the matrices' numbers. "single" leaves energies as they are; "double" widens them too. */
  readonly precision?: "single" | "double" | undefined;
  /** Order of the matrices' axes, slowest first; `direction` stands for the hessian's `pair` too. k, direction, bra, ket where left out. */
  readonly order?: readonly Axis[] | undefined;
  /** Writes files of its own for every direction or pair: what is not asked for is not read. */
  readonly split?: boolean;
  /** Writes the full mesh of a symmetry-reduced grid, which stays reduced otherwise. */
  readonly full?: boolean;
  /** Writes a SHA-256 of every file into the manifest. */
  readonly digests?: boolean;
}

/** Progress over the k points of grid and patches, and a signal that ends the work with nothing left behind. */
export interface PackWatch {
  readonly onProgress?: (done: number, total: number) => void;
  readonly signal?: AbortSignal;
}

/** Memory for a block that is read; the writer holds about as much again. */
const blockBytes = 16 * 1024 * 1024;

/**
 * Writes `source` and its patches to `directory` as raw little-endian files, one for each array or component, and opens the result, which appears
 * whole or not at all. Every number reads back bit by bit unless `precision` narrows it.
 * Throws the Faults of reader and writer; an "interrupted" Fault after a signal.
 */
export async function packGrid(
  source: Grid,
  directory: string,
  changes: PackChanges,
  watch: PackWatch = {},
): Promise<Grid> {
  const destination = checkTarget(directory);
  const beside = makeBeside(destination);
  const made = join(beside, "grid");
  const reduced = source.unfolding !== undefined && changes.full !== true ? source.unfolding : undefined;
  const main = reduced === undefined ? source : storedPart(source);
  const total = source.patches.reduce((sum, patch) => sum + patch.facts.points, main.facts.points);
  let before = 0;
  const copy = async (grid: Grid, to: string): Promise<void> => {
    const stored = grid === main && reduced !== undefined ? { reduced: reducedPoints(reduced, source.facts) } : {};
    const description = { ...descriptionOf(grid, source.facts), ...stored };
    await copyGrid(grid, to, description, layoutOf(grid, changes), {
      ...watch,
      onProgress: (done) => watch.onProgress?.(before + done, total),
    });
    before += grid.facts.points;
  };
  try {
    await copy(main, made);
    for (const patch of source.patches) {
      const name = packedPatchName(patch);
      await copy(patch, join(made, name));
      listPatch(made, name);
    }
    putInPlace(made, destination);
  } finally {
    rmSync(beside, { recursive: true, force: true });
  }
  return openGrid(directory);
}

/** The stored points of a reduced grid as the writer takes them: on their mesh, each with its part of the mesh's points. */
function reducedPoints({ operations, stored, storedOf, flatOf }: Unfolding, mesh: GridFacts): ReducedPoints {
  const counts = new Array<number>(stored).fill(0);
  for (const point of storedOf) counts[point]++;
  const fractional = (flat: number): Triple => {
    const indices = meshIndices(mesh.divisions, flat);
    const along = (j: 0 | 1 | 2): number => (indices[j] + mesh.offset[j]) / mesh.divisions[j];
    return [along(0), along(1), along(2)];
  };
  return {
    operations: operations.map(({ rotation, timeReversal }) => ({ rotation, timeReversal })),
    points: Array.from(flatOf, fractional),
    weights: counts.map((count) => count / storedOf.length),
  };
}

/** A patch lies directly in its packed parent: levels of directories in its name become dashes. */
export const packedPatchName = ({ facts }: Grid): string => (facts.patch?.name ?? "").replace(/[\\/]+/g, "-");

async function copyGrid(
  grid: Grid,
  directory: string,
  description: GridDescription,
  layout: GridLayout & { readonly widens: boolean },
  { onProgress, signal }: { readonly onProgress: (done: number) => void; readonly signal?: AbortSignal },
): Promise<void> {
  const want = wantAll(grid);
  const { points } = grid.facts;
  const step = pointsPerBlock(grid, want, blockBytes);
  const reader = openReader(grid, want);
  const writer = createGridWriter(directory, description, layout);
  try {
    for (let first = 0; first < points; first += step) {
      if (signal?.aborted)
        throw new Fault("interrupted", "interrupted; nothing was written", "start the command again");
      const block = reader.read(first, Math.min(step, points - first));
      for (let index = 0; index < block.count; index++) writer.add(pointOf(block, index));
      onProgress(first + block.count);
      // Let signals and the progress bar in between two blocks.
      await new Promise(setImmediate);
    }
    writer.finish();
  } catch (error) {
    throw layout.widens && isFault(error) && error.message.includes("not Hermitian")
      ? dataFault(error.message, "These are Hermitian to single precision only: leave the precision as it is.", error)
      : error;
  } finally {
    reader.close();
    writer.discard();
  }
}

/** Point `index` of a block as the writer takes it; on the reader's memory. */
function pointOf(block: Block, index: number): PointData {
  const { bands, energyEv, velocity, moments, hessian } = block;
  const matrices = (all: readonly (MatrixBlock | undefined)[]): Float64Array[] =>
    all.map((matrix) => {
      if (matrix === undefined) throw new Error("a matrix was not read");
      const start = matrix.offset + index * matrix.stride;
      return matrix.data.subarray(start, start + 2 * bands * bands);
    });
  return {
    energyEv: energyEv.subarray(index * bands, (index + 1) * bands),
    velocity: matrices(velocity),
    moments: new Map([...moments].map(([name, all]) => [name, matrices(all)])),
    ...(hessian === undefined ? {} : { hessian: matrices(hessian) }),
  };
}

/** What the packed grid says of itself; `parent` is the grid itself or, for a patch, its parent. */
function descriptionOf({ facts, provenance }: Grid, parent: GridFacts): GridDescription {
  const { title, vectorsA, periodic, bands, electronsPerBand, fermiEv, electrons, moments, hessian, tags } = facts;
  return {
    ...{ title, vectorsA, periodic, bands, electronsPerBand, fermiEv, electrons, moments, hessian, tags },
    divisions: parent.divisions,
    offset: parent.offset,
    ...(facts.patch === undefined ? {} : { patch: facts.patch }),
    provenance: provenanceOf(provenance, facts.sha256),
  };
}

/** The source's provenance, and under `packed` the fingerprint of what was packed and who had written that. */
function provenanceOf(provenance: unknown, sha256: string): Record<string, unknown> {
  const isRecord = typeof provenance === "object" && provenance !== null && !Array.isArray(provenance);
  const kept = isRecord ? (provenance as Record<string, unknown>) : {};
  const { writer, ...rest } = kept;
  const loose = isRecord || provenance === undefined ? {} : { provenance };
  return { ...rest, ...loose, packed: { from: sha256, ...(writer === undefined ? {} : { writer }) } };
}

function layoutOf(grid: Grid, changes: PackChanges): GridLayout & { readonly widens: boolean } {
  const arrays = grid.arrays.map((plan): [string, ArrayLayout] => [plan.name, arrayLayout(plan, changes)]);
  const widens = changes.precision === "double";
  return { arrays: Object.fromEntries(arrays), sha256: changes.digests === true, widens };
}

const narrowed: Record<NumberType, NumberType> = {
  float32: "float32",
  float64: "float32",
  complex64: "complex64",
  complex128: "complex64",
};
const widened: Record<NumberType, NumberType> = {
  float32: "float64",
  float64: "float64",
  complex64: "complex128",
  complex128: "complex128",
};

/** Type, unit and axes of a packed array. */
function arrayLayout(plan: ArrayPlan, { precision, order, split = false }: PackChanges): ArrayLayout {
  const isEnergy = plan.role === "energy";
  const keeps = precision === undefined || (isEnergy && precision === "single");
  const type = keeps ? plan.type : (precision === "single" ? narrowed : widened)[plan.type];
  // Numbers of 32 bits times a unit's factor have more digits than 32 bits: they stay in their unit, all others go to the canonical one.
  const staysSingle = narrowed[plan.type] === plan.type && type === plan.type;
  const form = isEnergy ? {} : { split, ...(order === undefined ? {} : { axes: axesOf(plan, order, split) }) };
  return { type, ...(staysSingle ? unitOf(plan) : {}), ...form };
}

function unitOf(plan: ArrayPlan): { unit?: string } {
  const units = { energy: energyUnits, velocity: velocityUnits, moment: momentUnits, hessian: hessianUnits }[plan.role];
  const unit = Object.entries(units).find(([, factor]) => factor === plan.factor)?.[0];
  return plan.factor === 1 || unit === undefined ? {} : { unit };
}

function axesOf({ role, components }: ArrayPlan, order: readonly Axis[], split: boolean): Axis[] {
  const kept = split && components > 1 ? order.filter((axis) => axis !== "direction") : order;
  return kept.map((axis) => (axis === "direction" && role === "hessian" ? "pair" : axis));
}
