// list-patch.ts: enters a patch that was written into the manifest of its parent.
import { join } from "node:path";
import { writeAtomically } from "../base/atomic.js";
import { parseJson, readManifestBytes } from "./jsontext.js";
import { manifestName } from "./manifest.js";
import { openGrid, parseManifest } from "./open.js";

/**
 * Adds `name` to the patches that the grid in `directory` lists, which must then open as a whole: throws the data Fault, and leaves
 * the manifest as it was, where it does not. Does nothing where the name is listed already.
 */
export function listPatch(directory: string, name: string): void {
  const path = join(directory, manifestName);
  const bytes = Buffer.from(readManifestBytes(path));
  const listed = parseManifest(bytes).patches ?? [];
  if (listed.includes(name)) return;
  const manifest = parseJson(bytes, manifestName) as Record<string, unknown>;
  writeAtomically(path, `${JSON.stringify({ ...manifest, patches: [...listed, name] }, null, 2)}\n`);
  try {
    openGrid(directory);
  } catch (error) {
    writeAtomically(path, bytes);
    throw error;
  }
}
