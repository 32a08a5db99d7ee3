// open.ts: turns a directory into a band grid whose manifest and files have been checked against each other.
import { statSync } from "node:fs";
import { join, resolve } from "node:path";
import { dataFault } from "../base/errors.js";
import type { ArrayPlan } from "./arrays.js";
import { factsOf, type ManifestFacts } from "./checks.js";
import { manifestFault } from "./explain.js";
import type { Reach } from "./files.js";
import { combined, fingerprint } from "./fingerprint.js";
import type { GridFacts, PatchCells, View } from "./grid.js";
import { parseJson, quoted, readManifestBytes, reasonOf } from "./jsontext.js";
import { type Manifest, manifestName, manifestSchema } from "./manifest.js";
import { checkDisjoint, checkKinship, patchDirectory, patchMesh, readPatchCells } from "./patches.js";
import { planArray } from "./plan.js";
import { isReduced, openReduced } from "./reduced.js";
import type { Unfolding } from "./stars.js";
import { energyUnits, hessianUnits, momentUnits, velocityUnits } from "./units.js";
import { viewFacts } from "./view.js";

/** An open band grid: facts and where its numbers lie. Plain data, safe to send to a worker; holds no file open. */
export interface Grid {
  readonly facts: GridFacts;
  /** energy, velocity, then moments in the manifest's order, then the hessian where it is an array. */
  readonly arrays: readonly ArrayPlan[];
  /** Names of arrays whose slowest axis is not k: they are read in many small pieces. */
  readonly slowArrays: readonly string[];
  /** How the full mesh is made of what is stored, where that is symmetry-reduced. */
  readonly unfolding?: Unfolding | undefined;
  /** Of a symmetry-reduced grid: its points and weights. */
  readonly pointArrays?: readonly ArrayPlan[] | undefined;
  /** Finer data that replace cells of this grid's mesh; empty for a view and for a patch. */
  readonly patches: readonly Grid[];
  /** Whatever the manifest keeps under provenance. */
  readonly provenance: unknown;
}

/**
 * Opens the band grid in `directory`: manifest, files, byte lengths and headers are checked, the numbers are not. With a view the
 * facts are those of a contained sub-mesh, and readers give its points alone.
 * Throws a data Fault that says field or file, what was found, and what was expected.
 */
export function openGrid(directory: string, view?: View): Grid {
  checkDirectory(directory);
  const bytes = readManifestBytes(join(directory, manifestName));
  return openManifest({ directory, bytes, where: manifestName, reach: "inside" }, view);
}

/** A manifest to be opened. `where` is its name in messages; `reach` says whether its files may lie outside `directory`. */
export interface ManifestSource {
  readonly directory: string;
  readonly bytes: Uint8Array;
  readonly where: string;
  readonly reach: Reach;
}

/** As openGrid, with the manifest's bytes given. Only a manifest that the user typed may reach outside its directory. */
export function openManifest({ directory, bytes, where, reach }: ManifestSource, view?: View): Grid {
  const manifest = parseManifest(bytes, where);
  const alone = openArrays(directory, bytes, manifest, factsOf(manifest, where), reach);
  // A sub-mesh is asked for to see how the mesh converges: patches would hide that.
  if (view !== undefined) return { ...alone, facts: viewFacts(alone.facts, view) };
  const patches = (manifest.patches ?? []).map((name) => openPatch(alone.facts, name));
  if (patches.length === 0) return alone;
  checkDisjoint(patches.map(({ facts }) => facts.patch as PatchCells));
  const { facts } = alone;
  const sha256 = combined([facts.sha256, ...patches.map((patch) => patch.facts.sha256)]);
  const total = patches.reduce((sum, patch) => sum + patch.facts.bytes, facts.bytes);
  return { ...alone, facts: { ...facts, sha256, bytes: total }, patches };
}

