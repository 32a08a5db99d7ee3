// context.ts: what does a command get from the process it runs in: a terminal, progress, and news of an interrupt?
import { usageFault } from "../base/errors.js";
import { type Progress, showProgress } from "./progress.js";
import { openTerminal, type Terminal } from "./terminal.js";

/** The options that every command knows. */
export interface GlobalOptions {
  readonly json?: true;
  readonly out?: string;
  readonly quiet?: true;
}

/** What every command's action gets. */
export interface Context {
  readonly terminal: Terminal;
  /** Shows a long task; see progress.ts. */
  progress(label: string): Progress;
  /**
   * A signal that fires at the first Ctrl-C, for commands that can stop in order and keep a checkpoint; a second Ctrl-C
   * ends the process at once with 130. Until it is asked for, Ctrl-C ends the process in the system's way, which shells
   * show as 130 too.
   */
  interruption(): AbortSignal;
  /** The status with which a command that threw nothing ends; 0 unless raised, e.g. to 3 by `inspect`. */
  status: number;
}

/** The context of this process; `quiet` is asked for each line, since it is known only after parsing. */
export function openContext(quiet: () => boolean): Context {
  const terminal = openTerminal(quiet);
  let interruption: AbortController | undefined;
  const onInterrupt = (): void => {
    if (interruption?.signal.aborted) process.exit(130);
    interruption?.abort();
    terminal.note("stopping at the next safe place; once more to stop at once");
  };
  return {
    terminal,
    status: 0,
    progress: (label) => showProgress(terminal, label),
    interruption() {
      if (interruption === undefined) {
        interruption = new AbortController();
        process.on("SIGINT", onInterrupt);
      }
      return interruption.signal;
    },
  };
}

/** The value of --out; throws a usage Fault when a command that writes files was not told where. */
export function requiredOut(options: GlobalOptions): string {
  if (options.out !== undefined && options.out !== "") return options.out;
  throw usageFault("--out is missing: this command writes files", "add --out DIR, a directory to make");
}
