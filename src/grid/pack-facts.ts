// pack-facts.ts: how do a short description of arrays on disk and the headers of its .npy files become a whole manifest?
import { basename, dirname, resolve } from "node:path";
import { dataFault, isFault } from "../base/errors.js";
import { findFiles } from "./files.js";
import { parseJson, quoted, readManifestBytes } from "./jsontext.js";
import { type Axis, formatName, type NumberType } from "./manifest.js";
import type { NpyHeader } from "./npy.js";
import type { ManifestSource } from "./open.js";
import { headerOf } from "./plan.js";

/** A manifest without gaps, and a sentence for everything that it owes to file headers or to a default. */
export interface CompletedFacts {
  readonly source: ManifestSource;
  readonly inferred: readonly string[];
}

type Fields = Record<string, unknown>;

const isFields = (value: unknown): value is Fields =>
  typeof value === "object" && value !== null && !Array.isArray(value);

/**
 * Reads a facts file: a manifest whose files may lie anywhere (names count from the facts file's directory) and which may leave out
 * `format`, and whatever the headers of its .npy files tell: `type`, `byteOrder`, `axes`, `bands`, `mesh.divisions`.
 * Throws a data Fault for a file that is no such thing, or a header that contradicts itself; what is missing still is for openManifest to say.
 */
export function completeFacts(path: string): CompletedFacts {
  const where = basename(path);
  const directory = dirname(resolve(path));
  const facts = parseFacts(path, where);
  refusePatches(facts, where);
  const inferred: string[] = [];
  const arrays = isFields(facts.arrays) ? facts.arrays : {};
  const moments = isFields(arrays.moments) ? arrays.moments : {};
  const completed: Fields = { ...arrays };
  let energy: Seen | undefined;
  const complete = (name: string, entry: unknown, component?: Axis): unknown => {
    if (!isFields(entry)) return entry;
    const seen = examine(directory, name, entry, component);
    if (name === "energy") energy = seen;
    inferred.push(...(seen?.said ?? []));
    return seen === undefined ? entry : { ...seen.filled, ...entry };
  };
  if (arrays.energy !== undefined) completed.energy = complete("energy", arrays.energy);
  if (arrays.velocity !== undefined) completed.velocity = complete("velocity", arrays.velocity, "direction");
  if (isFields(arrays.moments))
    completed.moments = Object.fromEntries(
      Object.entries(moments).map(([name, entry]) => {
        return [name, complete(`moments.${name}`, entry, "direction")];
      }),
    );
  if (arrays.hessian !== undefined) completed.hessian = complete("hessian", arrays.hessian, "pair");
  const whole = {
    format: formatName,
    ...sizesOf(facts, energy, inferred),
    ...facts,
    arrays: isFields(facts.arrays) ? completed : facts.arrays,
  };
  const mesh = meshOf(facts, energy, inferred);
  const bytes = Buffer.from(JSON.stringify(mesh === undefined ? whole : { ...whole, mesh }));
  return { source: { directory, bytes, where, reach: "anywhere" }, inferred };
}

function parseFacts(path: string, where: string): Fields {
  const cure = "Name a JSON file with the fields of a band grid's manifest; tidegauge pack --help shows one.";
  let value: unknown;
  try {
    value = parseJson(readManifestBytes(path), where);
  } catch (error) {
    throw isFault(error) ? dataFault(error.message, cure, error) : error;
  }
  if (isFields(value)) return value;
  throw dataFault(`${where}: it is ${quoted(value)}, not an object {...}`, cure);
}

function refusePatches(facts: Fields, where: string): void {
  for (const field of ["patch", "patches"])
    if (facts[field] !== undefined)
      throw dataFault(
        `${where}: ${field} cannot be packed from a description`,
        "Pack the parent's mesh without it; write the patch as a directory of its own inside the result, and list it there.",
      );
}

/** What the first file of an array tells. */
interface Seen {
  readonly file: string;
  readonly axes: readonly Axis[];
  readonly header: NpyHeader;
  readonly files: number;
  /** Fields for the entry; those that it gives win. */
  readonly filled: Fields;
  readonly said: readonly string[];
}

const types: Record<string, NumberType> = { f4: "float32", f8: "float64", c8: "complex64", c16: "complex128" };

/** The first component's file names of an entry; undefined where it has none that could be looked for. */
function namesOf({ files }: Fields): string[] | undefined {
  const named = isFields(files) ? Object.values(files)[0] : files;
  const names: unknown = typeof named === "string" ? [named] : named;
  return Array.isArray(names) && names.every((each): each is string => typeof each === "string") ? names : undefined;
}

