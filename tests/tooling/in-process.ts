// in-process.ts: how do tests run many command lines quickly? In this process, from the sources, with a terminal that records.

import type { Context } from "../../src/cli/context.js";
import { report } from "../../src/cli/outcome.js";
import { createProgram } from "../../src/cli/program.js";
import type { Terminal } from "../../src/cli/terminal.js";
import { resultJson } from "../../src/report/json.js";
import type { Finished } from "./command.js";

/** What `tidegauge` with these arguments prints, and its exit status, but without a process or workers of its own. */
export async function runInProcess(args: readonly string[]): Promise<Finished> {
  const text = { stdout: "", stderr: "" };
  const onStderr = (line: string): void => {
    text.stderr += `${line}\n`;
  };
  const terminal: Terminal = {
    print(line) {
      text.stdout += `${line}\n`;
    },
    printJson(result) {
      text.stdout += resultJson(result);
    },
    note: onStderr,
    warn: (line) => onStderr(`warning: ${line}`),
    fail: (label, line) => onStderr(label === "" ? line : `${label} ${line}`),
    drawsProgress: false,
    columns: 96,
  };
  const context: Context = {
    terminal,
    status: 0,
    progress: () => ({ advance: () => {}, end: () => {} }),
    interruption: () => new AbortController().signal,
  };
  try {
    const program = await createProgram(context, args);
    await program.parseAsync([...args], { from: "user" });
    return { status: context.status, ...text };
  } catch (error) {
    const status = report(error, terminal);
    return { status, ...text };
  }
}
