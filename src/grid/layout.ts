// layout.ts: how a band grid that is being written is laid out: manifest entries, file names, pieces, from a short description.
import { join } from "node:path";
import { usageFault } from "../base/errors.js";
import {
  type ArrayPlan,
  type ArrayRole,
  bytesPerPoint,
  componentNamesOf,
  type FilePlan,
  isComplex,
  isSplit,
} from "./arrays.js";
import type { HessianKind, MomentFacts, PatchCells, Triple } from "./grid.js";
import { type ArrayEntry, type Axis, formatName, type NumberType } from "./manifest.js";
import { pointsPerCell } from "./patches.js";
import type { Operation } from "./symmetry.js";
import { energyUnits, hessianUnits, momentUnits, velocityUnits } from "./units.js";

/** One point of every star, and the group that makes the others. */
export interface ReducedPoints {
  readonly operations: readonly Operation[];
  /** Fractional, in b1, b2, b3. */
  readonly points: readonly Triple[];
  /** Summing to 1. */
  readonly weights: readonly number[];
}

/** What a band grid to be written holds; units as in GridFacts. At least one of fermiEv and electrons must be given. */
export interface GridDescription {
  readonly title: string;
  readonly vectorsA: readonly [Triple, Triple, Triple];
  readonly periodic: 2 | 3;
  /** Of a patch: those of its parent. */
  readonly divisions: Triple;
  readonly offset: Triple;
  /** Set where the points are those of a patch, cell after cell. */
  readonly patch?: Omit<PatchCells, "name">;
  /** Set where only these points of the mesh are written, in this order. */
  readonly reduced?: ReducedPoints;
  readonly bands: number;
  readonly electronsPerBand: 1 | 2;
  readonly fermiEv?: number | undefined;
  readonly electrons?: number | undefined;
  readonly moments: readonly MomentFacts[];
  readonly hessian: HessianKind;
  readonly tags?: Readonly<Record<string, string | number | boolean>>;
  /** Kept as it is; the field `writer` is set by this program. */
  readonly provenance?: Readonly<Record<string, unknown>>;
}

/** How one array is stored; what is left out is canonical: float64 or complex128, k direction bra ket, little endian, raw, one file. */
export interface ArrayLayout {
  readonly type?: NumberType;
  readonly axes?: readonly Axis[];
  readonly unit?: string;
  readonly byteOrder?: "little" | "big";
  readonly container?: "raw" | "npy";
  /** Writes files of its own for each component; the axes have no direction or pair then. */
  readonly split?: boolean;
  /** Number of files that the k points are shared out to. */
  readonly pieces?: number;
}

/** Layout per array ("energy", "velocity", "moments.spin", "hessian"); `sha256` asks for a digest of every file. */
export interface GridLayout {
  readonly arrays?: Readonly<Record<string, ArrayLayout>>;
  readonly sha256?: boolean;
  /** Memory for blocks, bytes; 16 MB where left out. */
  readonly blockBytes?: number;
}

/** The array to be written: where its numbers go, its container, and its entry in the manifest. */
export interface PlannedArray {
  readonly plan: ArrayPlan;
  readonly container: "raw" | "npy";
  readonly entry: ArrayEntry;
}

const matrixAxes: readonly Axis[] = ["k", "direction", "bra", "ket"];

interface Role {
  readonly name: string;
  readonly role: ArrayRole;
  readonly components: number;
  readonly axes: readonly Axis[];
  readonly unit: string;
  readonly units: Readonly<Record<string, number>>;
}

/** Every array of a description, to be written into `directory`. Throws a usage Fault for a layout that cannot be. */
export function planLayout(directory: string, description: GridDescription, layout: GridLayout): PlannedArray[] {
  const matrix = { components: 3, axes: matrixAxes };
  const roles: Role[] = [
    { name: "energy", role: "energy", components: 1, axes: ["k", "band"], unit: "eV", units: energyUnits },
    { name: "velocity", role: "velocity", ...matrix, unit: "eV*angstrom", units: velocityUnits },
  ];
  for (const { name, directions, unit } of description.moments) {
    const units: Record<string, number> = momentUnits;
    roles.push({ name: `moments.${name}`, role: "moment", components: directions, axes: matrixAxes, unit, units });
  }
  if (description.hessian === "array") {
    const axes: Axis[] = ["k", "pair", "bra", "ket"];
    roles.push({ name: "hessian", role: "hessian", components: 6, axes, unit: "eV*angstrom^2", units: hessianUnits });
  }
  const names = roles.map((role) => role.name);
  for (const name of Object.keys(layout.arrays ?? {})) {
    if (!names.includes(name)) throw usageFault(`there is no array ${name}`, `The grid has ${names.join(", ")}.`);
  }
  return roles.map((role) => planRole(directory, description, role, layout.arrays?.[role.name] ?? {}));
}

/** Number of k points to be written. */
export function pointsOf({ divisions, patch, reduced }: GridDescription): number {
  if (reduced !== undefined) return reduced.points.length;
  return patch === undefined ? divisions[0] * divisions[1] * divisions[2] : patch.cells.length * pointsPerCell(patch);
}

/** The file of a patch that lists its cells. */
export const cellsFile = "cells.i32";

