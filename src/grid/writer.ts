// writer.ts: writes a band grid point by point; the directory appears under its name only when it is complete.
import { basename, dirname, join } from "node:path";
import { writeAtomically } from "../base/atomic.js";
import { usageFault } from "../base/errors.js";
import { factsOf } from "./checks.js";
import { fileDigest } from "./fingerprint.js";
import type { GridFacts } from "./grid.js";
import {
  cellsFile,
  type GridDescription,
  type GridLayout,
  manifestOf,
  type PlannedArray,
  planLayout,
  pointsOf,
  type ReducedPoints,
  reducedFiles,
} from "./layout.js";
import { manifestName } from "./manifest.js";
import { type Grid, openGrid, openPatch, parseManifest } from "./open.js";
import { patchMesh } from "./patches.js";
import { checkTarget, makeBeside, putInPlace, removeFlat } from "./replace.js";
import {
  closeTarget,
  copyPoint,
  createTarget,
  type PointData,
  pointLength,
  type Target,
  verifyTarget,
  writeBlock,
} from "./target.js";

export type { ArrayLayout, GridDescription, GridLayout } from "./layout.js";
export type { PointData } from "./target.js";

/** Takes the k points in order of their flat index. */
export interface GridWriter {
  /** Copies one k point; throws a data Fault when it is not finite, ascending and Hermitian. */
  add(point: PointData): void;
  /** Points taken so far. */
  written(): number;
  /** Writes the manifest, moves the directory into its place and opens it. Throws when points are missing. */
  finish(): Grid;
  /** Removes what was written. For interrupts; harmless after finish. */
  discard(): void;
}

/**
 * Starts a band grid at `directory`, which must not exist, be empty, or hold an earlier band grid of this program, which is
 * then replaced at the end. A patch is written into its parent's directory, which does not list it yet (see listPatch). Throws a usage or data Fault for a description or layout that makes no band grid.
 */
export function createGridWriter(directory: string, description: GridDescription, layout: GridLayout = {}): GridWriter {
  const facts = checkedFacts(directory, description, layout);
  const open = (path: string): Grid =>
    description.patch === undefined ? openGrid(path) : openPatch(openGrid(dirname(path)).facts, basename(path));
  const destination = checkTarget(directory);
  const beside = makeBeside(destination);
  const planned = planLayout(beside, description, layout);
  const blockPoints = blockPointsOf(planned, facts.points, layout.blockBytes);
  const targets = createTargets(beside, planned, blockPoints);
  const state = { written: 0, held: 0, open: true };
  const add = (point: PointData): void => {
    if (!state.open || state.written >= facts.points) {
      throw usageFault(`the grid holds ${facts.points} k points; no more can be added`, "Add each k point once.");
    }
    for (const array of targets) copyPoint(array, point, state.held);
    state.written++;
    state.held++;
    if (state.held === blockPoints) flush(facts, targets, state);
  };
  const finish = (): Grid => {
    if (!state.open || state.written !== facts.points) {
      throw usageFault(
        `${state.written} of ${facts.points} k points were written`,
        "Add every k point before the end.",
      );
    }
    flush(facts, targets, state);
    targets.forEach(closeTarget);
    writeManifest(beside, description, targets, layout.sha256 === true);
    if (description.reduced !== undefined) writeReduced(beside, description.reduced);
    if (description.patch !== undefined) writeAtomically(join(beside, cellsFile), cellBytes(description.patch.cells));
    // Opened where it is: a grid that cannot be read must not replace one that can.
    open(beside);
    putInPlace(beside, destination);
    state.open = false;
    return open(directory);
  };
  const discard = (): void => {
    if (!state.open) return;
    state.open = false;
    targets.forEach(closeTarget);
    removeFlat(beside);
  };
  return { add, finish, discard, written: () => state.written };
}

function writeReduced(directory: string, { points, weights }: ReducedPoints): void {
  const write = (name: string, numbers: readonly number[]): void => {
    const bytes = Buffer.alloc(8 * numbers.length);
    numbers.forEach((x, i) => {
      bytes.writeDoubleLE(x, 8 * i);
    });
    writeAtomically(join(directory, name), bytes);
  };
  write(reducedFiles.point, points.flat());
  write(reducedFiles.weight, weights);
}

/** 32-bit little-endian whole numbers. */
function cellBytes(cells: Int32Array): Buffer {
  const bytes = Buffer.alloc(4 * cells.length);
  cells.forEach((cell, i) => {
    bytes.writeInt32LE(cell, 4 * i);
  });
  return bytes;
}

function createTargets(directory: string, planned: readonly PlannedArray[], blockPoints: number): Target[] {
  try {
    return planned.map((array) => createTarget(array, blockPoints));
  } catch (error) {
    removeFlat(directory);
    throw error;
  }
}

const defaultBlockBytes = 16 * 1024 * 1024;

/** The facts of the grid to be written, by way of the manifest that it will have, so that no other rules apply. */
function checkedFacts(directory: string, description: GridDescription, layout: GridLayout): GridFacts {
  const manifest = manifestOf(description, planLayout("", description, layout), new Map());
  const { patch } = description;
  const named = patch && { ...patch, name: basename(directory) };
  const mesh = named && { ...patchMesh(description, named), patch: named };
  const facts = factsOf(parseManifest(Buffer.from(JSON.stringify(manifest))), "the grid to be written", mesh);
  return { ...facts, points: pointsOf(description), directory, sha256: "", bytes: 0 };
}

function blockPointsOf(planned: readonly PlannedArray[], points: number, bytes = defaultBlockBytes): number {
  const perPoint = planned.reduce((sum, array) => sum + pointLength(array), 0);
  return Math.max(1, Math.min(points, Math.floor(bytes / (8 * perPoint))));
}

function flush(facts: GridFacts, targets: readonly Target[], state: { written: number; held: number }): void {
  if (state.held === 0) return;
  const first = state.written - state.held;
  for (const array of targets) {
    verifyTarget(facts, array, first, state.held);
    writeBlock(array, first, state.held);
  }
  state.held = 0;
}

function writeManifest(directory: string, description: GridDescription, targets: readonly Target[], digest: boolean) {
  const digests = new Map<string, string[]>();
  for (const { plan } of digest ? targets : []) {
    digests.set(
      plan.name,
      plan.files.map((file) => fileDigest(plan.name, file)),
    );
  }
  const text = JSON.stringify(manifestOf(description, targets, digests), null, 2);
  writeAtomically(join(directory, manifestName), `${text}\n`);
}
