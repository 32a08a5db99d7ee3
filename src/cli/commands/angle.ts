// angle.ts: `tidegauge angle`: Hall angles against measured resistivity, and what measured values are likely to be.
import type { Command } from "commander";
import { z } from "zod";
import { angleCsv, measuredCsv } from "../../report/angle-csv.js";
import { angleText } from "../../report/angle-text.js";
import { resultJson } from "../../report/json.js";
import { angleSvg } from "../../report/svg/angle.js";
import { angle, angleOptions } from "../../studies/angle.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles, type ResultFile } from "../delivery.js";
import { addSweepOptions, studyOptions, withRun } from "../sweep-options.js";
import { typedNumber } from "../validated.js";

const examples = `
Examples:
  tidegauge angle gold --resistivity "2.2 uohm cm"
      spin and orbital Hall angle at 300 K, and the scattering time that this resistivity means
  tidegauge angle gold --resistivity-file gold-rho.csv --out gold-angle
      against temperature; a file of the lines  temperature_K,resistivity [uohm cm],error  /  10,0.4,0.02  /  300,2.3,0.05
  tidegauge angle gold --resistivity "2.2 uohm cm" --measured films.csv --shift 0.3
      are these values intrinsic? a file of the lines  label,value [(hbar/e) S/cm],error,resistivity [uohm cm]  /  film A,290,40,5.1

Columns of --measured: "value [unit]" (a conductivity) or "angle" ("angle [%]"); if wanted error, response (default the first), temperature_K
(default the coldest computed), label, "resistivity [unit]", "resistivity error", "residual [unit]". Three lines or more with different resistivities
are a series: constant angle or constant conductivity, and the fit rho_H = a rho_0 + b rho^2 (Tian, Ye, Jin 2009).

A measured value agrees within two bars of both; else the nearest level within +-SHIFT that gives it is named; else it is larger or smaller
than every level there gives, by the factor told: look for impurity scattering, or for lost signal.`;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addSweepOptions(
    program
      .command("angle")
      .description("Spin and orbital Hall angle against measured resistivity; is a measured value intrinsic at all?")
      .argument("<GRID>", "directory of a band grid")
      .option("--resistivity <VALUE>", 'measured resistivity with its unit, e.g. "10.6(2) uohm cm"; of a layer in ohm')
      .option("--resistivity-file <CSV>", "the same against temperature: temperature_K, resistivity [unit], error")
      .option("--measured <CSV>", "measured conductivities or angles to compare with; see below")
      .option("--shift <EV>", "how far the level may be off, either way (default 0.2)"),
    {
      response: "the Hall response of every moment",
      from: "minus --shift",
      to: "--shift",
      points: "81",
      temperature: "300, or up to 9 over those of the file",
    },
  ).addHelpText("after", examples);
  command.action(async (directory: string) => {
    const options = studyOptions(command, {
      study: "angle",
      schema: angleOptions,
      own: {
        resistivity: z.string().optional(),
        resistivityFile: z.string().optional(),
        measured: z.string().optional(),
        shift: typedNumber().optional(),
      },
    });
    const globals = command.optsWithGlobals<GlobalOptions>();
    const out = checkedOut(globals);
    const { result, curves } = await withRun(command, context, "summing over the zone", (run) =>
      angle(directory, options, run),
    );
    const { terminal } = context;
    if (globals.json) terminal.printJson(result);
    else terminal.print(angleText(result, { width: Math.max(80, terminal.columns) }));
    const files: ResultFile[] = [
      ["angle.csv", angleCsv(result)],
      ["angle.json", resultJson(result)],
      ["angle.svg", angleSvg(result, curves)],
    ];
    if (result.measured.length > 0) files.splice(1, 0, ["measured.csv", measuredCsv(result)]);
    deliverFiles(out, files, terminal);
  });
}
