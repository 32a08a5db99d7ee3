// series.ts: `tidegauge series`: how responses change along a family of grids, at fixed doping and at their peaks.
import type { Command } from "commander";
import { z } from "zod";
import { resultJson } from "../../report/json.js";
import { seriesCsv } from "../../report/series-csv.js";
import { seriesText } from "../../report/series-text.js";
import { seriesSvg } from "../../report/svg/series.js";
import { series, seriesOptions } from "../../studies/series.js";
import type { SeriesResult } from "../../studies/series-result.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles, type ResultFile } from "../delivery.js";
import { addDopingOptions, typedDopings } from "../doping-options.js";
import { namedGrids } from "../grids.js";
import { studyOptions, withRun } from "../sweep-options.js";

const examples = `
Examples:
  for e in -0.01 -0.005 0 0.005 0.01; do
    tidegauge sample luttinger --mesh 16 16 16 --set ezz=$e --out luttinger-ezz$e
  done
  tidegauge series 'luttinger-ezz*' --response spin:xy:z --from -0.2 --to 0.1 --doping -1e19 -5e19 --doping-unit per_cm3 --out luttinger-series
      strained holes: spin Hall conductivity at two fixed concentrations of holes; the sample writes its parameters as tags

  for e in -0.01 0 0.01; do tidegauge sample demo --mesh 8 8 8 --set strain=$e --out demo-strain$e; done
  tidegauge series 'demo-strain*' --tag strain --response spin:hall orbital:hall --from -0.4 --to 0.6 --out demo-series
      a strained metal: undoped, and at its peaks

The grids are ordered by a numeric tag of their manifests ("tags": { "strain_percent": -1 }): by --tag, or by the only one that differs.
All are computed by the same job. Each is doped from its own neutral crystal; where carriers are few, and no --doping is given, round
concentrations are told. A peak is followed from grid to grid by the nearest doping.`;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addDopingOptions(
    program
      .command("series")
      .description("How does it change along a family of grids (strain, alloy, thickness)?")
      .argument("<GRID...>", "directories of band grids, or patterns"),
  )
    .option("--tag <NAME>", "numeric tag of the manifests that orders the grids (default: the only one that differs)")
    .addHelpText("after", examples);
  command.action(async (names: string[]) => {
    const own = { ...typedDopings, tag: z.string().optional() };
    const options = studyOptions(command, { study: "series", schema: seriesOptions, own });
    const globals = command.optsWithGlobals<GlobalOptions>();
    checkedOut(globals);
    const grids = namedGrids(names);
    const result = await withRun(command, context, "summing over the zones", (run) => series(grids, options, run));
    deliver(result, globals, context);
  });
}

function deliver(result: SeriesResult, globals: GlobalOptions, { terminal }: Context): void {
  if (globals.json) terminal.printJson(result);
  else terminal.print(seriesText(result, { width: Math.max(80, terminal.columns) }).trimEnd());
  const files: ResultFile[] = [
    ["series.csv", seriesCsv(result)],
    ["series.json", resultJson(result)],
    ["series.svg", seriesSvg(result)],
  ];
  deliverFiles(globals.out, files, terminal);
}
