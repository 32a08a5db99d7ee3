// sweep-options.ts: the options of `sweep`, which every command that computes curves first shares, and how a run is set going.
import { availableParallelism } from "node:os";
import type { Command } from "commander";
import { z } from "zod";
import type { RunOptions } from "../engine/run.js";
import { grouped } from "../report/numbers.js";
import { mistakesOf } from "../studies/quick-health.js";
import { defaultSampling, type SweepOptions, sweepOptions } from "../studies/sweep.js";
import type { Context } from "./context.js";
import { namedGrids } from "./grids.js";
import { readJob } from "./jobfile.js";
import { typedNumber, typedShare, typedWhole, validated } from "./validated.js";

/** What is typed for the options of a sweep; those that are not typed come from --job or are the study's defaults. */
const typedSweepOptions = {
  response: z.array(z.string()).optional(),
  from: typedNumber().optional(),
  to: typedNumber().optional(),
  points: typedWhole(1).optional(),
  temperature: z.array(typedNumber()).optional(),
  method: z.string().optional(),
  accuracy: typedShare.optional(),
  samples: typedWhole(1000).optional(),
  degenerate: typedNumber().optional(),
  broaden: typedNumber().optional(),
  unit: z.string().optional(),
  thermal: z.boolean().optional(),
};

const typedRunOptions = z.object({ job: z.string().optional(), workers: typedWhole(1).optional() });

const methodWords = {
  refine: "refine: local models inside adaptively split cells (default)",
  cells: "cells: bands linear inside each cell",
  points: "points: the plain mesh sum",
} as const;

/** What help says of the defaults and methods of a study; a sweep's own where nothing is given. */
interface StudyWords {
  readonly response: string;
  readonly from: string;
  readonly to: string;
  readonly points: string;
  readonly temperature: string;
  readonly accuracy: string;
  readonly methods: readonly (keyof typeof methodWords)[];
  /** A window of levels, or one level. */
  readonly axis: "window" | "level";
}

const sweepWords: StudyWords = {
  response: "charge:xy and the Hall response of every moment",
  from: "-1",
  to: "1",
  points: "201",
  temperature: "0 300",
  accuracy: "1%",
  methods: ["refine", "cells", "points"],
  axis: "window",
};

/** Adds the options of a sweep, --job and --workers to a command. */
export function addSweepOptions(command: Command, study: Partial<StudyWords> = {}): Command {
  const words = { ...sweepWords, ...study };
  const window = words.axis === "window";
  command.option("--response <NAME...>", `what to compute (default ${words.response})`);
  if (window)
    command
      .option("--from <EV>", `lowest level, relative to the reference level (default ${words.from})`)
      .option("--to <EV>", `highest level (default ${words.to})`)
      .option("--points <N>", `number of levels (default ${words.points})`);
  else command.option("--level <EV>", `the level, relative to the reference level (default ${words.from})`);
  command
    .option(
      "--temperature <K...>",
      `${window ? "temperatures" : "one temperature"} in kelvin (default ${words.temperature})`,
    )
    .option("--method <NAME>", words.methods.map((method) => methodWords[method]).join("; "))
    .option(
      "--accuracy <SHARE>",
      `what refine aims at, in parts of each response's largest value (default ${words.accuracy})`,
    )
    .option(
      "--samples <N>",
      `about how many samples refine may spend (default ${grouped(defaultSampling.base)} and ${defaultSampling.perPoint} per stored point)`,
    )
    .option(
      "--degenerate <EV>",
      "pairs of bands closer than this are taken as degenerate (default 1e-5, or ten times what Kramers pairs are split by on disk)",
    )
    .option("--broaden <EV>", "eta in 1/((E_n - E_m)^2 + eta^2) (default 0)")
    .option(
      "--unit <UNIT>",
      'unit of the responses, e.g. "(hbar/2e) S/cm", "S/m"; the default is stated in every result',
    );
  if (window)
    command.option(
      "--thermal",
      "the Mott integral of every response too: the current that a temperature gradient drives",
    );
  return command
    .option("--job <FILE>", "options from a JSON file or from an earlier curves.json; options typed here win")
    .option("--workers <N>", "worker threads (default one per core); the numbers do not depend on it");
}

/** Typed options of a study that extends a sweep's: its `own` ones are the study's; see validated.ts for how each is typed. */
interface TypedStudy<T> {
  /** Name of the study and of the command. */
  readonly study: string;
  /** Schema of the study's options, a sweep's included. */
  readonly schema: z.ZodType<T, unknown>;
  /** How the study's own options are typed. */
  readonly own: z.ZodRawShape;
}

/**
 * The checked options of a study: what was typed, over what --job holds, over the schema's defaults. Throws a usage Fault that names
 * the option.
 */
export function studyOptions<T>(command: Command, { study, schema, own }: TypedStudy<T>): T {
  const typed = validated(z.object({ ...typedSweepOptions, ...own }), command.opts(), study);
  const given = Object.fromEntries(Object.entries(typed).filter(([, value]) => value !== undefined));
  const { job } = validated(typedRunOptions, command.opts(), study);
  return validated(schema, { ...(job === undefined ? {} : readJob(job, study)), ...given }, study);
}

/** The checked options of a plain sweep. */
export const typedSweep = (command: Command): SweepOptions =>
  studyOptions(command, { study: "sweep", schema: sweepOptions, own: {} });

/** Runs a computation with the workers asked for, progress on the terminal, and Ctrl-C listened to. */
export async function withRun<T>(
  command: Command,
  context: Context,
  label: string,
  compute: (run: RunOptions) => Promise<T>,
): Promise<T> {
  const { workers } = validated(typedRunOptions, command.opts(), command.name());
  warnOfHealth(namedGrids(command.args), context);
  const progress = context.progress(label);
  try {
    return await compute({
      workers: workers ?? availableParallelism(),
      onProgress: progress.advance,
      signal: context.interruption(),
    });
  } finally {
    progress.end();
  }
}

/** Tells on stderr of every mistake that the quick health checks see, before anything is computed. */
function warnOfHealth(directories: readonly string[], { terminal }: Context): void {
  for (const directory of directories)
    for (const mistake of mistakesOf(directory)) terminal.warn(`${directory}: ${mistake}`);
}
