// request-text.ts: what does `request` say in words and tables, on a terminal?
import type { RequestResult } from "../studies/request-result.js";
import { cleanLine } from "./clean.js";
import { grouped, plain, withError } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

/** Cells shown; the files hold all. */
const cellsShown = 12;

const right = (heading: string): Column => ({ heading, align: "right" });

const percent = (share: number): string => `${plain(100 * share, 2)}%`;

/** A level with its sign, to a tenth of a meV. */
const level = (levelEv: number): string => `${levelEv > 0 ? "+" : ""}${plain(levelEv, 4)} eV`;

function headline(result: RequestResult): string {
  const { cells, divide, grid } = result;
  const perCell = divide[0] * divide[1] * divide[2];
  const last = cells[cells.length - 1];
  return (
    `Compute ${grouped(cells.length * perCell)} k points next: ${grouped(cells.length)} of the mesh's ${grouped(grid.points)} cells ` +
    `(${percent(cells.length / grid.points)}), each divided ${divide.slice(0, grid.periodic).join(" x ")}. ` +
    `They make ${percent(cells.reduce((sum, cell) => sum + cell.share, 0))} of the error of the local models; ${percent(last.left)} of it is expected to remain.`
  );
}

function responseWords(each: RequestResult["expected"][number]): string {
  const [name, unit] = [cleanLine(each.name), cleanLine(each.unit)];
  const now = withError(each.value, each.error_now);
  const samplingRules = each.error_sampling > 0.7 * each.error_expected;
  const hint = samplingRules
    ? " Sampling makes most of what remains: a smaller --accuracy lowers that without new data."
    : "";
  return (
    `${name} is least certain at ${level(each.level_eV)}, ${plain(each.temperature_K)} K: ${now} ${unit}. ` +
    `Its bar should fall from ${plain(each.error_now, 2)} to ${plain(each.error_expected, 2)}.${hint}`
  );
}

/** The text of a request; `width` in columns. Ends with a newline. */
export function requestText(result: RequestResult, { width }: { readonly width: number }): string {
  const { cells, grid } = result;
  const places = [1, 2, 3].slice(0, grid.periodic);
  const rows = cells
    .slice(0, cellsShown)
    .map(({ cell, k, share, left }, i) => [
      String(i + 1),
      String(cell),
      ...places.map((j) => plain(k[j - 1], 4)),
      percent(share),
      percent(left),
    ]);
  const columns = [
    right("rank"),
    right("cell"),
    ...places.map((j) => right(`k${j}`)),
    right("share of error"),
    right("left after it"),
  ];
  const more =
    cells.length > cellsShown ? [`... and ${grouped(cells.length - cellsShown)} more; --out writes them all.`] : [];
  const paragraphs = [
    wrapped(headline(result), width),
    ...result.expected.map((each) => wrapped(responseWords(each), width)),
    [table(rows, columns), ...more].join("\n"),
    result.notes.map((note) => wrapped(`- ${cleanLine(note)}`, width)).join("\n"),
  ];
  return `${paragraphs.join("\n\n")}\n`;
}