function planRole(directory: string, description: GridDescription, role: Role, layout: ArrayLayout): PlannedArray {
  const unit = layout.unit ?? role.unit;
  const factor = role.units[unit];
  if (factor === undefined) {
    throw usageFault(`${role.name} has no unit ${unit}`, `Use ${Object.keys(role.units).join(", ")}.`);
  }
  const splits = layout.split === true && role.components > 1;
  const roleAxes = splits ? role.axes.filter((axis) => axis !== "direction" && axis !== "pair") : role.axes;
  const axes = [...(layout.axes ?? roleAxes)];
  const type = layout.type ?? (role.role === "energy" ? "float64" : "complex128");
  if (role.role === "energy" && isComplex(type)) throw usageFault("energies are real", "Use float64 or float32.");
  if ([...axes].sort().join() !== [...roleAxes].sort().join()) {
    throw usageFault(`${role.name} has the axes ${roleAxes.join(", ")}`, "Name each of them once, in any order.");
  }
  const points = pointsOf(description);
  const { bands } = description;
  const byteOrder = layout.byteOrder ?? "little";
  const shape = { name: role.name, role: role.role, axes, points, bands, components: role.components };
  const stored = { type, byteOrder, factor, digests: undefined };
  const container = layout.container ?? "raw";
  const pieces = { container, count: layout.pieces ?? 1 };
  const files = splits
    ? componentNamesOf(shape).flatMap((name, component) =>
        sharedOut({ ...shape, type }, directory, pieces, `-${name}`).map((file) => ({ ...file, component })),
      )
    : sharedOut({ ...shape, type }, directory, pieces, "");
  const plan = { ...shape, ...stored, files };
  const names = byComponent(
    plan,
    files.map((file) => file.name),
  );
  return { plan, container, entry: { files: names, type, axes, unit, byteOrder } };
}

type Texts = string | string[];

/** One text for each file of an array, as a manifest's entry gives them: one, a list, or either for each component. */
function byComponent(plan: ArrayPlan, texts: readonly string[]): Texts | Record<string, Texts> {
  const oneOrAll = (some: readonly string[]): Texts => (some.length === 1 ? some[0] : [...some]);
  if (!isSplit(plan)) return oneOrAll(texts);
  const of = (component: number) => texts.filter((_, file) => plan.files[file].component === component);
  return Object.fromEntries(componentNamesOf(plan).map((name, component) => [name, oneOrAll(of(component))]));
}

const suffixes: Record<NumberType, string> = { float32: "f32", float64: "f64", complex64: "c64", complex128: "c128" };

function sharedOut(
  plan: Omit<ArrayPlan, "files" | "byteOrder" | "factor" | "digests">,
  directory: string,
  { container, count: pieces }: { readonly container: "raw" | "npy"; readonly count: number },
  part: string,
): FilePlan[] {
  if (!Number.isInteger(pieces) || pieces < 1 || pieces > plan.points) {
    throw usageFault(`${plan.name} cannot be shared out to ${pieces} files`, `Use 1 to ${plan.points}.`);
  }
  const base = plan.name.replace("moments.", "moment-") + part;
  const suffix = container === "npy" ? "npy" : suffixes[plan.type];
  return Array.from({ length: pieces }, (_, piece) => {
    const firstPoint = Math.floor((piece * plan.points) / pieces);
    const points = Math.floor(((piece + 1) * plan.points) / pieces) - firstPoint;
    const name = pieces === 1 ? `${base}.${suffix}` : `${base}-${piece + 1}.${suffix}`;
    return {
      name,
      path: join(directory, name),
      bytes: bytesPerPoint(plan) * points,
      firstPoint,
      points,
      dataOffset: 0,
    };
  });
}

/** The manifest of a description, as a JSON value; `digests` maps array names to digests, where there are any. */
export function manifestOf(
  description: GridDescription,
  arrays: readonly PlannedArray[],
  digests: ReadonlyMap<string, readonly string[]>,
): Record<string, unknown> {
  const entryOf = (name: string): Record<string, unknown> | undefined => {
    const array = arrays.find(({ plan }) => plan.name === name);
    const sha256 = digests.get(name);
    return array === undefined || sha256 === undefined
      ? array?.entry
      : { ...array.entry, sha256: byComponent(array.plan, sha256) };
  };
  const moments = description.moments.map(({ name, kind, underTimeReversal }): [string, unknown] => [
    name,
    { ...entryOf(`moments.${name}`), kind, underTimeReversal },
  ]);
  return {
    format: formatName,
    title: description.title,
    lattice: { unit: "angstrom", vectors: description.vectorsA, periodic: description.periodic },
    ...(description.patch === undefined
      ? { mesh: { divisions: description.divisions, offset: description.offset } }
      : { patch: { divisions: description.patch.divisions, cells: cellsFile } }),
    ...reducedFields(description),
    bands: description.bands,
    electronsPerBand: description.electronsPerBand,
    level: { unit: "eV", fermi: description.fermiEv, electrons: description.electrons },
    arrays: {
      energy: entryOf("energy"),
      velocity: entryOf("velocity"),
      moments: Object.fromEntries(moments),
      hessian: description.hessian === "free-electron" ? "free-electron" : entryOf("hessian"),
      ...(description.reduced === undefined ? {} : reducedArrays),
    },
    tags: description.tags ?? {},
    provenance: { ...description.provenance, writer: writerName },
  };
}

/** Files of the points and weights of a reduced grid, float64, little endian. */
export const reducedFiles = { point: "point.f64", weight: "weight.f64" } as const;

const reducedArrays = {
  point: { files: reducedFiles.point, type: "float64", axes: ["k", "direction"], unit: "1" },
  weight: { files: reducedFiles.weight, type: "float64", axes: ["k"], unit: "1" },
} as const;

const reducedFields = ({ reduced }: GridDescription) =>
  reduced === undefined ? {} : { points: reduced.points.length, symmetry: reduced.operations };

/** What this program writes into `provenance.writer`, and looks for before it replaces a band grid. */
export const writerName = "tidegauge";
