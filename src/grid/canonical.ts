// canonical.ts: from numbers in a file's order, type, byte order and unit to float64 blocks in the canonical layout, and back.
import { endianness } from "node:os";
import ndarray from "ndarray";
import ops from "ndarray-ops";
import { type ArrayPlan, elementBytes, isComplex } from "./arrays.js";
import type { MatrixBlock } from "./grid.js";
import type { Stage } from "./pieces.js";

const machine = endianness() === "LE" ? "little" : "big";

/** Memory of one array that is used again for each block, grown when a block needs more. */
export interface Scratch {
  stage: ArrayBuffer;
  canonical: Float64Array;
}

/** Empty memory. */
export function createScratch(): Scratch {
  return { stage: new ArrayBuffer(0), canonical: new Float64Array(0) };
}

/** The first `bytes` bytes of the scratch's stage. */
export function stageBytes(scratch: Scratch, bytes: number): Uint8Array {
  if (scratch.stage.byteLength < bytes) scratch.stage = new ArrayBuffer(bytes);
  return new Uint8Array(scratch.stage, 0, bytes);
}

function canonicalNumbers(scratch: Scratch, length: number): Float64Array {
  if (scratch.canonical.length < length) scratch.canonical = new Float64Array(length);
  return scratch.canonical;
}

type Numbers = Float32Array<ArrayBuffer> | Float64Array<ArrayBuffer>;

/** The stage as numbers of the machine's byte order (swapped in place where the file's order differs). */
function stageNumbers(plan: ArrayPlan, bytes: Uint8Array): Numbers {
  const single = plan.type === "float32" || plan.type === "complex64";
  swapIfNeeded(plan, bytes);
  const buffer = bytes.buffer as ArrayBuffer;
  return single ? new Float32Array(buffer, 0, bytes.length / 4) : new Float64Array(buffer, 0, bytes.length / 8);
}

/** Swaps the bytes of every number in place when the plan's byte order is not the machine's. */
function swapIfNeeded(plan: ArrayPlan, bytes: Uint8Array): void {
  if (plan.byteOrder === machine) return;
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  if (plan.type === "float32" || plan.type === "complex64") buffer.swap32();
  else buffer.swap64();
}

/** Energies [k][band] in eV out of a stage. The result is the stage itself where that is how it lies. */
export function energiesOf(plan: ArrayPlan, stage: Stage, scratch: Scratch): Float64Array {
  const numbers = stageNumbers(plan, stageBytes(scratch, stage.elements * elementBytes[plan.type]));
  const { count } = stage;
  const { bands } = plan;
  const [pointStride, bandStride] = [stage.strides.k ?? 0, stage.strides.band ?? 0];
  if (numbers instanceof Float64Array && pointStride === bands && bandStride === 1) {
    scale(numbers, plan.factor);
    return numbers;
  }
  const out = canonicalNumbers(scratch, count * bands);
  const source = ndarray(numbers, [count, bands], [pointStride, bandStride], 0);
  ops.muls(ndarray(out, [count, bands], [bands, 1], 0), source, plan.factor);
  return out.subarray(0, count * bands);
}

/** The wanted matrices out of a stage, in the order of `wanted`; without copying where they lie as a MatrixBlock does. */
export function matricesOf(plan: ArrayPlan, stage: Stage, scratch: Scratch, wanted: readonly number[]): MatrixBlock[] {
  const numbers = stageNumbers(plan, stageBytes(scratch, stage.elements * elementBytes[plan.type]));
  const strides = stridesOf(stage);
  const places = wanted.map((component) => stage.components.indexOf(component) * strides.component);
  if (plan.type === "complex128" && strides.ket === 1 && strides.bra === plan.bands) {
    scale(numbers, plan.factor);
    const data = numbers as Float64Array;
    return places.map((place) => ({ data, offset: 2 * place, stride: 2 * strides.k }));
  }
  const { count } = stage;
  const { bands } = plan;
  const perMatrix = 2 * bands * bands;
  const out = canonicalNumbers(scratch, wanted.length * count * perMatrix);
  places.forEach((place, index) => {
    const offset = index * count * perMatrix;
    if (isComplex(plan.type)) {
      const shape = [count, bands, bands, 2];
      const source = ndarray(numbers, shape, [2 * strides.k, 2 * strides.bra, 2 * strides.ket, 1], 2 * place);
      ops.muls(ndarray(out, shape, [perMatrix, 2 * bands, 2, 1], offset), source, plan.factor);
    } else {
      // Imaginary parts were zero when the memory was made, and nothing else is ever written to odd places.
      const shape = [count, bands, bands];
      const source = ndarray(numbers, shape, [strides.k, strides.bra, strides.ket], place);
      ops.muls(ndarray(out, shape, [perMatrix, 2 * bands, 2], offset), source, plan.factor);
    }
  });
  return places.map((_, index) => ({ data: out, offset: index * count * perMatrix, stride: perMatrix }));
}

function stridesOf(stage: Stage) {
  const { k = 0, bra = 0, ket = 0, direction, pair } = stage.strides;
  return { k, bra, ket, component: direction ?? pair ?? 0 };
}

function scale(numbers: Numbers, factor: number): void {
  if (factor === 1) return;
  for (let index = 0; index < numbers.length; index++) numbers[index] *= factor;
}

/**
 * The file's form of `values` for all components of `stage`: canonical [k][band] for energies or [k][component][bra][ket][re, im]
 * for matrices come in. A real type keeps the real parts. Where memory and file agree it is `values` itself, else new memory.
 */
export function fileForm(plan: ArrayPlan, stage: Stage, values: Float64Array): Uint8Array {
  if (plan.type === "complex128" && plan.factor === 1 && plan.byteOrder === machine && liesAsInMemory(plan, stage))
    return new Uint8Array(values.buffer, values.byteOffset, values.byteLength);
  const bytes = new Uint8Array(stage.elements * elementBytes[plan.type]);
  const single = plan.type === "float32" || plan.type === "complex64";
  const numbers = single ? new Float32Array(bytes.buffer) : new Float64Array(bytes.buffer);
  const { count } = stage;
  const { bands, components } = plan;
  // Dividing gives the nearest number; multiplying by a reciprocal would not.
  if (plan.role === "energy") {
    const shape = [count, bands];
    const target = ndarray(numbers, shape, [stage.strides.k ?? 0, stage.strides.band ?? 0], 0);
    ops.divs(target, ndarray(values, shape, [bands, 1], 0), plan.factor);
  } else {
    const perMatrix = 2 * bands * bands;
    const strides = stridesOf(stage);
    const width = isComplex(plan.type) ? 2 : 1;
    const shape = [count, components, bands, bands, width];
    const places = [strides.k, strides.component, strides.bra, strides.ket].map((stride) => stride * width);
    const source = ndarray(values, shape, [components * perMatrix, perMatrix, 2 * bands, 2, 1], 0);
    ops.divs(ndarray(numbers, shape, [...places, 1], 0), source, plan.factor);
  }
  swapIfNeeded(plan, bytes);
  return bytes;
}

/** Whether the file's order of a matrix array is that of the block in memory: k, component, bra, ket. */
function liesAsInMemory({ bands, components }: ArrayPlan, stage: Stage): boolean {
  const { k, component, bra, ket } = stridesOf(stage);
  const matrix = bands * bands;
  return ket === 1 && bra === bands && (components === 1 || component === matrix) && k === components * matrix;
}
