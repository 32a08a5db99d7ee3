// sample.ts: `tidegauge sample`: lists the built-in models and writes one of them as a band grid.
import { dirname, resolve } from "node:path";
import type { Command } from "commander";
import { z } from "zod";
import { usageFault } from "../../base/errors.js";
import type { Triple } from "../../grid/grid.js";
import { cleanLine } from "../../report/clean.js";
import { grouped, plain } from "../../report/numbers.js";
import { table } from "../../report/table.js";
import { buildSample, defaultMesh, sampleCatalogue, sampleNamed } from "../../samples/catalogue.js";
import type { SampleModel } from "../../samples/model.js";
import type { Sample } from "../../samples/parameter.js";
import { writePatch } from "../../samples/patch.js";
import { reducedPoints } from "../../samples/symmetry.js";
import { writeSample } from "../../samples/write.js";
import { type Context, type GlobalOptions, requiredOut } from "../context.js";
import { checkRequested, readRequest } from "../requestfile.js";
import { typedNumber, typedWhole, validated } from "../validated.js";

const examples = `
Examples:
  tidegauge sample --list
      all models with their parameters; "tidegauge sample haldane --list" shows one
  tidegauge sample haldane --set M=0.2 phi=1.2 --out haldane
      Haldane's layer on its default mesh, two parameters changed
  tidegauge sample metal --mesh 16 16 16 --out gold
      gold from two-centre parameters, 18 bands, 4096 k points
  tidegauge sample haldane --mesh 24 24 --offset 0.5 0.5 --out haldane-24
      a mesh of one's own, moved by half a step off the zone's centre
  for e in -0.01 0 0.01; do tidegauge sample demo --mesh 8 8 8 --set strain=$e --out demo-strain$e; done
      a family for tidegauge series: each grid has its strain as a tag
  tidegauge sample metal --request next/request.json --out gold/patch-01
      the k points that tidegauge request asked for, entered into the grid "gold" that this model made`;

const optionsSchema = z.object({
  list: z.literal(true).optional(),
  mesh: z
    .array(typedWhole(1))
    .min(2, "expected two or three numbers")
    .max(3, "expected two or three numbers")
    .optional(),
  offset: z
    .array(typedNumber().refine((value) => value >= 0 && value < 1, { error: "expected numbers from 0 to below 1" }))
    .min(2, "expected two or three numbers")
    .max(3, "expected two or three numbers")
    .optional(),
  request: z.string().min(1).optional(),
  reduced: z.literal(true).optional(),
  set: z.array(z.string().regex(/^[^=]+=/, "expected NAME=VALUE")).default([]),
  tag: z.array(z.string().regex(/^[^=]+=/, "expected NAME=VALUE")).default([]),
});

type Options = z.output<typeof optionsSchema>;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = program
    .command("sample")
    .description("Write a built-in published model as a band grid, or list the models.")
    .argument("[NAME]", "which model")
    .option("--list", "print the models, or the parameters of the one that is named")
    .option("--mesh <N...>", "divisions of the mesh along b1, b2 (and b3)")
    .option("--offset <X...>", "where the mesh starts, in mesh steps, each from 0 to below 1")
    .option("--reduced", "write one point of every star alone, with the group that makes the others")
    .option("--request <FILE>", "write the cells that a request.json names, as a patch inside the grid of this model")
    .option("--set <NAME=VALUE...>", "parameters of the model; they are also written as tags of the grid")
    .option("--tag <NAME=VALUE...>", "more tags of the grid, e.g. strain_percent=-1 (see tidegauge series)")
    .addHelpText("after", examples);
  command.action((name: string | undefined) => {
    const options = validated(optionsSchema, command.opts(), "sample");
    const globals = command.optsWithGlobals<GlobalOptions>();
    if (options.list) list(name, globals, context);
    else if (name === undefined) throw usageFault("no model is named", "see tidegauge sample --list");
    else if (options.request !== undefined) writeRequested(name, options.request, options, globals, context);
    else write(name, options, globals, context);
  });
}

function list(name: string | undefined, globals: GlobalOptions, { terminal }: Context): void {
  const samples = name === undefined ? sampleCatalogue : [sampleNamed(name)];
  if (globals.json) terminal.printJson({ format: "tidegauge.samples/1", samples: samples.map(described) });
  else terminal.print(samples.map(paragraph).join("\n\n"));
}

function described(sample: Sample): object {
  const parameters = Object.entries(sample.parameters).map(([name, { default: value, unit, meaning }]) => ({
    name,
    default: value ?? null,
    unit,
    meaning,
  }));
  return {
    name: sample.name,
    summary: sample.summary,
    source: sample.build(defaultsOf(sample)).source,
    mesh: sample.mesh,
    parameters,
  };
}

const defaultsOf = (sample: Sample): Record<string, number | string | undefined> =>
  Object.fromEntries(Object.entries(sample.parameters).map(([key, parameter]) => [key, parameter.default]));

