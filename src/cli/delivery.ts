// delivery.ts: where do the files of a result go, and can they go there at all? Asked before anything is computed.
import { accessSync, constants, existsSync, mkdirSync, statSync } from "node:fs";
import { dirname, join, resolve } from "node:path";
import { writeAtomically } from "../base/atomic.js";
import { usageFault } from "../base/errors.js";
import type { GlobalOptions } from "./context.js";
import type { Terminal } from "./terminal.js";

/** A file of a result: its name within --out, and its text. */
export type ResultFile = readonly [name: string, text: string];

const cure = "name a directory that exists or can be made";

/**
 * The directory of --out, undefined where it was not asked for. Throws a usage Fault where no file could be written there, so
 * that an hour of computing does not end in a refusal; makes nothing.
 */
export function checkedOut({ out }: GlobalOptions): string | undefined {
  if (out === undefined) return undefined;
  if (out === "") throw usageFault("--out is empty", cure);
  let standing = resolve(out);
  while (!existsSync(standing) && dirname(standing) !== standing) standing = dirname(standing);
  if (!statSync(standing).isDirectory()) throw usageFault(`--out ${out}: ${standing} is not a directory`, cure);
  try {
    accessSync(standing, constants.W_OK | constants.X_OK);
  } catch {
    throw usageFault(`--out ${out}: nothing can be written in ${standing}`, cure);
  }
  return out;
}

/** Writes the files of a result, each whole or not at all, and says so; does nothing where --out was not asked for. */
export function deliverFiles(out: string | undefined, files: readonly ResultFile[], terminal: Terminal): void {
  if (out === undefined) return;
  mkdirSync(out, { recursive: true });
  for (const [name, text] of files) writeAtomically(join(out, name), text);
  terminal.note(`wrote ${files.map(([name]) => name).join(", ")} to ${out}`);
}
