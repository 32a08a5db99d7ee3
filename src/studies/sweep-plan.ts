// sweep-plan.ts: what can be asked of a sweep, and what does that mean on this grid?
import { z } from "zod";
import { defaultResponses, planResponses } from "../bands/responses.js";
import { type ResponseUnit, responseUnit } from "../bands/units.js";
import { usageFault } from "../base/errors.js";
import type { RefineJob, SweepJob } from "../engine/job.js";
import { resolvedEnergy } from "../engine/mesh-step.js";
import type { ModelShare } from "../engine/patched.js";
import type { GridFacts, View } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { storedFacts } from "../grid/view.js";
import { planAxis } from "../spectrum/axis.js";
import type { Sections } from "../spectrum/sections.js";
import { quickHealth } from "./quick-health.js";
import { type ReferenceLevel, referenceLevel } from "./reference.js";

/** Options of a sweep; the same object is what a job file holds and what every result embeds. */
export const sweepOptions = z.strictObject({
  response: z.array(z.string()).min(1).max(200).optional(),
  from: z.number().min(-1000).max(1000).default(-1),
  to: z.number().min(-1000).max(1000).default(1),
  points: z.int().min(1).max(20001).default(201),
  temperature: z.array(z.number().min(0).max(100000)).min(1).max(64).default([0, 300]),
  method: z.enum(["refine", "cells", "points"]).default("refine"),
  accuracy: z.number().min(1e-6).max(1).default(0.01),
  samples: z.int().min(1000).max(1e10).optional(),
  /** Left out: 1e-5, or ten times what Kramers pairs are split by on disk. */
  degenerate: z.number().min(0).max(10).optional(),
  broaden: z.number().min(0).max(100).default(0),
  unit: z.string().max(40).optional(),
  thermal: z.boolean().optional(),
});

export type SweepOptions = z.infer<typeof sweepOptions>;

/** The neighbour defect of a cold curve is followed in steps of the resolved energy, also on the contained mesh. */
const marginForDefect = 2.5;

/** A sweep ready to be computed. */
export interface SweepPlan {
  /** Energy that the mesh resolves, for `refine`; 0 otherwise. */
  readonly regularEv: number;
  readonly job: SweepJob;
  /** Cells of the mesh that patches replace. */
  readonly patchedCells: number;
  readonly facts: GridFacts;
  readonly reference: ReferenceLevel;
  readonly options: SweepOptions & { readonly degenerate: number };
}

/** A part of a grid to sweep over, by a level found elsewhere. */
export interface SweptPart {
  /** Only this contained sub-mesh. */
  readonly view?: View;
  /** Reference level; otherwise that of the whole grid. */
  readonly reference?: ReferenceLevel;
}

/** Checks the options against the grid and plans the job. Throws usage and data Faults. */
export function planSweep(directory: string, options: SweepOptions, part: SweptPart = {}): SweepPlan {
  if (options.points === 1 ? options.from !== options.to : !(options.from < options.to))
    throw usageFault(
      `--from ${options.from} --to ${options.to} --points ${options.points} is no window`,
      "Let --from lie below --to, or give --points 1 with both equal.",
    );
  const { view } = part;
  const { facts, patches } = openGrid(directory, view);
  const patchedCells = patches.reduce((sum, patch) => sum + (patch.facts.patch?.cells.length ?? 0), 0);
  const plan = planResponses(options.response ?? defaultResponses(facts), facts);
  const reference = part.reference ?? referenceLevel(storedFacts(facts));
  const temperatures = [...new Set(options.temperature)].sort((a, b) => a - b);
  const degenerate = options.degenerate ?? quickHealth(directory, facts).degenerateEv;
  const window = {
    fromEv: reference.levelEv + options.from,
    toEv: reference.levelEv + options.to,
    points: options.points,
  };
  const regularEv = options.method === "refine" ? resolvedEnergy(facts, window.fromEv, window.toEv) : 0;
  const job: SweepJob = {
    directory,
    view,
    method: options.method,
    plan,
    denominator: { degenerateEv: degenerate, broadenEv: options.broaden },
    axis: planAxis(window, temperatures, marginForDefect * regularEv),
  };
  for (const column of plan.columns) unitOf(column.carrier, facts, options);
  return { job, facts, reference, options: { ...options, degenerate }, regularEv, patchedCells };
}

/** Unit and prefactor of a carrier's responses, as the options want them. */
export const unitOf = (carrier: string, facts: GridFacts, options: Pick<SweepOptions, "unit">): ResponseUnit =>
  responseUnit(carrier, facts, options.unit);

/** Spectra of a planned sweep, and the settings of its refinement if it had one. */
export interface Computed {
  readonly sections: Sections;
  readonly refined: RefineJob | undefined;
  /** Where patches stand in for some cells. */
  readonly modelShare?: ModelShare;
}