/** Undefined where the files are raw numbers, or the entry is too broken to be looked into: the schema will say how. */
function examine(directory: string, name: string, entry: Fields, component: Axis | undefined): Seen | undefined {
  const names = namesOf(entry);
  if (names === undefined) return undefined;
  const files = findFiles(directory, `arrays.${name}`, names, "anywhere");
  const header = files.length === 0 ? undefined : headerOf(name, files[0]);
  if (header === undefined) return undefined;
  const file = basename(files[0].name);
  // A scalar has one direction, which may be an index of size 1 or no index at all.
  const single = entry.kind === "scalar" && !(header.shape.length > 3 && header.shape.at(-3) === 1);
  const whole = isFields(entry.files) || component === undefined || single ? [] : [component];
  const full: Axis[] = name === "energy" ? ["k", "band"] : ["k", ...whole, "bra", "ket"];
  const axes = Array.isArray(entry.axes) ? (entry.axes as Axis[]) : axesOf(name, file, header, full);
  const [, order, code] = /^([<>=|]?)(\w+)$/.exec(header.descr) ?? [];
  const type = types[code ?? ""];
  if (type === undefined)
    throw dataFault(
      `arrays.${name}: ${quoted(file)} holds numbers of type ${quoted(header.descr)}; expected ${name === "energy" ? "f4 or f8" : "c8, c16, f4 or f8"}`,
      `Convert it, e.g. with numpy: a.astype("${name === "energy" ? "float64" : "complex128"}").`,
    );
  const filled = { type, ...(order === ">" ? { byteOrder: "big" } : {}), axes };
  const missing = ["type", "axes"].filter((field) => entry[field] === undefined);
  const indices = header.fortranOrder ? [...axes].reverse() : axes;
  const words = missing.map((field) =>
    field === "type"
      ? `type ${type} (from the header of ${file})`
      : `indices ${indices.join(", ")} (assumed${header.fortranOrder ? "; stored in Fortran order" : ""})`,
  );
  const said = words.length === 0 ? [] : [`arrays.${name}: ${words.join("; ")}`];
  return { file, axes, header, files: files.length, filled, said };
}

const shapeText = ({ shape }: NpyHeader): string => `(${shape.join(", ")})`;

/** The axes of an array whose indices are, in NumPy's order, `full`, with k as one index or as those of the mesh. */
function axesOf(name: string, file: string, header: NpyHeader, full: readonly Axis[]): Axis[] {
  const where = `arrays.${name}: ${quoted(file)} has the shape ${shapeText(header)}`;
  const extra = header.shape.length - full.length;
  if (extra < 0 || extra > 2)
    throw dataFault(`${where}; expected the indices ${full.join(", ")}`, `Say in arrays.${name}.axes how it lies.`);
  if (extra > 0 && header.fortranOrder)
    throw dataFault(
      `${where} in Fortran order, so i1 runs fastest; the format wants i3 to run fastest`,
      "Save it again in C order, e.g. with numpy: numpy.ascontiguousarray(a).",
    );
  return header.fortranOrder ? [...full].reverse() : [...full];
}

function sizesOf(facts: Fields, energy: Seen | undefined, inferred: string[]): Fields {
  if (facts.bands !== undefined) return {};
  if (energy === undefined) {
    const entry = isFields(facts.arrays) ? facts.arrays.energy : undefined;
    // Where the energies' entry is what is wrong, that is to be said, and not that bands is missing.
    return isFields(entry) && namesOf(entry) !== undefined ? {} : { bands: 1 };
  }
  const shape = energy.header.fortranOrder ? [...energy.header.shape].reverse() : energy.header.shape;
  // Counted from the end: k may be spelled out before it.
  const fromEnd = energy.axes.length - energy.axes.indexOf("band");
  const bands = energy.axes[0] === "band" ? shape[0] : shape[shape.length - fromEnd];
  inferred.push(`bands: ${bands} (from the shape ${shapeText(energy.header)} of ${energy.file})`);
  return { bands };
}

/** The mesh with the divisions that the energies' shape spells out; undefined where the facts have them, or nothing has. */
function meshOf(facts: Fields, energy: Seen | undefined, inferred: string[]): Fields | undefined {
  const given = facts.mesh ?? {};
  if (!isFields(given) || given.divisions !== undefined || energy === undefined) return undefined;
  const extra = energy.header.shape.length - energy.axes.length;
  const at = energy.axes.indexOf("k");
  const isLayer = isFields(facts.lattice) && facts.lattice.periodic === 2;
  if (extra !== 2 && !(extra === 1 && isLayer)) return undefined;
  if (energy.header.fortranOrder || energy.files > 1 || at < 0) return undefined;
  const spelled = energy.header.shape.slice(at, at + extra + 1);
  const divisions = extra === 2 ? spelled : [...spelled, 1];
  const start = given.offset === undefined ? "; mesh.offset: 0, 0, 0 (assumed)" : "";
  inferred.push(
    `mesh.divisions: ${divisions.join(", ")} (from the shape ${shapeText(energy.header)} of ${energy.file})${start}`,
  );
  return { ...given, divisions };
}
