// sweep.ts: `tidegauge sweep`: the responses of one grid against level and temperature, as text, CSV, JSON and a picture.
import type { Command } from "commander";
import type { CurvesResult } from "../../curves/result.js";
import { curvesCsv } from "../../report/csv.js";
import { curvesJson } from "../../report/json.js";
import { curvesSvg } from "../../report/svg/curves.js";
import { curvesText } from "../../report/text.js";
import { sweep } from "../../studies/sweep.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles, type ResultFile } from "../delivery.js";
import { addSweepOptions, typedSweep, withRun } from "../sweep-options.js";

const examples = `
Examples:
  tidegauge sweep gold --response spin:hall orbital:hall --temperature 0 300 --out gold-curves
      rotational means from 1 eV below to 1 eV above the reference level; writes curves.csv, .json and .svg
  tidegauge sweep gold --response spin:xy:z --from 0 --to 0 --points 1 --temperature 300
      one number
  tidegauge sweep layer --response charge:xy spin:all --method points
      the plain mesh sum of the anomalous and all spin responses of a layer
  tidegauge sweep gold --job gold-curves/curves.json --method points
      the same job again, one option changed

A response is CURRENT:FLOW FIELD:POLARISATION. spin:xy:z is the current of spin z along x under a field along y; charge:xy is the
anomalous Hall conductivity; any moment of the grid may stand for spin. <moment>:hall is (1/6) sum eps_abg sigma^g_ab (in a layer the
mean of xy:z and -yx:z), charge:hall is (xy - yx) / 2, <moment>:all means every component.`;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addSweepOptions(
    program
      .command("sweep")
      .description("How do the responses run with level and temperature, and how sure is that?")
      .argument("<GRID>", "directory of a band grid"),
  ).addHelpText("after", examples);
  command.action(async (directory: string) => {
    const options = typedSweep(command);
    const globals = command.optsWithGlobals<GlobalOptions>();
    checkedOut(globals);
    const result = await withRun(command, context, "summing over the zone", (run) => sweep(directory, options, run));
    deliver(result, globals, context);
  });
}

function deliver(result: CurvesResult, globals: GlobalOptions, { terminal }: Context): void {
  if (globals.json) terminal.printJson(result);
  else terminal.print(curvesText(result, { width: Math.max(80, terminal.columns) }));
  const files: ResultFile[] = [
    ["curves.csv", curvesCsv(result)],
    ["curves.json", curvesJson(result)],
    ["curves.svg", curvesSvg(result)],
  ];
  deliverFiles(globals.out, files, terminal);
}