/** A grid without its patches. */
function openArrays(
  directory: string,
  bytes: Uint8Array,
  manifest: Manifest,
  facts: ManifestFacts,
  reach: Reach = "inside",
): Grid {
  const taken = new Map<string, string>();
  const reduced = isReduced(manifest, manifestName)
    ? openReduced(directory, manifest, facts, manifestName, taken)
    : undefined;
  const points = reduced?.unfolding.stored ?? facts.points;
  const arrays = planArrays(directory, manifest, { ...facts, points }, { taken, reach });
  const all = [...arrays, ...(reduced?.arrays ?? [])];
  const size = all.flatMap((array) => array.files).reduce((sum, file) => sum + file.bytes, 0);
  return {
    facts: {
      directory: resolve(directory),
      ...facts,
      storedFlat: reduced?.unfolding.flatOf,
      sha256: fingerprint(bytes, all),
      bytes: size,
    },
    unfolding: reduced?.unfolding,
    pointArrays: reduced?.arrays,
    arrays,
    slowArrays: arrays.filter((array) => array.axes[0] !== "k" && array.points > 1).map((array) => array.name),
    patches: [],
    provenance: manifest.provenance,
  };
}

/** A patch that the grid of `parent` lists, or may list: a directory within it. Throws a data Fault for what is no patch of it. */
export function openPatch(parent: GridFacts, name: string): Grid {
  const directory = patchDirectory(parent.directory, name);
  const bytes = readManifestBytes(join(directory, manifestName));
  const manifest = parseManifest(bytes);
  const where = `${name}/${manifestName}`;
  const cure = "Give it patch in place of mesh, and no patches of its own.";
  if (manifest.patch === undefined || manifest.mesh !== undefined) throw dataFault(`${where}: this is no patch`, cure);
  if (manifest.patches !== undefined && manifest.patches.length > 0)
    throw dataFault(`${where}: a patch has no patches of its own`, cure);
  const patch = readPatchCells(directory, name, manifest.patch, parent);
  const facts = factsOf(manifest, where, { ...patchMesh(parent, patch), patch });
  const grid = openArrays(directory, bytes, manifest, facts);
  checkKinship(parent, grid.facts, name);
  return grid;
}

/** The checked manifest in `bytes`; throws a data Fault for the first thing wrong with it. */
export function parseManifest(bytes: Uint8Array, where: string = manifestName): Manifest {
  const value = parseJson(bytes, where);
  const result = manifestSchema.safeParse(value);
  if (!result.success) throw manifestFault(manifestSchema, value, result.error.issues, where);
  return result.data;
}

function checkDirectory(directory: string): void {
  const cure = `Name a directory that holds a ${manifestName}.`;
  let isDirectory: boolean;
  try {
    isDirectory = statSync(directory).isDirectory();
  } catch (error) {
    throw dataFault(`${quoted(directory)} cannot be opened: ${reasonOf(error)}`, cure, error);
  }
  if (!isDirectory) throw dataFault(`${quoted(directory)} is not a directory`, cure);
}

function planArrays(
  directory: string,
  manifest: Manifest,
  facts: ManifestFacts,
  { taken, reach }: { readonly taken: Map<string, string>; readonly reach: Reach },
): ArrayPlan[] {
  const { energy, velocity, moments, hessian } = manifest.arrays;
  const common = { points: facts.points, bands: facts.bands, mesh: facts.divisions, reach };
  const plans = [
    planArray(
      directory,
      energy,
      { name: "energy", role: "energy", ...common, components: 1, factor: energyUnits[energy.unit] },
      taken,
    ),
    planArray(
      directory,
      velocity,
      { name: "velocity", role: "velocity", ...common, components: 3, factor: velocityUnits[velocity.unit] },
      taken,
    ),
  ];
  for (const moment of facts.moments) {
    const entry = moments[moment.name];
    const request = { name: `moments.${moment.name}`, role: "moment" as const, ...common };
    const shape = { components: moment.directions, factor: momentUnits[entry.unit] };
    plans.push(planArray(directory, entry, { ...request, ...shape }, taken));
  }
  if (typeof hessian === "object") {
    const factor = hessianUnits[hessian.unit];
    plans.push(
      planArray(directory, hessian, { name: "hessian", role: "hessian", ...common, components: 6, factor }, taken),
    );
  }
  return plans;
}
