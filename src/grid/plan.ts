// plan.ts: do the files of one array hold exactly what its manifest entry says? Gives the plan for reading them.
import { closeSync, openSync, readSync } from "node:fs";
import { dataFault, type Fault } from "../base/errors.js";
import {
  type ArrayPlan,
  type ArrayRole,
  axisSize,
  bytesPerPoint,
  elementBytes,
  type FilePlan,
  isComplex,
  npyType,
} from "./arrays.js";
import { type FoundFile, findFiles, type Reach, sameFile } from "./files.js";
import { quoted, reasonOf } from "./jsontext.js";
import { type ArrayEntry, type Axis, directionNames, pairNames } from "./manifest.js";
import { isNpy, type NpyHeader, npyPrefixBytes, parseNpy } from "./npy.js";

/** What planArray needs to know of an array beside its manifest entry. */
export interface ArrayRequest {
  readonly name: string;
  readonly role: ArrayRole;
  readonly points: number;
  readonly bands: number;
  readonly components: number;
  readonly factor: number;
  /** Divisions of the mesh: the k axis of a .npy in C order may be spelled out as these. */
  readonly mesh?: readonly number[];
  readonly reach?: Reach;
}

/**
 * Finds the files of an array and checks type, axes and every byte length. `taken` maps file identities to the names
 * used by other arrays and is added to. Throws a data Fault that names array and file.
 */
export function planArray(
  directory: string,
  entry: ArrayEntry,
  asked: ArrayRequest,
  taken: Map<string, string>,
): ArrayPlan {
  const { mesh, reach, ...request } = asked;
  checkType(entry, request);
  checkAxes(entry, request);
  const layout = { ...request, axes: entry.axes, type: entry.type, byteOrder: entry.byteOrder };
  const place = (where: string, names: string | readonly string[], digests: Digests | undefined) => {
    const found = findFiles(directory, where, names, reach);
    for (const file of found) {
      const other = taken.get(file.identity);
      if (other !== undefined) throw sameFile(where, other, file.name);
    }
    for (const file of found) taken.set(file.identity, file.name);
    return { files: placeFiles(layout, found, mesh), digests: digestsOf(digests, request.name, found.length) };
  };
  const { files, sha256 } = entry;
  if (isPlain(files)) {
    if (!(sha256 === undefined || isPlain(sha256))) throw digestsUnlikeFiles(request.name);
    return { ...layout, ...place(`arrays.${request.name}`, files, sha256) };
  }
  if (sha256 !== undefined && isPlain(sha256)) throw digestsUnlikeFiles(request.name);
  const parts = namedComponents(entry, request).map(([name, names], component) => {
    const part = place(`arrays.${request.name}.files.${name}`, names, sha256?.[name]);
    return { ...part, files: part.files.map((file) => ({ ...file, component })) };
  });
  const digests = parts.flatMap((part) => part.digests ?? []);
  const all = parts.flatMap((part) => part.files);
  if (sha256 !== undefined && digests.length !== all.length) throw digestsUnlikeFiles(request.name);
  return { ...layout, files: all, digests: sha256 === undefined ? undefined : digests };
}

type Digests = string | readonly string[];
type ComponentName = (typeof directionNames | typeof pairNames)[number];

/** True for what is given as a whole and not for each component. */
function isPlain(value: object | string): value is string | string[] {
  return typeof value === "string" || Array.isArray(value);
}

function digestsUnlikeFiles(name: string): Fault {
  return dataFault(
    `arrays.${name}: sha256 is not given for the same components as files`,
    "Give sha256 as files are given.",
  );
}

/** The files of each component of an array that gives them so, in the components' order; exactly those of the array. */
function namedComponents(entry: ArrayEntry, request: ArrayRequest): [ComponentName, string | string[]][] {
  const expected = request.components === 1 ? [] : request.role === "hessian" ? pairNames : directionNames;
  const where = `arrays.${request.name}.files`;
  if (expected.length === 0)
    throw dataFault(`${where} is given for components; this array has one only`, "Name its files directly.");
  const files = entry.files as Partial<Record<ComponentName, string | string[]>>;
  const found = Object.keys(files).filter((name) => files[name as ComponentName] !== undefined);
  if (found.length !== expected.length || expected.some((name) => files[name] === undefined))
    throw dataFault(
      `${where} has ${found.length === 0 ? "no component" : found.join(", ")}; expected ${expected.join(", ")}`,
      "Name the files of each component once, and nothing else.",
    );
  return expected.map((name) => [name, files[name] as string | string[]]);
}

