// jobfile.ts: how does a file of options, or a result that embeds one, become options that the command line may override?
import { readFileSync, statSync } from "node:fs";
import { usageFault } from "../base/errors.js";

const largestJobBytes = 256 * 1024 * 1024;

function parsedFile(path: string): unknown {
  try {
    const facts = statSync(path);
    if (!facts.isFile() || facts.size > largestJobBytes) throw new Error("it is no regular file of a sensible size");
    return JSON.parse(readFileSync(path, "utf8"));
  } catch (error) {
    throw usageFault(
      `--job ${path} cannot be read as JSON: ${error instanceof Error ? error.message : String(error)}`,
      "give a JSON file of options, or a result (curves.json), which embeds the job that made it",
    );
  }
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === "object" && value !== null && !Array.isArray(value);

/** The options of a job file for one study. Throws a usage Fault when the file is no job, or the job of another study. */
export function readJob(path: string, study: string): Record<string, unknown> {
  const content = parsedFile(path);
  const job = isRecord(content) && "format" in content && "job" in content ? content.job : content;
  if (!isRecord(job)) throw usageFault(`--job ${path} holds no options`, 'write e.g. { "response": ["spin:hall"] }');
  const { study: stated, ...options } = job;
  if (stated !== undefined && stated !== study)
    throw usageFault(
      `--job ${path} is a job of "${String(stated)}", not of "${study}"`,
      `run tidegauge ${String(stated)}`,
    );
  return options;
}
