// report.ts: `tidegauge report`: one HTML file to look at and to hand on, from results of the other commands.
import { existsSync, readFileSync, statSync } from "node:fs";
import { basename, dirname, join, resolve } from "node:path";
import type { Command } from "commander";
import { dataFault, usageFault } from "../../base/errors.js";
import { productVersion } from "../../base/version.js";
import { type AnyResult, parseResult } from "../../report/any-result.js";
import { type NamedResult, pageHtml } from "../../report/page.js";
import { type Context, type GlobalOptions, requiredOut } from "../context.js";
import { checkedOut, deliverFiles } from "../delivery.js";

const examples = `
Examples:
  tidegauge report gold-curves/curves.json --out gold-page
      writes gold-page/report.html: curves with bars, a temperature to move, read-out, peaks, downloads; opens from disk
  tidegauge report gold-curves gold-dope gold-converge where --title "Gold, first look" --out gold-page
      everything in these directories on one page

A result is a JSON file that a command wrote with --out, or the directory that holds some. The page needs no network and no other file. The date
in it is today's, or that of SOURCE_DATE_EPOCH, so that the same results can give the same bytes.`;

/** Results that a directory may hold, in the order in which a page shows them. */
const files = ["curves", "dope", "angle", "series", "converge", "locate", "request", "inspect"].map(
  (name) => `${name}.json`,
);
const largestBytes = 256 * 1024 * 1024;

/** The result files that an argument means. */
function filesOf(name: string): string[] {
  if (statSync(name, { throwIfNoEntry: false })?.isDirectory() !== true) return [name];
  const found = files.map((file) => join(name, file)).filter((file) => existsSync(file));
  if (found.length > 0) return found;
  throw usageFault(`${name} holds no result`, "name a directory that a command wrote with --out, or a JSON file in it");
}

function readResult(path: string): AnyResult {
  const facts = statSync(path, { throwIfNoEntry: false });
  if (facts === undefined)
    throw usageFault(`${path} does not exist`, "name JSON files that a command wrote with --out");
  if (!facts.isFile() || facts.size > largestBytes)
    throw dataFault(
      `${path} is no regular file of a sensible size.`,
      "Name a JSON file that a command wrote with --out.",
    );
  return parseResult(readFileSync(path, "utf8"), path);
}

/** The file and the directory that holds it: what lies above is nobody else's business. */
const shortName = (path: string): string => join(basename(dirname(resolve(path))), basename(path));

/** Script and style of the page, which stand beside the compiled program. */
function bundled(name: string): string {
  return readFileSync(new URL(`../../report/page/${name}`, import.meta.url), "utf8");
}

/** The day on which the page is made, or the one that SOURCE_DATE_EPOCH (seconds) names. */
function today(): string {
  const epoch = process.env.SOURCE_DATE_EPOCH;
  const date = epoch === undefined || !/^\d{1,12}$/.test(epoch) ? new Date() : new Date(1000 * Number(epoch));
  return date.toISOString().slice(0, 10);
}

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = program
    .command("report")
    .description("A page to look at and to hand on, from results of the other commands")
    .argument("<RESULT...>", "JSON files that commands wrote with --out, or the directories that hold them")
    .option("--title <TEXT>", "heading of the page (default: the title of the first grid)")
    .addHelpText("after", examples);
  command.action((names: string[]) => {
    const globals = command.optsWithGlobals<GlobalOptions & { readonly title?: string }>();
    const out = requiredOut(globals);
    checkedOut(globals);
    const paths = [...new Set(names.flatMap(filesOf))];
    const results = paths.map((path): NamedResult => ({ name: shortName(path), result: readResult(path) }));
    const page = { title: globals.title, version: productVersion, made: today() };
    const text = pageHtml(results, { ...page, script: bundled("main.js"), style: bundled("page.css") });
    const bytes = Buffer.byteLength(text);
    const formats = results.map(({ result }) => result.format);
    if (globals.json)
      context.terminal.printJson({
        format: "tidegauge.report/1",
        file: join(out, "report.html"),
        bytes,
        results: formats,
      });
    else
      context.terminal.print(
        `${join(out, "report.html")}: ${paths.map((path) => basename(path)).join(", ")}; ${Math.ceil(bytes / 1000)} kB`,
      );
    deliverFiles(out, [["report.html", text]], context.terminal);
  });
}
