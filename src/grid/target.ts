// target.ts: one array while it is being written: its block of k points in memory, and its files.
import { closeSync, openSync, writeFileSync, writeSync } from "node:fs";
import { dataFault, type Fault, usageFault } from "../base/errors.js";
import { axisSize, type FilePlan, isComplex, npyType } from "./arrays.js";
import { fileForm } from "./canonical.js";
import type { Block, GridFacts, MatrixBlock } from "./grid.js";
import { reasonOf } from "./jsontext.js";
import type { PlannedArray } from "./layout.js";
import { npyHeader } from "./npy.js";
import { forEachPiece, stageOf } from "./pieces.js";
import { type Finding, verifyEnergies, verifyMatrices } from "./verify.js";

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

/** An array with its block in memory. One of its files is open at a time: blocks come in order of k. */
export interface Target extends PlannedArray {
  /** [point of the block][component][bra][ket][re, im], or [point][band]. */
  readonly buffer: Float64Array;
  /** Float64 numbers of one k point in the buffer. */
  readonly perPoint: number;
  readonly open: { file: FilePlan | undefined; handle: number };
}

/** Float64 numbers of one k point of an array in memory. */
export function pointLength({ plan }: PlannedArray): number {
  return plan.role === "energy" ? plan.bands : 2 * plan.components * plan.bands * plan.bands;
}

/** Creates the array's files, with their .npy headers where they have any. Throws a usage Fault. */
export function createTarget(array: PlannedArray, blockPoints: number): Target {
  const { plan } = array;
  const files = plan.files.map((file) => {
    const shape = plan.axes.map((axis) => axisSize(plan, axis, file.points));
    const header = array.container === "npy" ? npyHeader(npyType(plan.type, plan.byteOrder), shape) : Buffer.alloc(0);
    try {
      writeFileSync(file.path, header, { flag: "wx" });
    } catch (error) {
      throw cannotWrite(error);
    }
    return { ...file, dataOffset: header.length, bytes: file.bytes + header.length };
  });
  const perPoint = pointLength(array);
  const open = { file: undefined, handle: -1 };
  return { ...array, plan: { ...plan, files }, buffer: new Float64Array(blockPoints * perPoint), perPoint, open };
}

/** Copies one k point into place `place` of the block; throws a usage Fault when an array is missing or of a wrong length. */
export function copyPoint({ plan, buffer, perPoint }: Target, point: PointData, place: number): void {
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

/** Checks the first `count` points of the block, which are stored points first, ...; throws a data Fault. */
export function verifyTarget(facts: GridFacts, { plan, buffer, perPoint }: Target, first: number, count: number): void {
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

/** Writes the first `count` points of the block as stored points first, ... Throws a usage Fault. */
export function writeBlock(target: Target, first: number, count: number): void {
  const { plan, buffer, perPoint } = target;
  const all = Array.from({ length: plan.components }, (_, component) => component);
  const stage = stageOf(plan, count, all);
  const bytes = fileForm(plan, stage, buffer.subarray(0, count * perPoint));
  try {
    forEachPiece(plan, stage, first, (file, filePosition, stagePosition, length) => {
      const handle = handleOf(target, file);
      let done = 0;
      while (done < length) {
        const most = Math.min(length - done, 1 << 30);
        done += writeSync(handle, bytes, stagePosition + done, most, filePosition + done);
      }
    });
  } catch (error) {
    throw cannotWrite(error);
  }
}

function handleOf(target: Target, file: FilePlan): number {
  if (target.open.file !== file) {
    closeTarget(target);
    target.open.handle = openSync(file.path, "r+");
    target.open.file = file;
  }
  return target.open.handle;
}

/** Closes the array's open file; does nothing where none is open. */
export function closeTarget(target: Target): void {
  if (target.open.file === undefined) return;
  target.open.file = undefined;
  closeSync(target.open.handle);
}

function cannotWrite(error: unknown): Fault {
  return usageFault(`the band grid cannot be written: ${reasonOf(error)}`, "Make room or choose another place.");
}
