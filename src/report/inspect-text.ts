// inspect-text.ts: what does an inspection say in words and tables, one grid after another?
import type { GridContents, InspectedGrid, InspectedLevel, InspectResult } from "../studies/inspect-result.js";
import { cleanLine } from "./clean.js";
import { healthLines } from "./health-text.js";
import { grouped, plain } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

/** Bands more than this are shown as the ones about the level only. */
const bandsShown = 24;

/** The whole result as text of lines of about `width` columns; grids are parted by an empty line. */
export function inspectText(result: InspectResult, width = 96): string {
  return result.grids.map((grid) => gridText(grid, width)).join("\n\n");
}

function gridText(grid: InspectedGrid, width: number): string {
  const parts = [`${cleanLine(grid.directory)}: ${verdict(grid)}`];
  if (grid.contents !== null) parts.push(contentsText(grid.contents, width));
  const faults = grid.faults.map(({ message, cure }) => sentence("fault", `${message}. ${cure}`, width));
  const more = grid.faults_total - grid.faults.length;
  if (more > 0) faults.push(`  and ${grouped(more)} more faults`);
  const health = grid.health === null ? [] : healthLines(grid.health, width);
  const warnings = grid.warnings.map((warning) => sentence("note", warning, width));
  return [...parts, ...faults, ...health, ...warnings].join("\n").trimEnd();
}

function verdict({ sound, faults_total: total, contents, health }: InspectedGrid): string {
  const wrong = health?.findings.filter(({ severity }) => severity !== "note").length ?? 0;
  if (sound && wrong > 0)
    return `sound in form, but ${wrong === 1 ? "one thing is" : `${wrong} things are`} wrong with the data (health, below)`;
  if (sound) return "sound; every number was read";
  if (contents === null) return "cannot be used";
  return `${grouped(total)} ${total === 1 ? "fault" : "faults"}`;
}

/** `word: text`, wrapped, continued under the text. */
function sentence(word: string, text: string, width: number): string {
  const indent = " ".repeat(word.length + 4);
  return `  ${word}: ${wrapped(cleanLine(text), width, indent).trimStart()}`;
}

function contentsText(contents: GridContents, width: number): string {
  const lines: [string, string][] = [
    ["title", cleanLine(contents.title) || "none"],
    ["cell", cellWords(contents)],
    ["mesh", meshWords(contents)],
    ...patchLines(contents),
    ["bands", bandWords(contents)],
    ["level", contents.level === null ? "not looked for: the numbers have faults" : levelWords(contents.level)],
    ["moments", momentWords(contents)],
    ["second derivative", hessianWords[contents.hessian]],
    ...tagLines(contents),
    ["fingerprint", contents.sha256.slice(0, 16)],
  ];
  if (contents.digests_checked > 0)
    lines.push(["digests", `${contents.digests_checked} files agree with the manifest`]);
  const label = Math.max(...lines.map(([name]) => name.length)) + 2;
  const indent = " ".repeat(label + 2);
  const facts = lines.map(([name, text]) => `  ${name.padEnd(label)}${wrapped(text, width, indent).trimStart()}`);
  return [...facts, "", indented(arrayTable(contents)), "", indented(bandTable(contents)), ""].join("\n");
}

const indented = (text: string): string => text.replace(/^(?=.)/gm, "  ");

const hessianWords = {
  none: "none",
  "free-electron": "free electron, hbar^2/m_e on the diagonal (not stored)",
  array: "stored as an array",
} as const;

function cellWords({ lattice_A: rows, periodic, cell_size: size }: GridContents): string {
  const vectors = rows.map((row) => `(${row.map((x) => plain(x, 5)).join(",")})`).join(" ");
  return `${periodic === 3 ? "crystal" : "layer"}, ${plain(size, 5)} A^${periodic}; a1 a2 a3 in A: ${vectors}`;
}

function meshWords({ divisions, offset, periodic, points, reduced, bytes }: GridContents): string {
  const start = offset.some((x) => x !== 0)
    ? `, offset ${offset
        .slice(0, periodic)
        .map((x) => plain(x, 4))
        .join(" ")}`
    : "";
  const stored =
    reduced === null
      ? ""
      : `, ${grouped(reduced.stored)} of them stored with a group of ${reduced.operations} operations`;
  return `${divisions.slice(0, periodic).join(" x ")}${start}: ${grouped(points)} k points${stored}, ${byteWords(bytes)}`;
}

