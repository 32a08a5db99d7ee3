// work.ts: what a worker does: one task of one kind of work. Also called in place when there is only one worker.
import { Fault, type FaultKind, isFault } from "../base/errors.js";
import type { Sections } from "../spectrum/sections.js";
import type { SweepJob, Task } from "./job.js";
import { meshPass } from "./pass.js";

/** Kinds of work a worker knows. */
export interface Work {
  readonly kind: "mesh";
  readonly job: SweepJob;
}

export interface Order {
  readonly work: Work;
  readonly task: Task;
}

/** Performs one task; the result's arrays belong to the caller. */
export function performTask({ work, task }: Order): Sections {
  return meshPass(work.job, task);
}

/** A result as it crosses a thread boundary, where an error would lose its kind and cure. */
export type Reply =
  | { readonly sections: Sections }
  | { readonly fault: { readonly kind: FaultKind; readonly message: string; readonly cure: string } };

/** performTask for a worker thread. */
export function replyToOrder(order: Order): Reply {
  try {
    return { sections: performTask(order) };
  } catch (error) {
    if (!isFault(error)) throw error;
    return { fault: { kind: error.kind, message: error.message, cure: error.cure } };
  }
}

/** Unpacks a reply; throws the Fault it carries. */
export function openReply(reply: Reply): Sections {
  if ("sections" in reply) return reply.sections;
  throw new Fault(reply.fault.kind, reply.fault.message, reply.fault.cure);
}
