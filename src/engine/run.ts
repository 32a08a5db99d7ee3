// run.ts: tasks -> workers -> one spectrum, added in task order whatever the number of workers.
import { Piscina } from "piscina";
import { Fault } from "../base/errors.js";
import { addSections, type Sections } from "../spectrum/sections.js";
import type { Task } from "./job.js";
import { openReply, performTask, type Reply, type Work } from "./work.js";

/** Told after each finished task: how many are done, of how many. */
export type Progress = (done: number, of: number) => void;

export interface RunOptions {
  readonly workers: number;
  readonly onProgress?: Progress;
  readonly signal?: AbortSignal;
}

const interrupted = (): Fault =>
  new Fault("interrupted", "interrupted; nothing was written", "start the command again");

/** Performs every task and adds the results in order. With one worker nothing is spawned. */
export async function runTasks<W extends Work>(
  work: W,
  tasks: readonly Task[],
  options: RunOptions,
): Promise<Sections> {
  const total: Sections = {};
  let done = 0;
  const finish = (part: Sections): void => {
    addSections(total, part);
    options.onProgress?.(++done, tasks.length);
  };
  if (options.workers <= 1 || tasks.length === 1) {
    for (const task of tasks) {
      if (options.signal?.aborted) throw interrupted();
      finish(performTask({ work, task }));
      // Let signals and the progress bar in between two tasks.
      await new Promise(setImmediate);
    }
    return total;
  }
  await runInWorkers(work, tasks, options, finish);
  return total;
}

/** How many finished results may wait for an earlier one: bounds memory. */
const mostAhead = 2;

async function runInWorkers(
  work: Work,
  tasks: readonly Task[],
  options: RunOptions,
  finish: (part: Sections) => void,
): Promise<void> {
  const threads = Math.min(options.workers, tasks.length);
  const pool = new Piscina({
    filename: new URL("./work.js", import.meta.url).href,
    name: "replyToOrder",
    minThreads: threads,
    maxThreads: threads,
    idleTimeout: 60_000,
  });
  try {
    const running: Promise<Sections>[] = [];
    let next = 0;
    const start = (): void => {
      const task = tasks[next++];
      const reply = pool.run({ work, task }, { signal: options.signal }) as Promise<Reply>;
      const result = reply.then(openReply);
      // A failure is reported when its turn comes; until then it must not count as unhandled.
      result.catch(() => undefined);
      running.push(result);
    };
    while (next < tasks.length && next < threads + mostAhead) start();
    for (let i = 0; i < tasks.length; i++) {
      const part = await running[i];
      running[i] = undefined as unknown as Promise<Sections>;
      if (next < tasks.length) start();
      finish(part);
    }
  } catch (error) {
    throw options.signal?.aborted ? interrupted() : error;
  } finally {
    await pool.destroy();
  }
}
