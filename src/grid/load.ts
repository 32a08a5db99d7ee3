// load.ts: the bytes of some k points of one array, out of its files into memory.
import { usageFault } from "../base/errors.js";
import { type ArrayPlan, elementBytes } from "./arrays.js";
import { type Scratch, stageBytes } from "./canonical.js";
import type { Handles } from "./handles.js";
import { forEachPiece, type Stage, stageOf } from "./pieces.js";

/** One array of a reader: which components of it are wanted (ascending), and the memory that it reads into. */
export interface Source {
  readonly plan: ArrayPlan;
  readonly components: readonly number[];
  readonly scratch: Scratch;
}

/** Reads the bytes of a block of one array into its scratch. Throws a usage Fault for a block too large, data Faults of the files. */
export function load(source: Source, handles: Handles, first: number, count: number): Stage {
  const { plan, scratch } = source;
  const stage = stageOf(plan, count, source.components);
  // ndarray keeps offsets in 32 bits.
  if (2 * stage.elements >= 2 ** 31) {
    throw usageFault(
      `a block of ${count} k points of arrays.${plan.name} is too large`,
      "Read fewer k points at a time.",
    );
  }
  const bytes = stageBytes(scratch, stage.elements * elementBytes[plan.type]);
  forEachPiece(plan, stage, first, (file, filePosition, stagePosition, length) => {
    handles.read(plan.name, file, filePosition, bytes, stagePosition, length);
  });
  return stage;
}
