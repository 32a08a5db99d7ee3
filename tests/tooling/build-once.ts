// build-once.ts: is dist as new as the sources, and if not, how is it built? The tests of tests/cli run what is in dist.
import { spawnSync } from "node:child_process";
import { existsSync, readdirSync, statSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

/** Absolute path of the repository. */
export const repository = fileURLToPath(new URL("../..", import.meta.url));

function newestChangeMs(directory: string): number {
  const names = readdirSync(directory, { recursive: true, encoding: "utf8" });
  return Math.max(0, ...names.map((name) => statSync(join(directory, name)).mtimeMs));
}

function isStale(): boolean {
  const stamp = join(repository, "dist", ".tsbuildinfo");
  const started = join(repository, "dist", "cli", "main.js");
  if (!existsSync(stamp) || !existsSync(started)) return true;
  return newestChangeMs(join(repository, "src")) > statSync(stamp).mtimeMs;
}

/**
 * Builds dist when a source is newer than the last build. Type errors are printed and do not stop the tests: the
 * compiler writes its output all the same, and the build step of `npm test` fails by itself.
 */
export function buildOnce(): void {
  if (!isStale()) return;
  const built = spawnSync("npm", ["run", "--silent", "build"], { cwd: repository, encoding: "utf8" });
  if (built.status !== 0) console.warn(`npm run build failed:\n${built.stdout}${built.stderr}`);
}

/** What vitest calls before the first test. */
export function setup(): void {
  buildOnce();
}
