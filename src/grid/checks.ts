// checks.ts: what must hold between the fields of a manifest beyond each field's own rule.
import { dataFault, type Fault } from "../base/errors.js";
import type { GridFacts, HessianKind, MomentFacts, Triple } from "./grid.js";
import { quoted } from "./jsontext.js";
import type { Manifest } from "./manifest.js";
import { energyUnits, lengthUnits } from "./units.js";

/** The facts that the manifest alone gives. */
export type ManifestFacts = Omit<GridFacts, "directory" | "sha256" | "bytes">;

/** Which mesh the manifest's points make, where it is not the one that it states: that of a patch. */
export type OtherMesh = Pick<GridFacts, "divisions" | "offset" | "points" | "patch">;

/** Checks the manifest as a whole and converts it; throws a data Fault starting with `where`. */
export function factsOf(manifest: Manifest, where: string, mesh?: OtherMesh): ManifestFacts {
  const fail = (message: string, cure: string): Fault => dataFault(`${where}: ${message}`, cure);
  const { divisions, offset, points, patch } = mesh ?? statedMesh(manifest, fail);
  return {
    title: manifest.title,
    ...latticeOf(manifest, fail),
    divisions,
    offset,
    points,
    patch,
    bands: manifest.bands,
    electronsPerBand: manifest.electronsPerBand,
    ...levelOf(manifest, fail),
    moments: momentsOf(manifest, fail),
    hessian: hessianOf(manifest),
    tags: manifest.tags,
  };
}

/** The full mesh that the manifest states. */
function statedMesh(manifest: Manifest, fail: Fail): OtherMesh {
  if (manifest.patch !== undefined)
    throw fail("this is a patch: it replaces some cells of a parent's mesh", "Name the parent, which lists it.");
  if (manifest.mesh === undefined) throw fail("mesh is missing: it must be an object {...}", "Add mesh.");
  const { divisions, offset } = manifest.mesh;
  const points = divisions[0] * divisions[1] * divisions[2];
  if (!Number.isSafeInteger(points)) {
    throw fail(`mesh.divisions ${quoted(divisions)} make more k points than can be counted`, "Correct mesh.divisions.");
  }
  offset.forEach((value, axis) => {
    if (value < 0 || value >= 1) {
      throw fail(
        `mesh.offset[${axis}] is ${value}: it must lie in [0, 1)`,
        "Give it in mesh steps, reduced to [0, 1).",
      );
    }
  });
  if (manifest.lattice.periodic === 2 && (divisions[2] !== 1 || offset[2] !== 0)) {
    throw fail(
      `lattice.periodic is 2, but mesh.divisions[2] is ${divisions[2]} and mesh.offset[2] is ${offset[2]}: they must be 1 and 0`,
      "A layer's k points lie in the plane of b1 and b2.",
    );
  }
  return { divisions, offset, points };
}

type Fail = (message: string, cure: string) => Fault;

function latticeOf(manifest: Manifest, fail: Fail) {
  const factor = lengthUnits[manifest.lattice.unit];
  const [a1, a2, a3] = manifest.lattice.vectors.map((row) => row.map((x) => x * factor) as unknown as Triple);
  const lengths = [a1, a2, a3].map((row) => Math.hypot(...row));
  const volume = Math.abs(dot(cross(a1, a2), a3));
  if (!(volume > 1e-8 * lengths[0] * lengths[1] * lengths[2]) || !Number.isFinite(volume)) {
    throw fail("lattice.vectors span no volume", "Give three vectors that do not lie in one plane.");
  }
  const { periodic } = manifest.lattice;
  if (periodic === 2) {
    const tilt = Math.max(Math.abs(dot(a1, a3)) / lengths[0], Math.abs(dot(a2, a3)) / lengths[1]) / lengths[2];
    if (tilt > 1e-6) {
      throw fail(
        "lattice.periodic is 2, but the third lattice vector is not normal to the first two",
        "Make a3 normal to the layer, its length the layer's thickness.",
      );
    }
  }
  return { vectorsA: [a1, a2, a3] as const, periodic };
}

function levelOf(manifest: Manifest, fail: Fail) {
  const { unit, fermi, electrons } = manifest.level;
  if (fermi === undefined && electrons === undefined) {
    throw fail("level has neither fermi nor electrons", "Give at least one of the two.");
  }
  const most = manifest.bands * manifest.electronsPerBand;
  if (electrons !== undefined && (electrons < 0 || electrons > most)) {
    throw fail(
      `level.electrons is ${electrons}: it must lie between 0 and bands x electronsPerBand = ${most}`,
      "Count the valence electrons per cell in these bands only.",
    );
  }
  return { fermiEv: fermi === undefined ? undefined : fermi * energyUnits[unit], electrons };
}

function momentsOf(manifest: Manifest, fail: Fail): MomentFacts[] {
  return Object.entries(manifest.arrays.moments).map(([name, entry]) => {
    if (name === "charge") {
      throw fail('arrays.moments.charge: "charge" names the current without a moment', "Choose another name.");
    }
    return {
      name,
      directions: entry.kind === "scalar" ? 1 : 3,
      kind: entry.kind,
      underTimeReversal: entry.underTimeReversal,
      unit: entry.unit === "1" ? "1" : "hbar",
    };
  });
}

function hessianOf(manifest: Manifest): HessianKind {
  const { hessian } = manifest.arrays;
  if (hessian === undefined) return "none";
  return hessian === "free-electron" ? "free-electron" : "array";
}

function cross(a: Triple, b: Triple): Triple {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

function dot(a: Triple, b: Triple): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}