function paragraph(sample: Sample): string {
  const rows = Object.entries(sample.parameters).map(([name, { default: value, unit, meaning }]) => [
    name,
    typeof value === "number" ? plain(value) : (value ?? "-"),
    unit,
    meaning,
  ]);
  const columns = [
    { heading: "parameter", align: "left" },
    { heading: "default", align: "right" },
    { heading: "unit", align: "left" },
    { heading: "meaning", align: "left" },
  ] as const;
  const mesh = sample.mesh.divisions.join(" x ");
  return `${sample.name}: ${sample.summary} (default mesh ${mesh})\n${table(rows, columns).replace(/^/gm, "  ")}`;
}

function write(name: string, options: Options, globals: GlobalOptions, { terminal, progress }: Context): void {
  const model = buildSample(name, Object.fromEntries(options.set.map(splitAtFirst)));
  const directory = requiredOut(globals);
  const standard = defaultMesh(name, model);
  const divisions = options.mesh === undefined ? standard.divisions : threeOf(options.mesh, "--mesh", model);
  const offset = options.offset === undefined ? standard.offset : threeOf(options.offset, "--offset", model);
  const task = progress("writing");
  try {
    const tags = tagsOf([...options.set, ...options.tag]);
    const reduced = options.reduced ? reducedPoints(model, { ...model, divisions, offset }) : undefined;
    const grid = writeSample(model, { directory, divisions, offset, reduced, tags }, (done, total) => {
      task.advance(done, total);
      return true;
    });
    task.end();
    const facts = grid?.facts;
    if (facts === undefined) return;
    const { title, points, bands, bytes, sha256 } = facts;
    if (globals.json)
      terminal.printJson({
        format: "tidegauge.sample/1",
        directory,
        title,
        divisions,
        offset,
        points,
        bands,
        bytes,
        sha256,
      });
    else
      terminal.print(
        `${directory}: ${cleanLine(title)}; ${grouped(facts.storedFlat?.length ?? points)} k points of ${bands} bands${facts.storedFlat === undefined ? "" : `, which make the ${grouped(points)} of the mesh`}`,
      );
  } finally {
    task.end();
  }
}

/** NAME=VALUE as tags: numbers where they read as numbers. The directory of a parameter file is not for a manifest. */
function tagsOf(settings: readonly string[]): Record<string, string | number> {
  const tags = settings.map(splitAtFirst).filter(([name]) => name !== "file");
  return Object.fromEntries(
    tags.map(([name, text]) => [name, text.trim() !== "" && Number.isFinite(Number(text)) ? Number(text) : text]),
  );
}

function writeRequested(
  name: string,
  file: string,
  options: Options,
  globals: GlobalOptions,
  { terminal, progress }: Context,
): void {
  const idle = options.mesh !== undefined ? "--mesh" : options.offset !== undefined ? "--offset" : undefined;
  if (idle !== undefined)
    throw usageFault(`${idle} means nothing beside --request`, "Leave it out: the request names the points.");
  const directory = requiredOut(globals);
  const asked = readRequest(file);
  const model = buildSample(name, Object.fromEntries(options.set.map(splitAtFirst)));
  checkRequested(asked, dirname(resolve(directory)));
  const patch = { divisions: asked.divide, cells: Int32Array.from(asked.cells, ({ cell }) => cell) };
  const task = progress("writing");
  try {
    const grid = writePatch(model, directory, patch, (done, total) => {
      task.advance(done, total);
      return true;
    });
    task.end();
    if (grid === undefined) return;
    const { points, bytes, sha256 } = grid.facts;
    const cells = patch.cells.length;
    if (globals.json)
      terminal.printJson({
        format: "tidegauge.sample/1",
        directory,
        cells,
        divide: asked.divide,
        points,
        bytes,
        sha256,
      });
    else
      terminal.print(
        `${directory}: ${grouped(points)} k points in ${grouped(cells)} cells; ${dirname(resolve(directory))} lists this patch now`,
      );
  } finally {
    task.end();
  }
}

function splitAtFirst(setting: string): [string, string] {
  const at = setting.indexOf("=");
  return [setting.slice(0, at), setting.slice(at + 1)];
}

/** Numbers along b1, b2, b3 as typed: three for a crystal; two for a layer, whose third is filled in (or typed as 1 or 0). */
function threeOf(typed: readonly number[], option: "--mesh" | "--offset", model: SampleModel): Triple {
  const third = option === "--mesh" ? 1 : 0;
  if (typed.length === 3) return [typed[0], typed[1], typed[2]];
  if (model.periodic === 2) return [typed[0], typed[1], third];
  throw usageFault(
    `${option} ${typed.join(" ")}: ${model.name} is a crystal, expected three numbers`,
    `e.g. ${option} ${typed[0]} ${typed[1]} ${typed[1]}`,
  );
}
