// files.ts: which files an array's `files` entry names, in which order, and whether they may be read at all.
import { lstatSync, realpathSync, statSync } from "node:fs";
import { isAbsolute, relative, resolve, sep } from "node:path";
import fastGlob from "fast-glob";
import { dataFault, type Fault } from "../base/errors.js";
import { quoted, reasonOf } from "./jsontext.js";

/** A file of an array as it was found on disk. */
export interface FoundFile {
  /** As the manifest or the pattern gives it, relative to the directory. */
  readonly name: string;
  readonly path: string;
  readonly bytes: number;
  /** Device and inode: equal for two names of one file. */
  readonly identity: string;
}

const collator = new Intl.Collator("en", { numeric: true });
const mostFiles = 100_000;
const mostStars = 4;

/** Natural order: runs of digits compare as numbers, 2 before 10; ties by code unit. */
export function naturalOrder(a: string, b: string): number {
  return collator.compare(a, b) || (a < b ? -1 : a > b ? 1 : 0);
}

/** Where the files of an array may lie: inside the grid's directory, or anywhere (files that the user names in person). */
export type Reach = "inside" | "anywhere";

/**
 * The files of one array in natural order. All are regular files, each named once; inside `directory` unless `reach` is "anywhere".
 * Throws a data Fault that starts with `array`.
 */
export function findFiles(
  directory: string,
  array: string,
  files: string | readonly string[],
  reach: Reach = "inside",
): FoundFile[] {
  const root = realpathSync(directory);
  const entries = typeof files === "string" ? [files] : files;
  const names: string[] = [];
  for (const entry of entries) {
    for (const name of namesOfEntry(root, array, entry, reach)) names.push(name);
    // Counted as they come: many patterns that match many files must not fill the memory.
    if (names.length > mostFiles) {
      throw dataFault(`${array}: more than ${mostFiles} files are named`, "Join them into fewer, and name each once.");
    }
  }
  const found = names.sort(naturalOrder).map((name) => examine(root, array, name, reach));
  const seen = new Map<string, string>();
  for (const file of found) {
    const other = seen.get(file.identity);
    if (other !== undefined) throw sameFile(array, other, file.name);
    seen.set(file.identity, file.name);
  }
  return found;
}

/** The Fault for a file that two entries name; `other` is the earlier name. */
export function sameFile(array: string, other: string, name: string): Fault {
  const twice =
    other === name ? `file ${quoted(name)} is named twice` : `${quoted(other)} and ${quoted(name)} are one file`;
  return dataFault(`${array}: ${twice}`, "Name each file once, in one array.");
}

function namesOfEntry(root: string, array: string, entry: string, reach: Reach): string[] {
  checkName(array, entry, reach);
  // A name that exists is a name, even where it holds a character that patterns use.
  if (exists(resolve(root, entry)) || !/[*?[]/.test(entry)) return [entry.replace(/^(?:\.\/+)+/, "")];
  if ((entry.match(/\*/g) ?? []).length > mostStars) {
    throw dataFault(
      `${array}: the pattern ${quoted(entry)} has more than ${mostStars} stars`,
      "Use a simpler pattern.",
    );
  }
  let names: string[];
  try {
    names = fastGlob.sync(entry, {
      cwd: root,
      onlyFiles: false,
      followSymbolicLinks: false,
      // Both can be made to expand without bound by a hostile manifest.
      braceExpansion: false,
      extglob: false,
    });
  } catch (error) {
    throw dataFault(`${array}: the pattern ${quoted(entry)} cannot be used`, "Use *, ? and [...] only.", error);
  }
  if (names.length === 0) {
    throw dataFault(`${array}: no file matches ${quoted(entry)}`, "Check the pattern and that the files were copied.");
  }
  return names;
}

function checkName(array: string, entry: string, reach: Reach): void {
  const cure = "Name files inside the band grid's directory only.";
  if (entry.includes("\0")) throw dataFault(`${array}: file name ${quoted(entry)} holds a zero byte`, cure);
  if (reach === "anywhere") return;
  if (isAbsolute(entry) || /^[A-Za-z]:[\\/]/.test(entry)) {
    throw dataFault(`${array}: ${quoted(entry)} is an absolute path`, cure);
  }
  if (entry.split(/[\\/]/).includes("..")) {
    throw dataFault(`${array}: ${quoted(entry)} leads out of the directory`, cure);
  }
}

function examine(root: string, array: string, name: string, reach: Reach): FoundFile {
  const path = resolve(root, name);
  let real: string;
  let state: ReturnType<typeof statSync>;
  try {
    real = realpathSync(path);
    state = statSync(real, { bigint: false });
  } catch (error) {
    throw dataFault(
      `${array}: file ${quoted(name)} cannot be read: ${reasonOf(error)}`,
      "Check the name and that the file was copied.",
      error,
    );
  }
  const inside = relative(root, real);
  const leadsOut = inside === "" || inside.split(sep)[0] === ".." || isAbsolute(inside);
  if (leadsOut && reach === "inside") {
    throw dataFault(
      `${array}: ${quoted(name)} is a link that leads out of the directory`,
      "Copy the file into the directory.",
    );
  }
  if (!state.isFile()) {
    const kind = state.isDirectory() ? "a directory" : "a device, a pipe or a socket";
    throw dataFault(`${array}: ${quoted(name)} is ${kind}, not a regular file`, "Name regular files only.");
  }
  return { name, path: real, bytes: state.size, identity: `${state.dev}:${state.ino}` };
}

function exists(path: string): boolean {
  try {
    lstatSync(path);
    return true;
  } catch {
    return false;
  }
}
