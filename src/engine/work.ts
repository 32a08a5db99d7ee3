// work.ts: what a worker does: one task of one kind of work. Also called in place when there is only one worker.
import { Fault, type FaultKind, isFault } from "../base/errors.js";
import type { Sections } from "../spectrum/sections.js";
import { defectPass } from "./defect-pass.js";
import type { DefectJob, LocateJob, PlacesJob, RefineJob, SweepJob, Task } from "./job.js";
import { locatePass } from "./locate-pass.js";
import { meshPass } from "./pass.js";
import { placesPass } from "./places-pass.js";
import { refinePass } from "./refine-pass.js";
import { surveyPass } from "./survey-pass.js";

/** Kinds of work a worker knows: the methods `points` and `cells`, the two passes of `refine`, what its models get wrong, and where a value comes from. */
export type Work =
  | { readonly kind: "mesh"; readonly job: SweepJob }
  | { readonly kind: "survey"; readonly job: SweepJob; readonly regularEv: number }
  | { readonly kind: "refine"; readonly job: RefineJob }
  | { readonly kind: "defects"; readonly job: DefectJob }
  | { readonly kind: "locate"; readonly job: LocateJob }
  | { readonly kind: "places"; readonly job: PlacesJob };

export interface Order {
  readonly work: Work;
  readonly task: Task;
}

/** Performs one task; the result's arrays belong to the caller. */
export function performTask({ work, task }: Order): Sections {
  switch (work.kind) {
    case "mesh":
      return meshPass(work.job, task);
    case "survey":
      return surveyPass(work.job, work.regularEv, task);
    case "refine":
      return refinePass(work.job, [task]);
    case "defects":
      return defectPass(work.job, task);
    case "locate":
      return locatePass(work.job, task);
    case "places":
      return placesPass(work.job, task);
  }
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