function checkType(entry: ArrayEntry, request: ArrayRequest): void {
  if (request.role === "energy" && isComplex(entry.type)) {
    throw dataFault(
      `arrays.${request.name}.type is ${quoted(entry.type)}: eigenvalues are real`,
      'Use "float64" or "float32".',
    );
  }
}

function checkAxes(entry: ArrayEntry, request: ArrayRequest): void {
  const component: Axis = request.role === "hessian" ? "pair" : "direction";
  const split = !isPlain(entry.files) && request.components > 1;
  const full: Axis[] = request.role === "energy" ? ["k", "band"] : ["k", ...(split ? [] : [component]), "bra", "ket"];
  const given = [...entry.axes].sort().join();
  if (given === [...full].sort().join()) return;
  // A scalar moment has one direction; its axis may be left out.
  if (request.components === 1 && given === "bra,k,ket") return;
  throw dataFault(
    `arrays.${request.name}.axes is ${quoted(entry.axes)}: it must hold each of ${quoted(full)} once, in any order${split ? `, without ${component}: its files are given for each component` : ""}`,
    "List the axes in the order in which the numbers lie in the file, slowest first.",
  );
}

type Layout = Omit<ArrayPlan, "files" | "digests">;

function placeFiles(plan: Layout, found: readonly FoundFile[], mesh: readonly number[] | undefined): FilePlan[] {
  const perPoint = bytesPerPoint(plan);
  if (!Number.isSafeInteger(perPoint * plan.points)) {
    throw dataFault(`arrays.${plan.name}: its size cannot be counted in bytes`, "Correct mesh.divisions or bands.");
  }
  let firstPoint = 0;
  const files: FilePlan[] = [];
  for (const file of found) {
    const header = headerOf(plan.name, file);
    const dataOffset = header?.dataOffset ?? 0;
    const bytes = file.bytes - dataOffset;
    const whole = found.length === 1;
    // The header first: a wrong type explains a wrong length better than the length does.
    if (header !== undefined) {
      const points = whole ? plan.points : Math.floor(bytes / perPoint);
      checkHeader(plan, file.name, header, points, whole ? mesh : undefined);
    }
    if (whole) checkWhole(plan, file.name, bytes);
    else if (bytes <= 0 || bytes % perPoint !== 0) {
      throw dataFault(
        `arrays.${plan.name}: file ${quoted(file.name)} holds ${bytes} bytes of numbers, not a whole number of k points of ${perPoint} bytes (${shapeText(plan, 1)})`,
        "Write whole k points to each file; check bands, type and axes.",
      );
    }
    const points = bytes / perPoint;
    files.push({ name: file.name, path: file.path, bytes: file.bytes, firstPoint, points, dataOffset });
    firstPoint += points;
  }
  if (firstPoint !== plan.points) {
    const difference = firstPoint - plan.points;
    throw dataFault(
      `arrays.${plan.name}: its ${found.length} files hold ${firstPoint} k points; expected ${plan.points}, so ${Math.abs(difference)} ${difference < 0 ? "are missing" : "are too many"}`,
      "Check that all files are there, and no other file matches the pattern.",
    );
  }
  return files;
}

function checkWhole(plan: Layout, name: string, bytes: number): void {
  const expected = bytesPerPoint(plan) * plan.points;
  if (bytes === expected) return;
  const difference = bytes < expected ? `${expected - bytes} are missing` : `${bytes - expected} are too many`;
  throw dataFault(
    `arrays.${plan.name}: file ${quoted(name)} holds ${bytes} bytes of numbers; expected ${expected} (${shapeText(plan, plan.points)}), so ${difference}`,
    "Check mesh.divisions, bands, type and axes, and that the file was written to its end without record marks.",
  );
}

