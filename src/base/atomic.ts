// atomic.ts: writes a file beside its place and renames it, so that an earlier result is never half overwritten.
import { sync as writeBesideAndRename } from "write-file-atomic";
import { Fault } from "./errors.js";

/** Writes text to a file, whole or not at all. Throws an internal Fault that names the file when it cannot. */
export function writeFileAtomically(path: string, text: string): void {
  try {
    writeBesideAndRename(path, text, { encoding: "utf8" });
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    throw new Fault("internal", `cannot write ${path}: ${reason}`, "check that the directory exists, is writable and has room", error);
  }
}
