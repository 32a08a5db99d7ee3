// jsontext.ts: turns the bytes of a manifest into a JSON value, refusing what would be read differently by others.
import { closeSync, constants, fstatSync, openSync, readSync } from "node:fs";
import { dataFault } from "../base/errors.js";

/** The largest manifest that is read, bytes. */
export const manifestLimitBytes = 4 * 1024 * 1024;
const deepest = 32;

/** A name or value as it may stand in a one-line message: quoted, control characters escaped, cut at 60 characters. */
export function quoted(value: unknown): string {
  const text = JSON.stringify(value) ?? String(value);
  // JSON leaves the C1 controls and line separators as they are; a terminal would act on them.
  const safe = text.replace(/[\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069]/g, "?");
  return safe.length > 60 ? `${safe.slice(0, 57)}...` : safe;
}

/** The bytes of the regular file `path`; throws a data Fault when it is missing, no regular file, or larger than 4 MB. */
export function readManifestBytes(path: string): Buffer {
  let handle: number;
  try {
    // Without O_NONBLOCK, opening a FIFO waits for a writer for ever.
    handle = openSync(path, constants.O_RDONLY | constants.O_NONBLOCK);
  } catch (error) {
    throw dataFault(
      `${quoted(path)} cannot be opened: ${reasonOf(error)}`,
      "Name a directory that holds a bandgrid.json.",
      error,
    );
  }
  try {
    const state = fstatSync(handle);
    if (!state.isFile()) throw dataFault(`${quoted(path)} is not a regular file`, "Put the manifest there as a file.");
    if (state.size > manifestLimitBytes) {
      throw dataFault(
        `${quoted(path)} has ${state.size} bytes; a manifest may have ${manifestLimitBytes}`,
        "Keep large things out of provenance and tags.",
      );
    }
    const bytes = Buffer.alloc(state.size);
    let done = 0;
    while (done < bytes.length) {
      const got = readSync(handle, bytes, done, bytes.length - done, done);
      if (got === 0) break;
      done += got;
    }
    return bytes.subarray(0, done);
  } finally {
    closeSync(handle);
  }
}

/** The plain reason of a file system error, for the end of a message. */
export function reasonOf(error: unknown): string {
  const code = error instanceof Error && "code" in error ? String(error.code) : "";
  const words: Record<string, string> = {
    ENOENT: "there is no such file",
    ENOTDIR: "a part of the path is not a directory",
    EACCES: "no permission",
    EISDIR: "it is a directory",
    ELOOP: "its links run in a circle",
    ENAMETOOLONG: "the name is too long",
    EEXIST: "it exists already",
    ENOSPC: "the disk is full",
    EROFS: "the disk is read-only",
  };
  return words[code] ?? (code === "" ? quoted(String(error)) : code);
}

/** The JSON value of `bytes`. Throws a data Fault for text that is not UTF-8 or not JSON, too deep, or names a key twice. */
export function parseJson(bytes: Uint8Array, where: string): unknown {
  let text: string;
  try {
    text = new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch (error) {
    throw dataFault(`${where} is not UTF-8 text`, "Save it as UTF-8.", error);
  }
  checkNesting(text, where);
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (error) {
    const said = error instanceof Error ? error.message : String(error);
    throw dataFault(`${where} is not JSON: ${placeOf(said, text)}`, "Check it with any JSON tool.", error);
  }
  checkKeys(text, where);
  return value;
}

/** The parser's complaint on one line, its character position turned into line and column. */
function placeOf(said: string, text: string): string {
  const oneLine = said.replace(/, "[\s\S]*$/, "").replace(/[\u0000-\u001f\u007f-\u009f\u2028\u2029]/g, " ");
  const found = /at position (\d+)/.exec(said);
  if (found === null) return oneLine;
  const before = text.slice(0, Number(found[1])).split("\n");
  return oneLine.replace(/at position \d+/, `at line ${before.length}, column ${before[before.length - 1].length + 1}`);
}

/** One past the closing quote of the string that starts at `start`. */
function endOfString(text: string, start: number): number {
  let at = start + 1;
  while (at < text.length && text[at] !== '"') at += text[at] === "\\" ? 2 : 1;
  return at + 1;
}

function checkNesting(text: string, where: string): void {
  let depth = 0;
  for (let at = 0; at < text.length; at++) {
    const sign = text[at];
    if (sign === '"') at = endOfString(text, at) - 1;
    else if (sign === "{" || sign === "[") depth++;
    else if (sign === "}" || sign === "]") depth--;
    if (depth > deepest) {
      throw dataFault(`${where} is nested deeper than ${deepest} levels`, "Flatten provenance or tags.");
    }
  }
}

/** Walks text that is known to be JSON and refuses a key named twice in one object, and `__proto__`. */
function checkKeys(text: string, where: string): void {
  const open: (Set<string> | undefined)[] = [];
  for (let at = 0; at < text.length; at++) {
    const sign = text[at];
    if (sign === "{") open.push(new Set());
    else if (sign === "[") open.push(undefined);
    else if (sign === "}" || sign === "]") open.pop();
    if (sign !== '"') continue;
    const end = endOfString(text, at);
    const keys = open[open.length - 1];
    if (keys !== undefined && /^\s*:/.test(text.slice(end, end + 64))) {
      const key = String(JSON.parse(text.slice(at, end)));
      if (keys.has(key)) throw dataFault(`${where} names ${quoted(key)} twice in one object`, "Keep one of the two.");
      if (key === "__proto__") throw dataFault(`${where} uses the name "__proto__"`, "Choose another name.");
      keys.add(key);
    }
    at = end - 1;
  }
}
