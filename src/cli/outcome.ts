// outcome.ts: what does the shell get when a command ends: which exit status, and which two lines when it failed?
import { CommanderError } from "commander";
import { exitStatus, isFault } from "../base/errors.js";
import type { Terminal } from "./terminal.js";

/** Exit status and at most two lines for stderr: what and where, then what to do. */
export interface Outcome {
  readonly status: number;
  readonly message?: string;
  readonly cure?: string;
}

/** What the system's refusals mean, by code. */
const systemWords: Readonly<Record<string, string>> = {
  EACCES: "permission denied",
  EPERM: "not permitted",
  ENOENT: "no such file or directory",
  ENOTDIR: "a part of the path is a file, not a directory",
  EISDIR: "is a directory",
  EEXIST: "exists already",
  ENOSPC: "no space left on the disk",
  EROFS: "the file system is read-only",
  EMFILE: "too many open files",
};

/** Turns whatever was thrown into an outcome; never throws. */
export function outcomeOf(error: unknown): Outcome {
  if (isFault(error)) return { status: exitStatus[error.kind], message: error.message, cure: error.cure };
  if (error instanceof CommanderError) return usageOutcome(error);
  const refusal = systemRefusal(error);
  if (refusal !== undefined) {
    return { status: exitStatus.internal, message: refusal, cure: "check the path and its permissions" };
  }
  const words = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  return {
    status: exitStatus.internal,
    message: `an error of the program, not of your data, sorry (${words})`,
    cure: "please report it with the trace that TIDEGAUGE_TRACE=1 prints",
  };
}

/** What the system refused to do with which path; undefined for an error of another kind. */
function systemRefusal(error: unknown): string | undefined {
  if (!(error instanceof Error)) return undefined;
  const { code, path } = error as NodeJS.ErrnoException;
  return code !== undefined && path !== undefined && code in systemWords ? `${path}: ${systemWords[code]}` : undefined;
}

/** Help and version end with 0; everything else that the parser throws is wrong usage. */
function usageOutcome(error: CommanderError): Outcome {
  if (error.exitCode === 0) return { status: 0 };
  if (error.code === "commander.help") return { status: exitStatus.usage };
  const [first, second] = error.message.replace(/^error: /, "").split("\n");
  const suggestion = /^\((.*)\)$/.exec(second ?? "")?.[1];
  return {
    status: exitStatus.usage,
    message: first,
    cure: suggestion ?? "see tidegauge --help, or --help after the command",
  };
}

/** Prints what an error has to say, in two lines at most (with TIDEGAUGE_TRACE=1 also the trace); returns the exit status. */
export function report(error: unknown, terminal: Terminal): number {
  const { status, message, cure } = outcomeOf(error);
  const oneLine = (text: string): string => text.replace(/\s*[\r\n]+\s*/g, " ");
  if (message !== undefined) terminal.fail("tidegauge:", oneLine(message));
  if (cure !== undefined) terminal.fail("", `  ${oneLine(cure)}`);
  if (process.env.TIDEGAUGE_TRACE === "1" && error instanceof Error) terminal.fail("", traceOf(error));
  return status;
}

function traceOf(error: Error): string {
  const cause = error.cause instanceof Error ? `\ncaused by ${traceOf(error.cause)}` : "";
  return `${error.stack ?? String(error)}${cause}`;
}
