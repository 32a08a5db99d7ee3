// request.ts: `tidegauge request`: which k points should be computed next, best first.
import type { Command } from "commander";
import { resultJson } from "../../report/json.js";
import { requestCsv } from "../../report/request-csv.js";
import { requestText } from "../../report/request-text.js";
import { requestSvg } from "../../report/svg/request.js";
import { request, requestOptions } from "../../studies/request.js";
import type { Context, GlobalOptions } from "../context.js";
import { checkedOut, deliverFiles } from "../delivery.js";
import { addSweepOptions, studyOptions, withRun } from "../sweep-options.js";
import { typedWhole } from "../validated.js";

const examples = `
Examples:
  tidegauge request gold --response spin:hall --from 0 --to 0 --points 1 --out next
      the cells that make most of the error at the reference level; next/request.csv lists their k points
  tidegauge request gold --cells 100 --divide 3
      100 cells, each divided 3 x 3 x 3

Computed points are handed back as a patch: a band grid inside the grid's directory whose manifest has
  "patch": { "divisions": [2, 2, 2], "cells": "cells.i32" }
in place of "mesh", its points in the order of request.csv; the grid's manifest then lists it: "patches": ["patch-01"]. For a built-in
model tidegauge sample MODEL --request next/request.json --out gold/patch-01 does all that.`;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = addSweepOptions(
    program
      .command("request")
      .description("Which k points should be computed next, best first, and how far would the error fall?")
      .argument("<GRID>", "directory of a band grid"),
    { points: "21", temperature: "300", methods: ["refine"] },
  )
    .option(
      "--cells <N>",
      "cells to name (default a twentieth of the mesh); images under symmetry of the last come with it",
    )
    .option("--divide <M>", "into how many parts each edge of a cell is divided (default 2)")
    .addHelpText("after", examples);
  command.action(async (directory: string) => {
    const globals = command.optsWithGlobals<GlobalOptions>();
    const own = { cells: typedWhole(1).optional(), divide: typedWhole(2).optional() };
    const options = studyOptions(command, { study: "request", schema: requestOptions, own });
    checkedOut(globals);
    const result = await withRun(command, context, "summing over the zone", (run) => request(directory, options, run));
    const { terminal } = context;
    if (globals.json) terminal.printJson(result);
    else terminal.print(requestText(result, { width: Math.max(80, terminal.columns) }).trimEnd());
    deliverFiles(
      globals.out,
      [
        ["request.csv", requestCsv(result)],
        ["request.json", resultJson(result)],
        ["request.svg", requestSvg(result)],
      ],
      terminal,
    );
  });
}