function shapeText(plan: Layout, points: number): string {
  const sizes = plan.axes.map((axis) => `${axisSize(plan, axis, points)} ${axis}`);
  return `${sizes.join(" x ")} x ${elementBytes[plan.type]} bytes`;
}

/** The .npy header of a file of the array `name`; undefined for raw numbers. Throws a data Fault for a broken header. */
export function headerOf(name: string, file: FoundFile): NpyHeader | undefined {
  const where = `arrays.${name}: file ${quoted(file.name)}`;
  const buffer = Buffer.alloc(Math.min(file.bytes, npyPrefixBytes));
  let length: number;
  try {
    const handle = openSync(file.path, "r");
    try {
      length = readSync(handle, buffer, 0, Math.min(buffer.length, 16), 0);
      if (isNpy(buffer)) length = readSync(handle, buffer, 0, buffer.length, 0);
    } finally {
      closeSync(handle);
    }
  } catch (error) {
    throw dataFault(`${where} cannot be read: ${reasonOf(error)}`, "Check its permissions.", error);
  }
  const prefix = buffer.subarray(0, length);
  if (!isNpy(prefix) && !file.name.toLowerCase().endsWith(".npy")) return undefined;
  const header = parseNpy(prefix);
  if (typeof header === "string") throw dataFault(`${where}: ${header}`, "Write it again with numpy.save.");
  return header;
}

/** A header whose k axis is spelled out as (n1, n2, n3), or (n1, n2) where n3 is 1, as the one flat axis that those numbers make. */
function withFlatMesh(header: NpyHeader, plan: Layout, mesh: readonly number[] | undefined): NpyHeader {
  const spelled = header.shape.length - plan.axes.length + 1;
  const at = plan.axes.indexOf("k");
  const isMesh =
    mesh !== undefined &&
    !header.fortranOrder &&
    (spelled === 3 || (spelled === 2 && mesh[2] === 1)) &&
    mesh.slice(0, spelled).every((size, axis) => header.shape[at + axis] === size);
  if (!isMesh) return header;
  const flat = mesh.reduce((product, size) => product * size, 1);
  return { ...header, shape: [...header.shape.slice(0, at), flat, ...header.shape.slice(at + spelled)] };
}

function checkHeader(
  plan: Layout,
  name: string,
  header: NpyHeader,
  points: number,
  mesh: readonly number[] | undefined,
): void {
  const where = `arrays.${plan.name}: the .npy header of ${quoted(name)}`;
  const type = npyType(plan.type, plan.byteOrder);
  if (header.descr !== type) {
    throw dataFault(
      `${where} says type ${quoted(header.descr)}; expected ${quoted(type)} (${plan.type}, ${plan.byteOrder} endian)`,
      "Make type and byteOrder in the manifest agree with the file.",
    );
  }
  const expected = plan.axes.map((axis) => axisSize(plan, axis, points));
  // In Fortran order the first index of the shape runs fastest; `axes` is slowest first.
  const shape = header.fortranOrder ? [...header.shape].reverse() : withFlatMesh(header, plan, mesh).shape;
  if (shape.length !== expected.length || shape.some((size, index) => size !== expected[index])) {
    const order = header.fortranOrder ? " in Fortran order, slowest first" : "";
    const said = header.fortranOrder ? shape : header.shape;
    throw dataFault(
      `${where} says shape (${said.join(", ")})${order}; expected (${expected.join(", ")}) = (${plan.axes.join(", ")})`,
      "Make axes in the manifest agree with the order in which the numbers lie in the file.",
    );
  }
}

function digestsOf(given: Digests | undefined, name: string, files: number): string[] | undefined {
  if (given === undefined) return undefined;
  const digests = typeof given === "string" ? [given] : given;
  if (digests.length !== files) {
    throw dataFault(
      `arrays.${name}.sha256 holds ${digests.length} digests for ${files} files`,
      "Give one digest per file, in natural order of the names.",
    );
  }
  return digests.map((digest) => digest.toLowerCase());
}
