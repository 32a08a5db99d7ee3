// page.ts: how do results become one HTML document that needs nothing else: no network, no other file?
import { createHash } from "node:crypto";
import type { CurvesResult } from "../curves/result.js";
import type { AnyResult } from "./any-result.js";
import { cleanLine, escapeXml } from "./clean.js";
import { grouped, plain } from "./numbers.js";
import { pageDataJson } from "./page-data.js";
import { type PageSection, pageSection, type SectionPicture } from "./page-sections.js";

/** A result and the file it was read from. */
export interface NamedResult {
  readonly name: string;
  readonly result: AnyResult;
}

export interface PageOptions {
  /** Plain text; default: the title of the first grid. */
  readonly title?: string;
  /** Version that writes the page. */
  readonly version: string;
  /** When the page was made, as it is to be read; nothing is said when it is left out. */
  readonly made?: string;
  /** Script and style sheet of the page, as built. */
  readonly script: string;
  readonly style: string;
}

const isSweep = (result: AnyResult): result is CurvesResult => result.format === "tidegauge.curves/1";

const mesh = (divisions: readonly number[], periodic: number): string => divisions.slice(0, periodic).join(" × ");

function facts(rows: readonly (readonly [string, string])[]): string {
  return `<dl>${rows.map(([term, text]) => `<dt>${escapeXml(term)}</dt><dd>${escapeXml(text)}</dd>`).join("")}</dl>`;
}

/** How a sweep was computed: grid, hash, method, options, version. */
function howComputed(result: CurvesResult, file: string): string {
  const { grid, sampling, job, version } = result;
  const options = Object.entries(job).map(([name, value]) => `${name} ${JSON.stringify(value)}`);
  return facts([
    ["Grid", cleanLine(grid.title)],
    ["Hash (SHA-256)", grid.sha256],
    ["Mesh", `${mesh(grid.divisions, grid.periodic)}, ${grouped(grid.points)} points, ${grid.bands} bands`],
    [
      "Method",
      `${sampling.method}, ${grouped(sampling.samples)} samples, cells split ${sampling.deepest} times at most`,
    ],
    ["Reference level", `${plain(result.reference_eV, 8)} eV`],
    ["Options", options.join(", ")],
    ["File", file],
    ["Computed by", `tidegauge ${version}`],
  ]);
}

const notesList = (notes: readonly string[]): string =>
  `<ul class="notes">${notes.map((note) => `<li>${escapeXml(note)}</li>`).join("")}</ul>`;

function sweepMarkup({ result, name }: { result: CurvesResult; name: string }, at: number): string {
  return [
    `<section aria-labelledby="sweep-${at + 1}"><h2 id="sweep-${at + 1}">${escapeXml(result.grid.title) || "Sweep"}</h2>`,
    `<div data-curves="${at}"><p>The curves are drawn by the script in this file; this browser does not run it.</p></div>`,
    `<h3>Notes</h3>${notesList(result.notes)}`,
    `<h3>How it was computed</h3>${howComputed(result, name)}</section>`,
  ].join("\n");
}

/** A picture stands in the page as an image: its text is text, its ids are its own, and nothing in it can run. */
function pictureMarkup({ words, svg }: SectionPicture): string {
  const data = Buffer.from(svg, "utf8").toString("base64");
  return `<div class="picture scroll" tabindex="0" role="region" aria-label="${escapeXml(words)}"><img alt="${escapeXml(words)}; the text below holds the numbers." src="data:image/svg+xml;base64,${data}"></div>`;
}

/** Texts keep their lines; everything else that is not print is taken out. */
const preformatted = (text: string): string => text.trimEnd().split("\n").map(keptLine).join("\n");
const keptLine = (line: string): string => (/^ */.exec(line)?.[0] ?? "") + escapeXml(line);

function sectionMarkup({ heading, pictures, text }: PageSection, name: string, at: number): string {
  const title = `<h2 id="section-${at + 1}">${escapeXml(heading)}</h2><p class="faint">${escapeXml(name)}</p>`;
  const words = `<pre class="scroll" tabindex="0" role="region" aria-label="${escapeXml(`${heading} in numbers`)}">${preformatted(text)}</pre>`;
  return `<section aria-labelledby="section-${at + 1}">${title}${pictures.map(pictureMarkup).join("")}${words}</section>`;
}

const cautions = `<div class="caution"><p><strong>Intrinsic only, rigid band.</strong> Scattering (skew, side jump, a finite lifetime) is left out, and doping moves the level through fixed bands. These are screening numbers: an error bar speaks of the sampling of k space and of the continuation between mesh points, not of the band structure.</p></div>`;

const sha256 = (text: string): string => createHash("sha256").update(text).digest("base64");

/** Only the page's own script may run, and nothing may be fetched from anywhere. */
function policyOf(script: string): string {
  return `default-src 'none'; script-src 'sha256-${sha256(script)}'; style-src 'unsafe-inline'; img-src data:; base-uri 'none'; form-action 'none'`;
}

const contents = (entries: readonly (readonly [id: string, words: string])[]): string =>
  entries.length < 2
    ? ""
    : `<nav aria-label="Contents"><ul>${entries.map(([id, words]) => `<li><a href="#${id}">${escapeXml(words)}</a></li>`).join("")}</ul></nav>`;

/**
 * One self-contained HTML document of all results: an explorer for every sweep, pictures and text for the others. All outside text is
 * escaped; a content policy lets only the page's own script run and forbids every request. Equal input gives equal bytes.
 * Throws a data Fault for a result that is not whole.
 */
export function pageHtml(results: readonly NamedResult[], options: PageOptions): string {
  const sweeps = results.flatMap(({ name, result }) => (isSweep(result) ? [{ name, result }] : []));
  const curves = sweeps.map(({ result }) => result);
  const others = results.flatMap(({ name, result }) =>
    isSweep(result) ? [] : [{ name, section: pageSection(result, curves, name) }],
  );
  const title = escapeXml(options.title ?? "") || escapeXml(curves[0]?.grid.title ?? "") || "Hall responses";
  const script = options.script.replaceAll("</script", "<\\/script");
  const made = options.made === undefined ? "" : `, ${escapeXml(options.made)}`;
  const entries = [
    ...sweeps.map(({ result }, at) => [`sweep-${at + 1}`, cleanLine(result.grid.title) || "Sweep"] as const),
    ...others.map(({ section }, at) => [`section-${at + 1}`, section.heading] as const),
  ];
  return [
    "<!doctype html>",
    '<html lang="en"><head><meta charset="utf-8">',
    `<meta http-equiv="Content-Security-Policy" content="${policyOf(script)}">`,
    '<meta name="viewport" content="width=device-width, initial-scale=1">',
    `<title>${title}</title>`,
    `<style>${options.style.replaceAll("</style", "<\\/style")}</style></head><body><div class="page">`,
    `<header><div><h1>${title}</h1><p class="faint">Written by tidegauge ${escapeXml(options.version)}${made}</p></div>`,
    '<button type="button" id="theme" hidden>Light or dark</button></header>',
    `<main>${contents(entries)}${cautions}`,
    ...sweeps.map(sweepMarkup),
    ...others.map(({ section, name }, at) => sectionMarkup(section, name, at)),
    "</main></div>",
    `<script type="application/json" id="tidegauge-data">${pageDataJson(curves)}</script>`,
    `<script>${script}</script></body></html>\n`,
  ].join("\n");
}
