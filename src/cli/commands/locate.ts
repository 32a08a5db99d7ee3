// locate.ts: `tidegauge locate`: which bands and which part of the zone make the value at this level.
import type { Command } from "commander";
import { z } from "zod";
import { resultJson } from "../../report/json.js";
import {
  locateBandsCsv,
  locateCellsCsv,
  locateMapCsv,
  locatePairsCsv,
  locatePathCsv,
  locateProjectionCsv,
} from "../../report/locate-csv.js";
import { locateText } from "../../report/locate-text.js";
import { locateMapSvg, locatePathSvg } from "../../report/svg/locate.js";
import { locate, locateOptions } from "../../studies/locate.js";
import type { LocateResult } from "../../studies/locate-result.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles, type ResultFile } from "../delivery.js";
import { addSweepOptions, studyOptions, withRun } from "../sweep-options.js";
import { typedNumber, typedWhole } from "../validated.js";

const examples = `
Examples:
  tidegauge locate gold --response spin:hall orbital:hall
      at the reference level and 300 K: which pairs of bands, which cells, how small a part of the zone, and do both come from the same ones
  tidegauge locate gold --level -1.2 --temperature 77 --plane "0 0 0 / 0.5 0.5 0 / 0 0.5 0.5" --out where
      1.2 eV lower; where/locate-map.svg shows the plane about k = 0 that these two directions span
  tidegauge locate haldane --path "0 0 / 0.6667 0.3333 / 0.5 0 / 0 0" --out where
      the bands and the responses along a path of a layer, from the models of the stored points

Contributions of cells sum to the value that tidegauge sweep gives at this one level and temperature (--from EV --to EV --points 1), and so do
those of pairs of bands. A map, a projection or a path shows the integrand: what the response would be if all of the zone were like that place.
Memory grows with the mesh: about 50 bytes for each cell and response.`;

const typedLocate = {
  level: typedNumber().optional(),
  cells: typedWhole(1).optional(),
  plane: z.string().optional(),
  mapPoints: typedWhole(2).optional(),
  path: z.string().optional(),
  pathPoints: typedWhole(2).optional(),
};

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addSweepOptions(
    program
      .command("locate")
      .description("Which bands and which part of the zone make the value at this level?")
      .argument("<GRID>", "directory of a band grid"),
    { axis: "level", from: "0", temperature: "300" },
  )
    .option("--cells <N>", "cells listed in the files for each response (default 100)")
    .option("--plane <K>", 'the map: "centre / direction / direction" in b1, b2, b3 (default "0 0 0 / 1 0 0 / 0 1 0")')
    .option("--map-points <N>", "places of the map along each direction (default 61)")
    .option("--path <K>", 'corners of a path, "0 0 0 / 0.5 0.5 0 / ..."')
    .option("--path-points <N>", "places on the path, about (default 200)")
    .addHelpText("after", examples);
  command.action(async (directory: string) => {
    const globals = command.optsWithGlobals<GlobalOptions>();
    const options = studyOptions(command, { study: "locate", schema: locateOptions, own: typedLocate });
    checkedOut(globals);
    const result = await withRun(command, context, "summing over the zone", (run) => locate(directory, options, run));
    const { terminal } = context;
    if (globals.json) terminal.printJson(result);
    else terminal.print(locateText(result, { width: Math.max(80, terminal.columns) }).trimEnd());
    deliverFiles(globals.out, filesOf(result), terminal);
  });
}

const filesOf = (result: LocateResult): ResultFile[] => [
  ["locate.json", resultJson(result)],
  ["locate-cells.csv", locateCellsCsv(result)],
  ["locate-pairs.csv", locatePairsCsv(result)],
  ["locate-bands.csv", locateBandsCsv(result)],
  ["locate-map.csv", locateMapCsv(result)],
  ["locate-map.svg", locateMapSvg(result)],
  ["locate-projection.csv", locateProjectionCsv(result)],
  ...(result.path === undefined
    ? []
    : ([
        ["locate-path.csv", locatePathCsv(result)],
        ["locate-path.svg", locatePathSvg(result)],
      ] satisfies ResultFile[])),
];
