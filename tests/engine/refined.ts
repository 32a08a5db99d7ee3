// refined.ts: test material: sample models on disk with their second derivatives, and refined sweeps of them in this process.
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import type { Triple } from "../../src/grid/grid.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { writeSample } from "../../src/samples/write.js";
import { type SweepOptions, sweep, sweepOptions } from "../../src/studies/sweep.js";

const made: string[] = [];

afterAll(() => {
  for (const path of made) rmSync(path, { recursive: true, force: true });
});

/** A sample model on disk, removed after the file's tests; with its second derivatives unless told otherwise. */
export function sampled(
  name: string,
  set: Readonly<Record<string, string>>,
  divisions: Triple,
  offset: Triple = [0, 0, 0],
  hessian = true,
): string {
  const path = mkdtempSync(join(tmpdir(), "refine-test-"));
  made.push(path);
  const directory = join(path, "grid");
  writeSample(buildSample(name, set), { directory, divisions, offset, hessian });
  return directory;
}

/** A sweep in this process alone, refined unless another method is given. */
export const refined = (directory: string, options: Partial<SweepOptions>): Promise<CurvesResult> =>
  sweep(directory, sweepOptions.parse(options), { workers: 1 });
