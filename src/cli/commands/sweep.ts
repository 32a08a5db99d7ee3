// sweep.ts: `tidegauge sweep`: the responses of one grid against level and temperature, as text, CSV, JSON and a picture.
import { availableParallelism } from "node:os";
import type { Command } from "commander";
import { z } from "zod";
import type { CurvesResult } from "../../curves/result.js";
import { curvesCsv } from "../../report/csv.js";
import { curvesJson } from "../../report/json.js";
import { curvesSvg } from "../../report/svg/curves.js";
import { curvesText } from "../../report/text.js";
import { sweep, sweepOptions } from "../../studies/sweep.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles, type ResultFile } from "../delivery.js";
import { readJob } from "../jobfile.js";
import { typedNumber, typedShare, typedWhole, validated } from "../validated.js";

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
mean of xy:z and -yx:z), <moment>:all means every component.`;

/** What is typed for the options of the study; those that are not typed come from --job or are the study's defaults. */
const typedOptions = z.object({
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
  job: z.string().optional(),
  workers: typedWhole(1).optional(),
});

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = program
    .command("sweep")
    .description("How do the responses run with level and temperature, and how sure is that?")
    .argument("<GRID>", "directory of a band grid")
    .option("--response <NAME...>", "what to compute (default charge:xy and the Hall response of every moment)")
    .option("--from <EV>", "lowest level, relative to the reference level (default -1)")
    .option("--to <EV>", "highest level (default 1)")
    .option("--points <N>", "number of levels (default 201)")
    .option("--temperature <K...>", "temperatures in kelvin (default 0 300)")
    .option(
      "--method <NAME>",
      "refine: local models inside adaptively split cells (default); cells: bands linear inside each cell; points: the plain mesh sum",
    )
    .option("--accuracy <SHARE>", "what refine aims at, in parts of each response's largest value (default 1%)")
    .option("--samples <N>", "about how many samples refine may spend (default 1,000,000 and 30 per stored point)")
    .option("--degenerate <EV>", "pairs of bands closer than this are taken as degenerate (default 1e-5)")
    .option("--broaden <EV>", "eta in 1/((E_n - E_m)^2 + eta^2) (default 0)")
    .option(
      "--unit <UNIT>",
      'unit of the responses, e.g. "(hbar/2e) S/cm", "S/m"; the default is stated in every result',
    )
    .option("--job <FILE>", "options from a JSON file or from an earlier curves.json; options typed here win")
    .option("--workers <N>", "worker threads (default one per core); the numbers do not depend on it")
    .addHelpText("after", examples);
  command.action(async (directory: string) => {
    const { job, workers, ...typed } = validated(typedOptions, command.opts(), "sweep");
    const given = Object.fromEntries(Object.entries(typed).filter(([, value]) => value !== undefined));
    const options = validated(sweepOptions, { ...(job === undefined ? {} : readJob(job, "sweep")), ...given }, "sweep");
    const globals = command.optsWithGlobals<GlobalOptions>();
    checkedOut(globals);
    const progress = context.progress("summing over the zone");
    try {
      const result = await sweep(directory, options, {
        workers: workers ?? availableParallelism(),
        onProgress: progress.advance,
        signal: context.interruption(),
      });
      progress.end();
      deliver(result, globals, context);
    } finally {
      progress.end();
    }
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
