// dope.ts: `tidegauge dope`: which doping puts the level at a peak, how high, how wide, how robust; and the inverse.
import { readFileSync, statSync } from "node:fs";
import type { Command } from "commander";
import { z } from "zod";
import { usageFault } from "../../base/errors.js";
import type { CurvesResult } from "../../curves/result.js";
import { curvesCsv } from "../../report/csv.js";
import { dopeCsv } from "../../report/dope-csv.js";
import { dopeText } from "../../report/dope-text.js";
import { curvesJson, resultJson } from "../../report/json.js";
import { parseCurves } from "../../report/parse.js";
import { dopeSvg } from "../../report/svg/dope.js";
import { type DopeOptions, dope, dopeOptions, readDope } from "../../studies/dope.js";
import type { DopeResult } from "../../studies/dope-result.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles, type ResultFile } from "../delivery.js";
import { addDopingOptions, typedDopings } from "../doping-options.js";
import { studyOptions, withRun } from "../sweep-options.js";
import { typedNumber } from "../validated.js";

const examples = `
Examples:
  tidegauge dope gold --response spin:hall --from -2.5 --substitute +1 -1 --out gold-dope
      where spin:hall peaks, which doping puts the level there, and how much of an atom with one electron more or fewer that is
  tidegauge dope gold --doping -0.1 0 0.1 --temperature 77 300
      the responses at three dopings in electrons per cell; the level follows the temperature
  tidegauge dope luttinger --from -0.2 --to 0.02 --doping -1e19 -1e20 --doping-unit per_cm3
      a semiconductor: 1e19 and 1e20 holes per cm^3
  tidegauge dope gold-dope/curves.json --prominence 10%
      the same curves read again; nothing is computed

Positive doping is added electrons. Dopings are counted from the reference level at 0 K and the bands are kept as they are (rigid band).
Whether a dopant may be used is another question: some are toxic or otherwise hazardous, and local rules and licensed practice apply.`;

/** How the study's own options are typed. */
const typedDope = {
  ...typedDopings,
  substitute: z.array(typedNumber("expected a valence difference such as +1 or -2")).optional(),
  sites: typedNumber().optional(),
};

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addDopingOptions(
    program
      .command("dope")
      .description("Which doping puts the Fermi level at a peak, how high, how wide, how robust to temperature?")
      .argument("<GRID>", "directory of a band grid, or a curves.json computed before"),
  )
    .option("--substitute <N...>", "electrons that a substituted atom adds (+1) or takes away (-1): tells the fraction")
    .option("--sites <N>", "atoms per cell that may be substituted (default 1)")
    .addHelpText("after", examples);
  command.action(async (name: string) => {
    const globals = command.optsWithGlobals<GlobalOptions>();
    const fromFile = statSync(name, { throwIfNoEntry: false })?.isFile() === true;
    const options = studyOptions(command, { study: "dope", schema: dopeOptions, own: typedDope });
    checkedOut(globals);
    if (fromFile) {
      const curves = parseCurves(readFileSync(name, "utf8"), name);
      deliver(readFile(command, curves, options), curves, globals, context);
      return;
    }
    const { result, curves } = await withRun(command, context, "summing over the zone", (run) =>
      dope(name, options, run),
    );
    deliver(result, curves, globals, context);
  });
}

/** Options that change what was computed, and so mean nothing for curves that exist. */
const computing = ["from", "to", "points", "method", "accuracy", "samples", "degenerate", "broaden", "unit", "job"];

/** Reads curves that exist: at the temperatures and for the responses asked for, or at all of them. */
function readFile(command: Command, curves: CurvesResult, options: DopeOptions): DopeResult {
  const typed = command.opts<Record<string, unknown>>();
  const idle = computing.find((name) => typed[name] !== undefined);
  if (idle !== undefined)
    throw usageFault(
      `--${idle} changes what is computed, but these curves exist already`,
      "Give the grid in place of the curves.",
    );
  const responses = typed.response === undefined ? curves.responses : chosen(curves, options.response ?? []);
  const temperature = typed.temperature === undefined ? curves.temperature_K : options.temperature;
  const { method, sampling } = { method: curves.sampling.method, sampling: curves.sampling };
  const meshEv = method === "refine" ? 0 : Number(sampling.regular_eV ?? 0);
  const result = readDope({ ...curves, responses }, { ...options, temperature }, meshEv);
  return method === "refine" || meshEv > 0
    ? result
    : {
        ...result,
        notes: [
          ...result.notes,
          "which energy the mesh resolves is not known from these curves: give the grid to have peaks judged by it",
        ],
      };
}

function chosen(curves: CurvesResult, names: readonly string[]): CurvesResult["responses"] {
  return names.map((name) => {
    const found = curves.responses.find((response) => response.name === name);
    if (found !== undefined) return found;
    const known = curves.responses.map((response) => response.name).join(", ");
    throw usageFault(`--response ${name}: these curves hold ${known}`, "Name one of these, or give the grid.");
  });
}

function deliver(result: DopeResult, curves: CurvesResult, globals: GlobalOptions, { terminal }: Context): void {
  if (globals.json) terminal.printJson(result);
  else terminal.print(dopeText(result, { width: Math.max(80, terminal.columns) }).trimEnd());
  const kept = {
    ...curves,
    responses: curves.responses.filter(({ name }) => result.responses.some((each) => each.name === name)),
  };
  const files: ResultFile[] = [
    ["dope.csv", dopeCsv(result)],
    ["dope.json", resultJson(result)],
    ["dope.svg", dopeSvg(result, kept)],
    ["curves.csv", curvesCsv(curves)],
    ["curves.json", curvesJson(curves)],
  ];
  deliverFiles(globals.out, files, terminal);
}
