// table.ts: how are rows of words and numbers set in aligned columns, and long sentences in lines?

/** A column: its heading and the side its cells keep to (numbers: right). */
export interface Column {
  heading: string;
  align: "left" | "right";
}

/**
 * Columns of equal width two blanks apart, a heading line first, no rules and no blanks at line ends.
 * A missing cell is empty. Throws nothing; lines end with "\n" between them, not after the last.
 */
export function table(rows: readonly (readonly string[])[], columns: readonly Column[]): string {
  const lines = [columns.map((column) => column.heading), ...rows];
  const widths = columns.map((_, at) => Math.max(...lines.map((line) => widthOf(line[at] ?? ""))));
  return lines
    .map((line) =>
      columns
        .map((column, at) => {
          const cell = line[at] ?? "";
          const blanks = " ".repeat(widths[at] - widthOf(cell));
          return column.align === "right" ? blanks + cell : cell + blanks;
        })
        .join("  ")
        .trimEnd(),
    )
    .join("\n");
}

/** Breaks a text at blanks into lines of at most `width` characters (longer words stand alone), each begun with `indent`. */
export function wrapped(text: string, width: number, indent = ""): string {
  const lines: string[] = [];
  let line = "";
  for (const word of text.split(/\s+/).filter((part) => part !== "")) {
    if (line !== "" && indent.length + widthOf(line) + 1 + widthOf(word) > width) {
      lines.push(indent + line);
      line = word;
    } else {
      line = line === "" ? word : `${line} ${word}`;
    }
  }
  if (line !== "") lines.push(indent + line);
  return lines.join("\n");
}

/** Counts code points, so that a character outside the basic plane is one column. */
function widthOf(text: string): number {
  return [...text].length;
}
