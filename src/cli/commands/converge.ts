// converge.ts: `tidegauge converge`: is the mesh dense enough, at which levels, and what would be needed? Text, CSV, JSON and a picture.
import type { Command } from "commander";
import { z } from "zod";
import { convergeCsv } from "../../report/converge-csv.js";
import { convergeText, meshName, percent } from "../../report/converge-text.js";
import { resultJson } from "../../report/json.js";
import { convergeSvg } from "../../report/svg/converge.js";
import { converge, convergeOptions } from "../../studies/converge.js";
import type { ConvergeResult } from "../../studies/converge-result.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles } from "../delivery.js";
import { namedGrids } from "../grids.js";
import { addSweepOptions, studyOptions, withRun } from "../sweep-options.js";
import { typedNumber, typedShare, typedWhole } from "../validated.js";

const examples = `
Examples:
  tidegauge converge gold --response spin:hall --from -1 --to 0.5 --out gold-converge
      one grid, judged by all meshes that it contains, with and without refinement; writes converge.csv, .json and .svg
  tidegauge converge gold --response spin:hall --within 1% || echo 'not there yet'
      exit status 4 when the refined value is not known to 1% of its largest value at some level of the window
  tidegauge converge 'gold-*' --response orbital:hall --level 0 0.45
      a family of grids of one material on different meshes; values mesh by mesh at two levels
  tidegauge converge gold --method points
      plain sums only: quick; judged by the spread of the contained meshes

An error is told at two bars, as a part of the response's largest value in the window: the truth (of the given bands) is expected within it
about 95 times in 100. What would be needed is extrapolated from the meshes at hand and is a rough guide.`;

const own = {
  within: typedShare.optional(),
  level: z.array(typedNumber()).optional(),
  shifts: typedWhole(1).optional(),
};

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addSweepOptions(
    program
      .command("converge")
      .description("Is the mesh dense enough, at which levels, and what would be needed?")
      .argument("<GRID...>", "a band grid, or several of one material on different meshes (directories or patterns)"),
    { points: "101", temperature: "300", methods: ["refine", "points"], accuracy: "half of --within, else 0.5%" },
  )
    .option("--within <SHARE>", "demand this accuracy, e.g. 1%: exit status 4 where it is not reached")
    .option("--level <EV...>", "show values mesh by mesh at these levels (default: 0, the largest, the least sure)")
    .option("--shifts <N>", "most shifts of one coarser mesh that are refined (default 2)")
    .addHelpText("after", examples);
  command.action(async (names: string[]) => {
    const options = studyOptions(command, { study: "converge", schema: convergeOptions, own });
    const globals = command.optsWithGlobals<GlobalOptions>();
    checkedOut(globals);
    const result = await withRun(command, context, "comparing meshes", (run) =>
      converge(namedGrids(names), options, run),
    );
    deliver(result, globals, context);
    if (result.demanded && !result.reached) {
      context.status = 4;
      context.terminal.warn(missedWords(result));
    }
  });
}

function deliver(result: ConvergeResult, globals: GlobalOptions, { terminal }: Context): void {
  if (globals.json) terminal.printJson(result);
  else terminal.print(convergeText(result, terminal.columns).trimEnd());
  deliverFiles(
    globals.out,
    [
      ["converge.csv", convergeCsv(result)],
      ["converge.json", resultJson(result)],
      ["converge.svg", convergeSvg(result)],
    ],
    terminal,
  );
}

/** Where the demanded accuracy is not reached, in one line. */
function missedWords({ responses, target, sampling, meshes }: ConvergeResult): string {
  const refines = sampling.method === "refine";
  const missed = responses.flatMap(({ name, curves }) =>
    curves.flatMap(({ temperature_K: temperatureK, vanishes, verdicts }) =>
      vanishes
        ? []
        : verdicts
            .filter(({ good }) => good !== "plain" && !(refines && good === "refined"))
            .map((verdict) => {
              const error = refines ? verdict.refined_error : verdict.plain_error;
              const where = verdict.from_eV === verdict.to_eV ? "" : ` to ${verdict.to_eV.toFixed(3)}`;
              return `${name} at ${temperatureK} K, ${verdict.from_eV.toFixed(3)}${where} eV: ${percent(error)}`;
            }),
    ),
  );
  const shown = missed.slice(0, 4).join("; ");
  const more = missed.length > 4 ? `; and ${missed.length - 4} more ranges` : "";
  return `${percent(target)} is not reached on ${meshName(meshes[0].divisions)}: ${shown}${more}`;
}
