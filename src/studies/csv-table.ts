// csv-table.ts: reads a small table of measurements; whatever is wrong with it is told with file, line and column.
import { readFileSync, statSync } from "node:fs";
import { parse } from "csv-parse/sync";
import { dataFault, usageFault } from "../base/errors.js";

const largestBytes = 16 * 1024 * 1024;

/** One column by its heading: the name, and the unit in brackets, "" where there is none. */
export interface TableColumn {
  readonly heading: string;
  readonly name: string;
  readonly unit: string;
}

export interface TableRow {
  readonly line: number;
  readonly cells: readonly string[];
}

export interface CsvTable {
  readonly source: string;
  readonly columns: readonly TableColumn[];
  readonly rows: readonly TableRow[];
}

/** "resistivity [uohm cm]" -> name "resistivity", unit "uohm cm"; case, blanks and underscores do not matter in the name. */
function columnOf(heading: string): TableColumn {
  const found = /^([^[]*)\[([^\]]*)\]\s*$/.exec(heading);
  const name = (found?.[1] ?? heading)
    .trim()
    .toLowerCase()
    .replace(/[\s_]+/g, " ");
  return { heading, name, unit: found?.[2].trim() ?? "" };
}

function textOf(option: string, source: string): string {
  try {
    const facts = statSync(source);
    if (!facts.isFile() || facts.size > largestBytes) throw new Error("it is no regular file of a sensible size");
    return readFileSync(source, "utf8");
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    throw usageFault(`${option} ${source} cannot be read: ${reason}`, "Give a CSV file with one line of headings.");
  }
}

/**
 * Parses a table: one line of headings, commas, semicolons or tabs between cells, lines that begin with # left out. Throws a data Fault
 * naming file and line where the text is no such table.
 */
export function parseTable(text: string, source: string): CsvTable {
  const records = recordsOf(text, source);
  const [head, ...rest] = records;
  if (head === undefined || rest.length === 0)
    throw dataFault(`${source}: holds no rows`, "Give one line of headings and at least one line of numbers.");
  if (head.record.every((cell) => cell.trim() !== "" && Number.isFinite(Number(cell))))
    throw dataFault(
      `${source}, line ${head.line}: numbers where the headings should be`,
      "Put a line of headings first, e.g. temperature_K,resistivity [uohm cm],error.",
    );
  for (const { record, line } of rest)
    if (record.length !== head.record.length)
      throw dataFault(
        `${source}, line ${line}: ${record.length} cells, expected ${head.record.length} as in the headings`,
        "Give every line a cell for each heading, and write decimals with a point.",
      );
  return {
    source,
    columns: head.record.map(columnOf),
    rows: rest.map(({ record, line }) => ({ line, cells: record })),
  };
}

function recordsOf(text: string, source: string): { record: string[]; line: number }[] {
  try {
    const parsed: unknown = parse(text, {
      bom: true,
      comment: "#",
      delimiter: [",", ";", "\t"],
      info: true,
      relax_column_count: true,
      skip_empty_lines: true,
      trim: true,
    });
    return (parsed as { record: string[]; info: { lines: number } }[]).map(({ record, info }) => ({
      record,
      line: info.lines,
    }));
  } catch (error) {
    const reason = error instanceof Error ? error.message.replace(/\s+/g, " ") : "unreadable";
    throw dataFault(
      `${source}: is not CSV: ${reason}`,
      "Separate cells by commas and quote cells that hold one.",
      error,
    );
  }
}

/** Reads and parses the file that an option names. */
export const readTable = (option: string, source: string): CsvTable => parseTable(textOf(option, source), source);

/** Index of the column of one of these names; -1 where there is none. Throws a data Fault where two columns would do. */
export function findColumn(table: CsvTable, names: readonly string[]): number {
  const found = table.columns.flatMap((column, index) => (names.includes(column.name) ? [index] : []));
  if (found.length > 1)
    throw dataFault(
      `${table.source}, line 1: columns ${found.map((index) => `"${table.columns[index].heading}"`).join(" and ")} mean the same`,
      "Leave one of them out.",
    );
  return found[0] ?? -1;
}

/** The heading and place of a column, for errors. */
export const columnWords = (table: CsvTable, index: number): string =>
  `column ${index + 1} ("${table.columns[index].heading}")`;

/** The number in a cell; NaN for an empty one. Throws a data Fault naming file, line and column for anything else. */
export function numberAt(table: CsvTable, row: TableRow, index: number): number {
  const text = row.cells[index] ?? "";
  if (text === "" || /^nan$/i.test(text)) return Number.NaN;
  const value = Number(text);
  if (!Number.isFinite(value))
    throw dataFault(
      `${table.source}, line ${row.line}, ${columnWords(table, index)}: "${text.slice(0, 40)}" is no number`,
      "Write numbers with a decimal point and without a unit; leave the cell empty where there is none.",
    );
  return value;
}

/** The same, refusing empty cells and values that are not positive. */
export function positiveAt(table: CsvTable, row: TableRow, index: number): number {
  const value = numberAt(table, row, index);
  if (value > 0) return value;
  throw dataFault(
    `${table.source}, line ${row.line}, ${columnWords(table, index)}: expected a positive number, found "${row.cells[index]}"`,
    "Correct the cell, or take the line out with a leading #.",
  );
}
