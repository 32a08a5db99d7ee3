// program.ts: which commands and which global options are there?
import { Command } from "commander";
import { productVersion } from "../base/version.js";
import type { Context } from "./context.js";

/** A file of commands/ exports one of these as `register`. */
type Register = (program: Command, context: Context) => void;

/** In the order in which help shows them. Loaded when asked for: charts and models take longer to load than to use. */
const commands: Readonly<Record<string, () => Promise<{ readonly register: Register }>>> = {
  inspect: () => import("./commands/inspect.js"),
  sweep: () => import("./commands/sweep.js"),
  dope: () => import("./commands/dope.js"),
  series: () => import("./commands/series.js"),
  locate: () => import("./commands/locate.js"),
  converge: () => import("./commands/converge.js"),
  request: () => import("./commands/request.js"),
  angle: () => import("./commands/angle.js"),
  report: () => import("./commands/report.js"),
  pack: () => import("./commands/pack.js"),
  sample: () => import("./commands/sample.js"),
};

/**
 * The command line for these words: with the one command that the first word names, or else with all of them.
 * Commander neither prints errors nor exits: it throws, and outcome.ts has the word.
 */
export async function createProgram(context: Context, words: readonly string[]): Promise<Command> {
  const program = new Command("tidegauge")
    .description("Reads off a band grid how the Hall responses of a material run with the level, and how sure that is.")
    .version(productVersion, "--version", "print the version")
    .option("--json", "one JSON document on stdout instead of text")
    .option("--out <DIR>", "write files into this directory")
    .option("--quiet", "no progress and no notes on stderr")
    .helpOption("-h, --help", "help; after a command, help on it with worked examples")
    .helpCommand(false)
    .showSuggestionAfterError(true)
    .configureHelp({ showGlobalOptions: true })
    .configureOutput({ outputError: () => {} })
    .exitOverride()
    .addHelpText("after", exitStatusHelp);
  const known = Object.keys(commands);
  const named = words[0] === "--version" ? [] : known.includes(words[0] ?? "") ? [words[0]] : known;
  for (const name of named) (await commands[name]()).register(program, context);
  return program;
}

const exitStatusHelp = `
Exit status: 0 done; 2 wrong usage; 3 bad input data; 4 a demanded accuracy was not reached; 130 interrupted; 1 anything else.
Data go to stdout, progress and warnings to stderr. Colour only on a terminal, never with NO_COLOR.`;