const patchLines = ({ patches }: GridContents): [string, string][] =>
  patches.map(({ name, cells, divisions, points, bytes }) => [
    `patch ${cleanLine(name)}`,
    `${grouped(cells)} cells, each ${divisions.join(" x ")}: ${grouped(points)} k points, ${byteWords(bytes)}`,
  ]);

function bandWords({ bands, electrons_per_band: electrons, band_range_eV: ranges }: GridContents): string {
  const low = Math.min(...ranges.map((range) => range[0]));
  const high = Math.max(...ranges.map((range) => range[1]));
  const filling = electrons === 1 ? "one electron each" : "two electrons each (spin-degenerate)";
  return `${bands}, ${filling}, from ${plain(low, 6)} to ${plain(high, 6)} eV`;
}

function levelWords(level: InspectedLevel): string {
  const { crossing_bands: crossing, gap_eV: gap, electrons } = level;
  const where =
    crossing.length > 0
      ? `crossed by ${crossing.length === 1 ? "band" : "bands"} ${rangeWords(crossing)}`
      : gap === null
        ? "at the edge of the bands"
        : `in a gap of ${plain(gap, 4)} eV (on this mesh)`;
  const stated = electrons === null ? "" : `, stated are ${plain(electrons)}`;
  return `${plain(level.reference_eV, 7)} eV (${level.origin}), ${where}; ${plain(level.electrons_counted, 6)} electrons per cell below it${stated}`;
}

const rangeWords = (bands: readonly number[]): string =>
  bands.length === 1 ? String(bands[0]) : `${bands[0]} to ${bands[bands.length - 1]}`;

function momentWords({ moments }: GridContents): string {
  if (moments.length === 0) return "none";
  const words = moments.map(({ name, kind, underTimeReversal, unit }) => {
    return `${cleanLine(name)} (${kind}, ${underTimeReversal} under time reversal, ${unit === "1" ? "dimensionless" : unit})`;
  });
  return words.join(", ");
}

function tagLines({ tags }: GridContents): [string, string][] {
  const entries = Object.entries(tags).map(([name, value]) => `${cleanLine(name)} = ${cleanLine(String(value))}`);
  return entries.length === 0 ? [] : [["tags", entries.join(", ")]];
}

function arrayTable({ arrays }: GridContents): string {
  const columns: Column[] = [
    { heading: "array", align: "left" },
    { heading: "type", align: "left" },
    { heading: "axes, slowest first", align: "left" },
    { heading: "unit", align: "left" },
    { heading: "files", align: "right" },
    { heading: "size", align: "right" },
    { heading: "largest element", align: "right" },
    { heading: "worst asymmetry", align: "right" },
  ];
  const rows = arrays.map((array) => [
    array.name,
    array.type,
    array.axes.join(" "),
    array.unit,
    String(array.files),
    byteWords(array.bytes),
    array.name === "energy" ? "" : plain(array.largest, 4),
    array.name === "energy" ? "" : plain(array.asymmetry, 2),
  ]);
  return table(rows, columns);
}

/** All bands, or those about the level with the number of the others. Bands count from 0. */
function bandTable({ band_range_eV: ranges, level }: GridContents): string {
  const above = ranges.findIndex((range) => level !== null && range[0] > level.reference_eV);
  const middle = above < 0 ? ranges.length : above;
  const many = ranges.length > bandsShown;
  const first = many ? Math.max(0, Math.min(middle - bandsShown / 2, ranges.length - bandsShown)) : 0;
  const shown = ranges.slice(first, first + bandsShown);
  const rows = shown.map(([low, high], index) => [String(first + index), low.toFixed(4), high.toFixed(4)]);
  const columns: Column[] = [
    { heading: "band", align: "right" },
    { heading: "lowest, eV", align: "right" },
    { heading: "highest, eV", align: "right" },
  ];
  const rest = many ? `\n(${shown.length} of ${ranges.length} bands, those about the level)` : "";
  return table(rows, columns) + rest;
}

/** 1536 -> "1.54 kB": powers of 1000, three digits. */
function byteWords(bytes: number): string {
  const units = ["B", "kB", "MB", "GB", "TB"];
  const step = Math.min(units.length - 1, Math.floor(Math.log10(Math.max(1, bytes)) / 3));
  return `${plain(bytes / 1000 ** step, 3)} ${units[step]}`;
}
