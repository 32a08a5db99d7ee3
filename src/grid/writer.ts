// writer.ts: writes a band grid point by point; the directory appears under its name only when it is complete.
import { closeSync, fsyncSync, openSync, writeSync } from "node:fs";
import { join } from "node:path";
import { writeAtomically } from "../base/atomic.js";
import { dataFault, usageFault } from "../base/errors.js";
import { toFileForm } from "./canonical.js";
import { factsOf } from "./checks.js";
import { fileDigest } from "./fingerprint.js";
import type { Block, GridFacts, MatrixBlock } from "./grid.js";
import { reasonOf } from "./jsontext.js";
import { type GridDescription, type GridLayout, manifestOf, type PlannedArray, planLayout } from "./layout.js";
import { manifestName } from "./manifest.js";
import { npyHeader } from "./npy.js";
import { type Grid, openGrid, parseManifest } from "./open.js";
import { forEachPiece, stageOf } from "./pieces.js";
import { axisSize, elementBytes, type FilePlan, isComplex, npyType } from "./plan.js";
import { checkTarget, makeBeside, putInPlace, removeFlat } from "./replace.js";
import { type Finding, verifyEnergies, verifyMatrices } from "./verify.js";

export type { ArrayLayout, GridDescription, GridLayout } from "./layout.js";

/** One k point. Matrices are complex interleaved, bra major, length 2 bands^2, in the energies' eigenbasis. */
export interface PointData {
  /** Ascending, eV. */
  readonly energyEv: Float64Array;
  /** dH/dk_x, y, z, eV angstrom. */
  readonly velocity: readonly Float64Array[];
  /** Per moment of the description: one matrix per direction, in the moment's unit. */
  readonly moments: ReadonlyMap<string, readonly Float64Array[]>;
  /** xx, yy, zz, yz, zx, xy, eV angstrom^2; wanted where the description says "array". */
  readonly hessian?: readonly Float64Array[];
}

/** Takes the k points in order of their flat index. */
export interface GridWriter {
  /** Copies one k point; throws a data Fault when it is not finite, ascending and Hermitian. */
  add(point: PointData): void;
  /** Points taken so far. */
  readonly written: number;
  /** Writes the manifest, moves the directory into its place and opens it. Throws when points are missing. */
  finish(): Grid;
  /** Removes what was written. For interrupts; harmless after finish. */
  discard(): void;
}

interface Target extends PlannedArray {
  /** [point of the block][component][bra][ket][re, im], or [point][band]. */
  readonly buffer: Float64Array;
  readonly perPoint: number;
  readonly handles: Map<FilePlan, number>;
}

/**
 * Starts a band grid at `directory`, which must not exist, be empty, or hold an earlier band grid of this program, which is
 * then replaced at the end. Throws a usage or data Fault for a description or layout that makes no band grid.
 */
export function createGridWriter(directory: string, description: GridDescription, layout: GridLayout = {}): GridWriter {
  const draft = JSON.stringify(manifestOf(description, planLayout("", description, layout), new Map()));
  const facts = factsOf(parseManifest(Buffer.from(draft)), "the grid to be written");
  const target = checkTarget(directory);
  const beside = makeBeside(target);
  const planned = planLayout(beside, description, layout);
  const perPoint = planned.reduce((sum, array) => sum + pointLength(array), 0);
  const room = Math.floor((layout.blockBytes ?? 16 * 1024 * 1024) / (8 * perPoint));
  const blockPoints = Math.max(1, Math.min(facts.points, room));
  let targets: Target[] = [];
  const state = { written: 0, held: 0, open: true };
  const flush = (): void => {
    if (state.held === 0) return;
    const first = state.written - state.held;
    for (const array of targets) {
      verifyTarget({ ...facts, directory: target, sha256: "", bytes: 0 }, array, first, state.held);
      writeBlock(array, first, state.held);
    }
    state.held = 0;
  };
  const discard = (): void => {
    if (!state.open) return;
    state.open = false;
    closeAll(targets);
    removeFlat(beside);
  };
  try {
    targets = planned.map((array) => openTarget(array, blockPoints));
  } catch (error) {
    discard();
    throw error;
  }
  return {
    get written() {
      return state.written;
    },
    add(point) {
      if (!state.open || state.written >= facts.points) {
        throw usageFault(`the grid holds ${facts.points} k points; no more can be added`, "Add each k point once.");
      }
      for (const array of targets) copyPoint(array, point, state.held);
      state.written++;
      state.held++;
      if (state.held === blockPoints) flush();
    },
    finish() {
      if (!state.open || state.written !== facts.points) {
        throw usageFault(
          `${state.written} of ${facts.points} k points were written`,
          "Add every k point before the end.",
        );
      }
      flush();
      for (const array of targets) for (const handle of array.handles.values()) fsyncSync(handle);
      closeAll(targets);
      writeManifest(beside, description, targets, layout.sha256 === true);
      // Opened where it is: a grid that cannot be read must not replace one that can.
      openGrid(beside);
      putInPlace(beside, target);
      state.open = false;
      return openGrid(directory);
    },
    discard,
  };
}

