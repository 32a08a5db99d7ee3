// pack.ts: how do arrays that exist, or a band grid, become a band grid in the form that reads fastest? Options and result.
import { z } from "zod";
import { usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import type { ArrayPlan } from "../grid/arrays.js";
import { type Grid, openGrid, openManifest } from "../grid/open.js";
import { type PackWatch, packGrid } from "../grid/pack.js";
import { completeFacts } from "../grid/pack-facts.js";
import { inspect, inspectOptions } from "./inspect.js";
import type { PackResult, StoredArray } from "./pack-result.js";

const matrixAxes = ["k", "direction", "bra", "ket"] as const;

/** Options of packing. */
export const packOptions = z.strictObject({
  /** Width of the matrices' numbers; as they are where left out. */
  precision: z.enum(["single", "double"]).optional(),
  /** Files of its own for every direction of a matrix array. */
  split: z.boolean().default(false),
  /** Order of the matrices' axes, slowest first. */
  order: z
    .array(z.enum(matrixAxes))
    .refine((order) => [...order].sort().join() === [...matrixAxes].sort().join(), {
      error: "expected each of k, direction, bra, ket once",
    })
    .optional(),
  /** Unfold a symmetry-reduced grid to its full mesh. */
  full: z.boolean().default(false),
  /** Write a SHA-256 of every file into the manifest. */
  digests: z.boolean().default(false),
  /** Inspect the result at once. */
  check: z.boolean().default(false),
});

export type PackOptions = z.infer<typeof packOptions>;

/** What to pack: a band grid's directory, or a description (see completeFacts). */
export type PackSource = { readonly grid: string } | { readonly facts: string };

/** Packs `source` into `directory`. Throws Faults for a source that cannot be read, a directory that may not be written, an interrupt. */
export async function pack(
  source: PackSource,
  directory: string,
  options: PackOptions,
  watch: PackWatch = {},
): Promise<PackResult> {
  const { grid, inferred } = openSource(source);
  const packed = await packGrid(grid, directory, options, watch);
  const { title, sha256, divisions, offset, points, bands, bytes } = packed.facts;
  const check = options.check ? (await inspect([directory], inspectOptions.parse({}))).grids[0] : null;
  const [kind, name] = "grid" in source ? (["grid", source.grid] as const) : (["facts", source.facts] as const);
  const stored = grid.arrays[0].points;
  return {
    format: "tidegauge.pack/1",
    version: productVersion,
    job: { study: "pack", ...options },
    directory,
    ...{ title, sha256, divisions: [...divisions], offset: [...offset], points, bands, bytes },
    source: { name, kind, sha256: grid.facts.sha256, bytes: grid.facts.bytes, points: stored },
    inferred: [...inferred],
    arrays: packed.arrays.map((plan, index) => ({
      name: plan.name,
      was: storedArray(grid.arrays[index]),
      is: storedArray(plan),
    })),
    patches: packed.patches.map(({ facts }) => facts.patch?.name ?? ""),
    notes: notesOf(grid, packed),
    check,
  };
}

function openSource(source: PackSource): { readonly grid: Grid; readonly inferred: readonly string[] } {
  if ("grid" in source) return { grid: openGrid(source.grid), inferred: [] };
  const completed = completeFacts(source.facts);
  return { grid: openManifest(completed.source), inferred: completed.inferred };
}

function storedArray({ type, axes, byteOrder, files }: ArrayPlan): StoredArray {
  const bytes = files.reduce((sum, file) => sum + file.bytes, 0);
  return { type, axes: [...axes], byteOrder, files: files.length, bytes };
}

const isSingle = ({ type }: ArrayPlan): boolean => type === "float32" || type === "complex64";

function notesOf(source: Grid, packed: Grid): string[] {
  const notes: string[] = [];
  const narrowed = packed.arrays.filter((plan, index) => isSingle(plan) && !isSingle(source.arrays[index]));
  if (narrowed.length > 0)
    notes.push(
      `${narrowed.map(({ name }) => name).join(", ")}: kept to 24 bits, about 7 digits; energies stay as they are`,
    );
  const [was, is] = [source.arrays[0].points, packed.arrays[0].points];
  if (was !== is) notes.push(`${was} stored points were unfolded to the full mesh of ${is}`);
  else if (is !== packed.facts.points)
    notes.push(`symmetry-reduced: ${is} points are stored of a mesh of ${packed.facts.points}; --full writes them all`);
  if (packed.slowArrays.length > 0)
    notes.push(`${packed.slowArrays.join(", ")}: k is not the slowest axis, so these are read in many small pieces`);
  return notes;
}

/** Throws a usage Fault unless exactly one source is named. */
export function packSource(grid: string | undefined, facts: string | undefined): PackSource {
  if (grid !== undefined && facts === undefined) return { grid };
  if (facts !== undefined && grid === undefined) return { facts };
  throw usageFault(
    grid === undefined ? "nothing to pack is named" : "a GRID and --from are both named",
    "name a band grid to pack again, or --from FACTS.json that describes arrays",
  );
}
