// version.ts: the version of the package, as results and --version tell it.
import { readFileSync } from "node:fs";

const manifest: unknown = JSON.parse(readFileSync(new URL("../../package.json", import.meta.url), "utf8"));

/** Version of the installed package. */
export const productVersion: string =
  typeof manifest === "object" && manifest !== null && "version" in manifest ? String(manifest.version) : "unknown";
