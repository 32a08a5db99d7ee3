// write.ts: samples a model on a mesh and streams the matrices, in the eigenbasis of each k point, into a band grid.
import { usageFault } from "../base/errors.js";
import type { HessianKind, MomentFacts, PatchCells, Triple } from "../grid/grid.js";
import type { ReducedPoints } from "../grid/layout.js";
import type { Grid } from "../grid/open.js";
import { patchMesh } from "../grid/patches.js";
import { createGridWriter, type GridLayout } from "../grid/writer.js";
import { reciprocalVectors } from "../zone/lattice.js";
import { cartesianK, fractionalK } from "../zone/mesh.js";
import { createSampler } from "./eigenbasis.js";
import type { SampleModel } from "./model.js";

export interface WriteSampleOptions {
  /** Must not exist, be empty, or hold an earlier band grid of this program. */
  readonly directory: string;
  readonly divisions: Triple;
  /** In mesh steps; [0, 0, 0] where left out. Continuum models are best sampled at 0.5 (see continuum.ts). */
  readonly offset?: Triple;
  /** False leaves the second derivatives out; true where left out, if the model has them. */
  readonly hessian?: boolean;
  /** Set to write a patch: `directory` then lies in a parent of these divisions and this offset, which is not changed. */
  readonly patch?: Omit<PatchCells, "name">;
  /** Write these points of the mesh alone; see symmetry.ts. */
  readonly reduced?: ReducedPoints;
  readonly layout?: GridLayout;
  readonly tags?: Readonly<Record<string, string | number | boolean>>;
  /** Kept in the manifest beside the model's source. */
  readonly provenance?: Readonly<Record<string, unknown>>;
}

/** Told after some of the k points; returns false to stop, which discards what was written. */
export type WriteProgress = (done: number, total: number) => boolean | undefined;

/** The moments of a model as the grid describes them: axial, odd under time reversal, in hbar. */
export function sampleMoments(model: SampleModel): MomentFacts[] {
  return [...model.moments].map(([name, matrices]) => {
    const facts = { name, underTimeReversal: "odd", unit: "hbar" } as const;
    return matrices.length === 1
      ? { ...facts, directions: 1, kind: "scalar" }
      : { ...facts, directions: 3, kind: "axial" };
  });
}

const sampleHessian = (model: SampleModel, wanted: boolean): HessianKind => (wanted ? model.hessian : "none");

/** How often progress is told, in k points. */
const progressStep = 256;

/**
 * Writes a model as a band grid and opens it; memory stays within the writer's blocks. Undefined where `onProgress` stopped
 * it: nothing is left behind then. Throws usage Faults for a mesh or directory that cannot be, and passes on the model's.
 */
export function writeSample(
  model: SampleModel,
  options: WriteSampleOptions,
  onProgress?: WriteProgress,
): Grid | undefined {
  const { divisions, offset = [0, 0, 0] } = options;
  checkMesh(model, divisions, offset);
  const hessian = sampleHessian(model, options.hessian ?? true);
  const { title, vectorsA, periodic, bands, electronsPerBand, fermiEv, electrons } = model;
  const { patch, reduced } = options;
  const facts = {
    title,
    vectorsA,
    periodic,
    divisions,
    offset,
    patch,
    reduced,
    bands,
    electronsPerBand,
    fermiEv,
    electrons,
  };
  const writer = createGridWriter(
    options.directory,
    {
      ...facts,
      moments: sampleMoments(model),
      hessian,
      tags: options.tags ?? {},
      provenance: { sample: model.name, source: model.source, ...options.provenance },
    },
    options.layout,
  );
  const sample = createSampler(model, hessian);
  const reciprocal = reciprocalVectors(vectorsA);
  const mesh = { vectorsA, periodic, ...meshOf(divisions, offset, patch) };
  const total = reduced?.points.length ?? mesh.points;
  try {
    for (let flat = 0; flat < total; flat++) {
      writer.add(sample(cartesianK(reduced?.points[flat] ?? fractionalK(flat, mesh), reciprocal)));
      const told = (flat + 1) % progressStep === 0 || flat + 1 === total;
      if (told && onProgress?.(flat + 1, total) === false) {
        writer.discard();
        return undefined;
      }
    }
    return writer.finish();
  } catch (error) {
    writer.discard();
    throw error;
  }
}

/** The mesh whose points are written: all of it, or a patch's. */
function meshOf(divisions: Triple, offset: Triple, cells: WriteSampleOptions["patch"]) {
  if (cells === undefined) return { divisions, offset, points: divisions[0] * divisions[1] * divisions[2] };
  const patch = { ...cells, name: "" };
  return { ...patchMesh({ divisions, offset }, patch), patch };
}

function checkMesh(model: SampleModel, divisions: Triple, offset: Triple): void {
  const badDivisions = divisions.some((n) => !Number.isInteger(n) || n < 1);
  if (badDivisions || (model.periodic === 2 && divisions[2] !== 1)) {
    throw usageFault(
      `Sample ${model.name} cannot be sampled on ${divisions.join(" x ")} k points.`,
      model.periodic === 2
        ? "Give positive whole numbers, the third being 1: this is a layer."
        : "Give three positive whole numbers.",
    );
  }
  if (offset.some((x) => !(x >= 0 && x < 1)) || (model.periodic === 2 && offset[2] !== 0)) {
    throw usageFault(
      `Sample ${model.name} cannot be sampled with the mesh offset ${offset.join(", ")}.`,
      model.periodic === 2
        ? "Give two offsets from 0 to below 1, and 0 for the third."
        : "Give offsets from 0 to below 1.",
    );
  }
}
