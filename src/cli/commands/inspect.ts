// inspect.ts: `tidegauge inspect`: what band grids hold and whether they can be trusted, as text or JSON.
import { mkdirSync } from "node:fs";
import { join } from "node:path";
import type { Command } from "commander";
import { writeAtomically } from "../../base/atomic.js";
import { exitStatus } from "../../base/errors.js";
import { inspectText } from "../../report/inspect-text.js";
import { resultJson } from "../../report/json.js";
import { inspect, inspectOptions } from "../../studies/inspect.js";
import type { Context, GlobalOptions } from "../context.js";
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

Exit status 3 when a grid has a hard fault: a file or field that does not fit, a number that is not finite, energies that do not
ascend, a matrix that is not Hermitian. Notes are no faults.`;

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
    const { json, out } = command.optsWithGlobals<GlobalOptions>();
    const progress = context.progress("reading");
    try {
      const result = inspect(namedGrids(names), options, (_directory, done, total) => progress.advance(done, total));
      progress.end();
      if (json) context.terminal.printJson(result);
      else context.terminal.print(inspectText(result, Math.max(80, context.terminal.columns)));
      if (out !== undefined) {
        mkdirSync(out, { recursive: true });
        writeAtomically(join(out, "inspect.json"), resultJson(result));
        context.terminal.note(`wrote inspect.json to ${out}`);
      }
      if (result.grids.some((grid) => !grid.sound)) context.status = exitStatus.data;
    } finally {
      progress.end();
    }
  });
}
