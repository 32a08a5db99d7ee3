// pack-text.ts: what does packing say in words and a table?
import type { PackResult, StoredArray } from "../studies/pack-result.js";
import { cleanLine } from "./clean.js";
import { inspectText } from "./inspect-text.js";
import { grouped, plain } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

const left = (heading: string): Column => ({ heading, align: "left" });
const columns: readonly Column[] = [left("array"), left("was"), left("is"), { heading: "size", align: "right" }];

/** Bytes in the largest decimal unit that gives at least one. */
export function sizeWords(bytes: number): string {
  const units = ["B", "kB", "MB", "GB", "TB"];
  const power = Math.min(units.length - 1, Math.floor(Math.log10(Math.max(1, bytes)) / 3));
  return `${plain(bytes / 1000 ** power, 3)} ${units[power]}`;
}

const storedWords = ({ type, axes, byteOrder, files }: StoredArray): string =>
  `${type} ${axes.join(" ")}${byteOrder === "big" ? ", big endian" : ""}${files === 1 ? "" : `, ${files} files`}`;

/** The text of a packing, with that of its check where there is one; lines of about `width` columns. */
export function packText(result: PackResult, width = 96): string {
  const { directory, title, points, bands, bytes, source, arrays, patches, notes, inferred, check } = result;
  const name = cleanLine(title);
  const head = `${cleanLine(directory)}: ${name === "" ? "" : `${name}; `}${grouped(points)} k points of ${bands} bands, ${sizeWords(bytes)} (was ${sizeWords(source.bytes)})`;
  const rows = arrays.map(({ name: array, was, is }) => [
    array,
    storedWords(was),
    storedWords(is),
    sizeWords(is.bytes),
  ]);
  const patchWords =
    patches.length === 0
      ? []
      : [`with its ${patches.length === 1 ? "patch" : "patches"} ${patches.map(cleanLine).join(", ")}`];
  const lists = [
    ...inferred.map((each) => wrapped(`- inferred: ${cleanLine(each)}`, width)),
    ...[...patchWords, ...notes].map((each) => wrapped(`- ${cleanLine(each)}`, width)),
  ];
  const parts = [wrapped(head, width), table(rows, columns), lists.join("\n")];
  if (check !== null)
    parts.push(inspectText({ format: "tidegauge.inspect/1", version: result.version, job: {}, grids: [check] }, width));
  return parts.filter((part) => part !== "").join("\n\n");
}
