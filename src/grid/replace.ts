// replace.ts: puts a finished directory in the place of an earlier band grid of ours, and of nothing else.
import {
  existsSync,
  lstatSync,
  mkdirSync,
  readdirSync,
  realpathSync,
  renameSync,
  rmdirSync,
  unlinkSync,
} from "node:fs";
import { basename, dirname, join, resolve } from "node:path";
import { type Fault, usageFault } from "../base/errors.js";
import { quoted, readManifestBytes, reasonOf } from "./jsontext.js";
import { writerName } from "./layout.js";
import { manifestName } from "./manifest.js";
import { openGrid, parseManifest } from "./open.js";

/**
 * The directory to write to, links resolved. Throws a usage Fault when something stands there that may not be replaced:
 * a file, or a directory that is neither empty nor a band grid that this program wrote, with nothing else in it.
 */
export function checkTarget(directory: string): string {
  const path = resolve(directory);
  if (!existsSync(path)) {
    if (isDanglingLink(path)) throw taken(path, "is a link that leads nowhere");
    return path;
  }
  const target = realpathSync(path);
  if (!lstatSync(target).isDirectory()) throw taken(path, "exists and is not a directory");
  const names = readdirSync(target);
  if (names.length > 0) ownFiles(target, names, path);
  return target;
}

function isDanglingLink(path: string): boolean {
  return lstatSync(path, { throwIfNoEntry: false })?.isSymbolicLink() ?? false;
}

function taken(path: string, why: string): Fault {
  return usageFault(`${quoted(path)} ${why}`, "Name another directory, or remove this one yourself.");
}

/** Checks that a directory holds a band grid of ours and nothing else. */
function ownFiles(target: string, names: readonly string[], shown: string): void {
  if (!names.includes(manifestName)) throw taken(shown, "exists, is not empty, and is not a band grid");
  let allowed: Set<string>;
  let patches: string[];
  try {
    const { provenance } = parseManifest(readManifestBytes(join(target, manifestName)));
    const writer = typeof provenance === "object" && provenance !== null && "writer" in provenance && provenance.writer;
    if (writer !== writerName) throw taken(shown, "is a band grid that this program did not write");
    const grid = openGrid(target);
    patches = grid.patches.map(({ facts }) => (facts.patch?.name ?? "").split(/[\\/]/)[0]);
    const arrays = [...grid.arrays, ...(grid.pointArrays ?? [])];
    allowed = new Set(arrays.flatMap((array) => array.files.map((file) => file.name)));
  } catch (error) {
    if (error instanceof Error && error.message.includes("did not write")) throw error;
    throw taken(shown, "exists and holds a band grid that cannot be read");
  }
  const foreign = names.find((name) => name !== manifestName && !allowed.has(name));
  if (foreign !== undefined && patches.includes(foreign))
    throw taken(shown, `has the patch ${quoted(foreign)}, and a grid with patches is never replaced`);
  if (foreign !== undefined) throw taken(shown, `holds ${quoted(foreign)}, which is no part of its band grid`);
}

/** Makes and returns a new directory beside `target`. Throws a usage Fault when that is not possible. */
export function makeBeside(target: string): string {
  try {
    mkdirSync(dirname(target), { recursive: true });
    for (let attempt = 0; ; attempt++) {
      const path = join(dirname(target), `${basename(target)}.partial-${process.pid}-${attempt}`);
      if (existsSync(path)) continue;
      mkdirSync(path);
      return path;
    }
  } catch (error) {
    throw usageFault(`no directory can be made beside ${quoted(target)}: ${reasonOf(error)}`, "Choose another place.");
  }
}

/** Moves `finished` to `target`, whose earlier content (checked again) is removed only after that. */
export function putInPlace(finished: string, target: string): void {
  const isThere = existsSync(target);
  if (isThere) checkTarget(target);
  if (!isThere || readdirSync(target).length === 0) {
    // Renaming onto an empty directory replaces it.
    renameSync(finished, target);
    return;
  }
  const old = makeBeside(target);
  renameSync(target, old);
  try {
    renameSync(finished, target);
  } catch (error) {
    renameSync(old, target);
    throw error;
  }
  removeFlat(old);
}

/** Removes a directory that holds files only. */
export function removeFlat(directory: string): void {
  if (!existsSync(directory)) return;
  for (const name of readdirSync(directory)) unlinkSync(join(directory, name));
  rmdirSync(directory);
}
