// terminal.ts: how does a text reach the terminal: which stream, colour or none, quiet or not, nothing that moves the cursor?
import { styleText } from "node:util";
import { resultJson } from "../report/json.js";

/** The few styles in use: errors red, warnings yellow, headings bold. */
export type Style = "red" | "yellow" | "bold";

/** Where a command prints. Texts may span lines; every control character but the line end and the tab is replaced. */
export interface Terminal {
  /** Data, on stdout. */
  print(text: string): void;
  /** A result as the one JSON document on stdout. */
  printJson(result: object): void;
  /** What a person may like to know, on stderr; silent with --quiet. */
  note(text: string): void;
  /** What a person must know, on stderr, also with --quiet. */
  warn(text: string): void;
  /** A line of an error report, on stderr. `label` is coloured. */
  fail(label: string, text: string): void;
  /** True where a progress bar may be drawn: stderr is a terminal and nothing asks for silence. */
  readonly drawsProgress: boolean;
  /** Width of the terminal in columns; 96 where stdout is no terminal. */
  readonly columns: number;
}

type Stream = NodeJS.WriteStream;

/** Control characters, marks that reverse the direction of writing and lone surrogates become U+FFFD; "\n" and "\t" stay. */
export function sanitise(text: string): string {
  return text.replace(/(?![\n\t])[\p{Cc}\p{Cs}\u2028\u2029\u202a-\u202e\u2066-\u2069]/gu, "\ufffd");
}

/** JSON text in which those characters stand as escapes of four hexadecimal digits, so that it is safe on a terminal and still the same document. */
function escaped(json: string): string {
  const inHex = (character: string): string => `\\u${character.charCodeAt(0).toString(16).padStart(4, "0")}`;
  return json.replace(/[\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069]/g, inHex);
}

/** Colour on a terminal only, never with NO_COLOR (any value but the empty one) and never on a dumb terminal. */
function colours(stream: Stream): boolean {
  const { NO_COLOR, TERM } = process.env;
  return stream.isTTY === true && (NO_COLOR ?? "") === "" && TERM !== "dumb";
}

/** The terminal of this process. */
export function openTerminal(quiet: () => boolean): Terminal {
  const { stdout, stderr } = process;
  const styled = (style: Style, text: string): string =>
    colours(stderr) ? styleText(style, text, { validateStream: false }) : text;
  return {
    print: (text) => void stdout.write(`${sanitise(text)}\n`),
    printJson: (result) => void stdout.write(escaped(resultJson(result))),
    note(text) {
      if (!quiet()) stderr.write(`${sanitise(text)}\n`);
    },
    warn: (text) => void stderr.write(`${styled("yellow", "warning:")} ${sanitise(text)}\n`),
    fail: (label, text) => void stderr.write(`${label === "" ? "" : `${styled("red", label)} `}${sanitise(text)}\n`),
    get drawsProgress() {
      return stderr.isTTY === true && process.env.TERM !== "dumb" && !quiet();
    },
    get columns() {
      return Math.max(40, stdout.columns ?? 96);
    },
  };
}

/** Ends the process without a word when the reader of a pipe is gone (`tidegauge ... | head`). */
export function endWithClosedPipe(): void {
  process.stdout.on("error", (error: NodeJS.ErrnoException) => {
    if (error.code === "EPIPE") process.exit(0);
    throw error;
  });
}
