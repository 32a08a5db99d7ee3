// command.ts: how do tests run the built command, as a person's shell would?
import { spawn } from "node:child_process";
import { mkdtempSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { buildOnce, repository } from "./build-once.js";

/** What the shell sees of a finished run. `status` is null when a signal ended it. */
export interface Finished {
  readonly status: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

export interface RunOptions {
  readonly cwd?: string;
  readonly env?: Readonly<Record<string, string | undefined>>;
  /** Sent after the given time, in ms. */
  readonly signal?: { readonly name: NodeJS.Signals; readonly afterMs: number };
}

buildOnce();

/** Runs `tidegauge` with these arguments from dist; resolves when it has ended, whatever its status. */
export function runCommand(args: readonly string[], options: RunOptions = {}): Promise<Finished> {
  const child = spawn(process.execPath, [join(repository, "bin", "tidegauge.js"), ...args], {
    cwd: options.cwd ?? repository,
    env: { ...process.env, ...options.env },
    stdio: ["ignore", "pipe", "pipe"],
  });
  const text = { stdout: "", stderr: "" };
  for (const stream of ["stdout", "stderr"] as const) {
    child[stream].setEncoding("utf8").on("data", (part: string) => {
      text[stream] += part;
    });
  }
  const { signal } = options;
  const timer = signal && setTimeout(() => child.kill(signal.name), signal.afterMs);
  return new Promise((resolve, reject) => {
    child.on("error", reject);
    child.on("close", (status) => {
      clearTimeout(timer);
      resolve({ status, ...text });
    });
  });
}

/** A new empty directory under the system's temporary one. */
export function freshDirectory(): string {
  return mkdtempSync(join(tmpdir(), "tidegauge-test-"));
}
