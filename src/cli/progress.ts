// progress.ts: how far is a long run, and how long will it take? A bar on a terminal; a line now and then anywhere else.
import { SingleBar } from "cli-progress";
import type { Terminal } from "./terminal.js";

/** The progress of one task. `end` may be called more than once and must be called (in a finally). */
export interface Progress {
  /** Sets how much is done of how much; a change of `total` is allowed (work found on the way). */
  advance(done: number, total: number): void;
  end(): void;
}

/** Without a terminal: silence for this long, then one line each time it has passed again. */
const secondsBetweenLines = 30;

/** Whole seconds as "42 s", "3 min 5 s", "2 h 10 min". */
export function durationWords(seconds: number): string {
  const whole = Math.max(0, Math.round(seconds));
  if (whole < 60) return `${whole} s`;
  if (whole < 3600) return `${Math.floor(whole / 60)} min ${whole % 60} s`;
  return `${Math.floor(whole / 3600)} h ${Math.floor((whole % 3600) / 60)} min`;
}

/** Starts to show a task, e.g. "reading"; on stderr, and not with --quiet. */
export function showProgress(terminal: Terminal, label: string): Progress {
  return terminal.drawsProgress ? bar(label) : lines(terminal, label, () => performance.now() / 1000);
}

function bar(label: string): Progress {
  let drawn: SingleBar | undefined;
  let started = 0;
  const open = (total: number): SingleBar => {
    const single = new SingleBar({
      format: `${label} [{bar}] {percentage}%  {left}`,
      barsize: 30,
      barCompleteChar: "=",
      barIncompleteChar: " ",
      clearOnComplete: true,
      stream: process.stderr,
    });
    started = performance.now() / 1000;
    single.start(total, 0, { left: "" });
    return single;
  };
  return {
    advance(done, total) {
      drawn ??= open(total);
      if (drawn.getTotal() !== total) drawn.setTotal(total);
      drawn.update(done, { left: leftWords(done, total, performance.now() / 1000 - started) });
    },
    end() {
      drawn?.stop();
      drawn = undefined;
    },
  };
}

/** Time left if the rest goes as fast as what is done; empty while that says nothing. */
function leftWords(done: number, total: number, seconds: number): string {
  if (done <= 0 || done >= total || seconds < 1) return "";
  return `${durationWords((seconds / done) * (total - done))} left`;
}

/** `clock` in seconds. */
export function lines(terminal: Pick<Terminal, "note">, label: string, clock: () => number): Progress {
  const started = clock();
  let lastLine = started;
  return {
    advance(done, total) {
      const now = clock();
      if (now - lastLine < secondsBetweenLines || done >= total) return;
      lastLine = now;
      const left = leftWords(done, total, now - started);
      terminal.note(`${label}: ${Math.floor((100 * done) / total)}%${left === "" ? "" : `, ${left}`}`);
    },
    end() {},
  };
}
