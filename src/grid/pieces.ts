// pieces.ts: which contiguous pieces of an array's files make up a block of k points, and where each goes in memory.

import { type ArrayPlan, axisSize, elementBytes, type FilePlan, isSplit } from "./arrays.js";
import type { Axis } from "./manifest.js";

/** A contiguous run of bytes, in a file and in the memory of the block ("stage"). */
export type PieceVisitor = (file: FilePlan, filePosition: number, stagePosition: number, bytes: number) => void;

/**
 * How a block of one array lies in memory: the file's order of axes, with k cut to the block. Strides in elements. Where each component
 * has files of its own, the components lie one after another.
 */
export interface Stage {
  readonly count: number;
  /** Components in memory, ascending: all of the array's, or the wanted ones where others could be skipped. */
  readonly components: readonly number[];
  readonly strides: Readonly<Partial<Record<Axis, number>>>;
  readonly elements: number;
  /** Number of leading axes that are walked; what follows is contiguous. */
  readonly walked: number;
}

/** Skipping unwanted components pays where each skip is longer than this. */
const worthSkippingBytes = 32768;

/** The stage for `count` points of the given components (ascending). */
export function stageOf(plan: ArrayPlan, count: number, wanted: readonly number[]): Stage {
  const { axes } = plan;
  const pointAxis = axes.indexOf("k");
  if (isSplit(plan)) return splitStage(plan, count, wanted);
  const componentAxis = axes.findIndex((axis) => axis === "direction" || axis === "pair");
  const after = axes.slice(componentAxis + 1).reduce((product, axis) => product * axisSize(plan, axis, 1), 1);
  const bytes = after * elementBytes[plan.type];
  const some = componentAxis >= 0 && wanted.length < plan.components;
  const skips = some && (componentAxis < pointAxis || bytes >= worthSkippingBytes);
  const components = skips ? wanted : Array.from({ length: plan.components }, (_, index) => index);
  const strides: Partial<Record<Axis, number>> = {};
  let elements = 1;
  for (let axis = axes.length - 1; axis >= 0; axis--) {
    strides[axes[axis]] = elements;
    elements *= axis === componentAxis ? components.length : axisSize(plan, axes[axis], count);
  }
  const walked = skips ? Math.max(pointAxis, componentAxis + 1) : pointAxis;
  return { count, components, strides, elements, walked };
}

function splitStage(plan: ArrayPlan, count: number, components: readonly number[]): Stage {
  const { axes } = plan;
  const strides: Partial<Record<Axis, number>> = {};
  let elements = 1;
  for (let axis = axes.length - 1; axis >= 0; axis--) {
    strides[axes[axis]] = elements;
    elements *= axisSize(plan, axes[axis], count);
  }
  strides[plan.role === "hessian" ? "pair" : "direction"] = elements;
  return { count, components, strides, elements: elements * components.length, walked: axes.indexOf("k") };
}

/** Calls `visit` for every piece of the points first ... first + stage.count - 1, in the order of the stage. */
export function forEachPiece(plan: ArrayPlan, stage: Stage, first: number, visit: PieceVisitor): void {
  const last = first + stage.count;
  for (const file of plan.files) {
    const from = Math.max(first, file.firstPoint);
    const to = Math.min(last, file.firstPoint + file.points);
    if (from < to) filePieces(plan, stage, file, { first, from, to }, visit);
  }
}

interface Range {
  readonly first: number;
  readonly from: number;
  readonly to: number;
}

function filePieces(plan: ArrayPlan, stage: Stage, file: FilePlan, range: Range, visit: PieceVisitor): void {
  const component = file.component === undefined ? 0 : stage.components.indexOf(file.component);
  if (component < 0) return;
  const size = elementBytes[plan.type];
  const fileStrides: number[] = [];
  let product = 1;
  for (let axis = plan.axes.length - 1; axis >= 0; axis--) {
    fileStrides[axis] = product;
    product *= axisSize(plan, plan.axes[axis], file.points);
  }
  const walkK = stage.walked > plan.axes.indexOf("k");
  // Where k is not walked it is the first contiguous axis, and the piece begins at the block's first point of it.
  const pointStride = fileStrides[plan.axes.indexOf("k")];
  const fileStart = walkK ? 0 : (range.from - file.firstPoint) * pointStride;
  const componentStart = component * (stage.strides.direction ?? stage.strides.pair ?? 0);
  const stageStart = componentStart + (walkK ? 0 : (range.from - range.first) * (stage.strides.k ?? 0));
  const length = walkK ? fileStrides[stage.walked - 1] : (range.to - range.from) * pointStride;
  const walk = (axis: number, inFile: number, inStage: number): void => {
    if (axis === stage.walked) {
      visit(file, file.dataOffset + inFile * size, inStage * size, length * size);
      return;
    }
    const name = plan.axes[axis];
    const stride = stage.strides[name] ?? 0;
    if (name === "k") {
      for (let k = range.from; k < range.to; k++) {
        walk(axis + 1, inFile + (k - file.firstPoint) * fileStrides[axis], inStage + (k - range.first) * stride);
      }
    } else if (name === "direction" || name === "pair") {
      stage.components.forEach((component, index) => {
        walk(axis + 1, inFile + component * fileStrides[axis], inStage + index * stride);
      });
    } else {
      for (let index = 0; index < plan.bands; index++) {
        walk(axis + 1, inFile + index * fileStrides[axis], inStage + index * stride);
      }
    }
  };
  walk(0, fileStart, stageStart);
}
