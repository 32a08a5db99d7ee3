// inspect.ts: `tidegauge inspect`: what band grids hold and whether they can be trusted, as text or JSON.
import type { Command } from "commander";
import { dataFault } from "../../base/errors.js";
import { cleanLine } from "../../report/clean.js";
import { inspectText } from "../../report/inspect-text.js";
import { resultJson } from "../../report/json.js";
import { inspect, inspectOptions } from "../../studies/inspect.js";
import type { InspectResult } from "../../studies/inspect-result.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles } from "../delivery.js";
import { namedGrids } from "../grids.js";
import { validated } from "../validated.js";

const examples = `
Examples:
  tidegauge inspect gold
      reads every number of one grid: what it holds, and whether it is finite, in order and Hermitian
  tidegauge inspect 'strain-*' --digests
      several grids; also compares the files with the SHA-256 that their manifests give
  tidegauge inspect gold --json | jq '.grids[0].contents.level'
      the same as JSON

Exit status 3, and no file in --out, when a grid has a hard fault: a file or field that does not fit, a number that is not finite,
energies that do not ascend, a matrix that is not Hermitian; or when its health shows a certain mistake (a wrong unit, sign or axis, bra and
ket exchanged, a factor 2 of the spin). Warnings and notes are no faults.`;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = program
    .command("inspect")
    .description("What is on disk, and can it be trusted?")
    .argument("<GRID...>", "directories of band grids, or patterns")
    .option("--digests", "compare every file with the SHA-256 in the manifest, where it gives one")
    .addHelpText("after", examples);
  command.action((names: string[]) => {
    const options = validated(inspectOptions, command.opts(), "inspect");
    const globals = command.optsWithGlobals<GlobalOptions>();
    const out = checkedOut(globals);
    const progress = context.progress("reading");
    try {
      const result = inspect(namedGrids(names), options, (_directory, done, total) => progress.advance(done, total));
      progress.end();
      if (globals.json) context.terminal.printJson(result);
      else context.terminal.print(inspectText(result, Math.max(80, context.terminal.columns)));
      refuseUnsound(result);
      deliverFiles(out, [["inspect.json", resultJson(result)]], context.terminal);
    } finally {
      progress.end();
    }
  });
}

/** Throws the first fault as a data Fault; the result, which has been printed, holds all of them. */
function refuseUnsound({ grids }: InspectResult): void {
  refuseUnhealthy(grids);
  const unsound = grids.filter((grid) => !grid.sound);
  const [first] = unsound;
  if (first === undefined) return;
  const others = unsound.reduce((sum, grid) => sum + grid.faults_total, -1);
  const more = others === 0 ? "" : ` (and ${others} more, see the result)`;
  throw dataFault(`${cleanLine(first.directory)}: ${first.faults[0].message}${more}`, first.faults[0].cure);
}

/** Throws the first certain mistake in the data of a grid that is sound in form; forms come first. */
function refuseUnhealthy(grids: InspectResult["grids"]): void {
  if (grids.some((grid) => !grid.sound)) return;
  for (const { directory, health } of grids) {
    const certain = health?.findings.find(({ severity }) => severity === "fault");
    if (certain !== undefined) throw dataFault(`${cleanLine(directory)}: ${certain.message}`, certain.cure);
  }
}