function writeManifest(directory: string, description: GridDescription, targets: Target[], digest: boolean): void {
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

/** Float64 numbers of one k point in the buffer. */
function pointLength({ plan }: PlannedArray): number {
  return plan.role === "energy" ? plan.bands : 2 * plan.components * plan.bands * plan.bands;
}

function openTarget(array: PlannedArray, blockPoints: number): Target {
  const { plan } = array;
  const handles = new Map<FilePlan, number>();
  const files = plan.files.map((file) => {
    const handle = openSync(file.path, "wx");
    const shape = plan.axes.map((axis) => axisSize(plan, axis, file.points));
    const header = array.container === "npy" ? npyHeader(npyType(plan.type, plan.byteOrder), shape) : Buffer.alloc(0);
    writeExactly(handle, header, 0, header.length, 0);
    const placed = { ...file, dataOffset: header.length, bytes: file.bytes + header.length };
    handles.set(placed, handle);
    return placed;
  });
  const perPoint = pointLength(array);
  const buffer = new Float64Array(blockPoints * perPoint);
  return { ...array, plan: { ...plan, files }, buffer, perPoint, handles };
}

function copyPoint({ plan, buffer, perPoint }: Target, point: PointData, place: number): void {
  const parts = partsOf(plan.role, plan.name, point);
  const length = perPoint / plan.components;
  if (parts.length !== plan.components || parts.some((part) => part.length !== length)) {
    throw usageFault(
      `${plan.name} of a k point must be ${plan.components} arrays of ${length} numbers; got ${parts.length} of ${parts[0]?.length ?? 0}`,
      "Give every array that the description names.",
    );
  }
  parts.forEach((part, component) => {
    buffer.set(part, place * perPoint + component * length);
  });
}

function partsOf(role: string, name: string, point: PointData): readonly Float64Array[] {
  if (role === "energy") return [point.energyEv];
  if (role === "velocity") return point.velocity;
  return (role === "hessian" ? point.hessian : point.moments.get(name.slice("moments.".length))) ?? [];
}

function verifyTarget(facts: GridFacts, { plan, buffer, perPoint }: Target, first: number, count: number): void {
  const report = ({ message, cure }: Finding): never => {
    throw dataFault(message, cure);
  };
  const { bands } = plan;
  const block: Block = { first, count, bands, energyEv: buffer, velocity: [], moments: new Map(), hessian: undefined };
  if (plan.role === "energy") {
    verifyEnergies(facts, plan, block, report);
    return;
  }
  for (let component = 0; component < plan.components; component++) {
    const matrices: MatrixBlock = { data: buffer, offset: component * 2 * bands * bands, stride: perPoint };
    verifyMatrices(facts, plan, block, matrices, component, report);
  }
  if (isComplex(plan.type)) return;
  for (let index = 1; index < count * perPoint; index += 2) {
    if (Math.abs(buffer[index]) > 1e-12) {
      throw dataFault(
        `${plan.name} at k point ${first + Math.floor(index / perPoint)} is not real, so it cannot be stored as ${plan.type}`,
        "Store it as complex128 or complex64.",
      );
    }
  }
}

function writeBlock({ plan, buffer, perPoint, handles }: Target, first: number, count: number): void {
  const all = Array.from({ length: plan.components }, (_, component) => component);
  const stage = stageOf(plan, count, all);
  const bytes = new Uint8Array(stage.elements * elementBytes[plan.type]);
  toFileForm(plan, stage, buffer.subarray(0, count * perPoint), bytes);
  forEachPiece(plan, stage, first, (file, filePosition, stagePosition, length) => {
    const handle = handles.get(file);
    if (handle !== undefined) writeExactly(handle, bytes, stagePosition, length, filePosition);
  });
}

function writeExactly(handle: number, bytes: Uint8Array, start: number, length: number, position: number): void {
  let done = 0;
  try {
    while (done < length) {
      done += writeSync(handle, bytes, start + done, Math.min(length - done, 1 << 30), position + done);
    }
  } catch (error) {
    throw usageFault(`the band grid cannot be written: ${reasonOf(error)}`, "Make room or choose another place.");
  }
}

function closeAll(targets: readonly Target[]): void {
  for (const { handles } of targets) {
    for (const handle of handles.values()) closeSync(handle);
    handles.clear();
  }
}
