// text.ts: what does a sweep say in words and in one table, on a terminal?
import type { CurvesResult, ResponseCurve } from "../curves/result.js";
import { cleanLine } from "./clean.js";
import { grouped, plain, withError } from "./numbers.js";
import { largestOf, readingAt } from "./reading.js";
import { sparkline } from "./sparkline.js";
import { type Column, table, wrapped } from "./table.js";

export interface TextOptions {
  /** Columns of the terminal, 80 or more; default 96. */
  width?: number;
  /** Small charts in block characters, one per response and temperature; default true. */
  charts?: boolean;
}

const methodWords = {
  refine: "adaptive refinement inside the mesh cells, corrected by the neighbouring stored points",
  cells: "every band continued linearly inside its mesh cell",
  points: "the plain sum over the stored points",
} as const;

/** e.g. "24 x 24 x 24"; a layer shows its two directions. */
function meshWords(grid: CurvesResult["grid"]): string {
  return grid.divisions.slice(0, grid.periodic).join(" x ");
}

/** How the zone was sampled, as one sentence. */
function samplingWords({ grid, sampling }: CurvesResult): string {
  const spent = sampling.samples === sampling.stored ? "" : `, ${grouped(sampling.samples)} samples`;
  const depth = sampling.deepest > 0 ? `, cells halved up to ${sampling.deepest} times` : "";
  return `Mesh ${meshWords(grid)}, ${grouped(sampling.stored)} stored points of ${grid.bands} bands; ${sampling.method}: ${methodWords[sampling.method]}${spent}${depth}.`;
}

const many = (count: number, word: string): string => `${count} ${word}${count === 1 ? "" : "s"}`;

function opening(result: CurvesResult): string {
  const { level_eV: levels, temperature_K: temperatures, responses } = result;
  const [first, last] = [levels[0], levels[levels.length - 1]];
  const kelvin = temperatures.map((temperatureK) => `${plain(temperatureK)} K`).join(", ");
  const title = cleanLine(result.grid.title);
  const window =
    levels.length === 1
      ? `the level ${plain(first)} eV`
      : `${many(levels.length, "level")} from ${plain(first)} to ${plain(last)} eV`;
  return (
    `${title === "" ? "" : `${title}: `}${many(responses.length, "response")} at ${kelvin}, ${window} ` +
    `about the reference level (${plain(result.reference_eV)} eV in the grid's own scale).`
  );
}

/** The answer in a sentence, for the first response at its first temperature. */
function headline(result: CurvesResult): string {
  const [response] = result.responses;
  if (response === undefined) return "No response was asked for.";
  const [levels, value, error] = [result.level_eV, response.value[0], response.error[0]];
  const here = readingAt(levels, value, error, 0);
  const most = largestOf(levels, value, error);
  const [name, unit] = [cleanLine(response.name), cleanLine(response.unit)];
  if (most === undefined) return `${name} has no numbers in this window.`;
  const added = result.doping_per_cell[0][most.index];
  const doped = Number.isFinite(added)
    ? `, which takes ${plain(Math.abs(added), 3)} electrons per cell ${added < 0 ? "fewer" : "more"}`
    : "";
  const kelvin = `At ${plain(result.temperature_K[0])} K ${name}`;
  if (levels.length === 1)
    return `${kelvin} is ${withError(most.value, most.error)} ${unit} at ${plain(most.levelEv, 4)} eV from the reference level.`;
  if (here !== undefined && Math.abs(most.levelEv) < 1e-9)
    return `${kelvin} is ${withError(here.value, here.error)} ${unit} at the reference level, its largest magnitude in the window.`;
  const start = here === undefined ? "" : `is ${withError(here.value, here.error)} ${unit} at the reference level and `;
  return (
    `${kelvin} ${start}reaches ${withError(most.value, most.error)} ${unit}, its largest ` +
    `magnitude in the window, at ${plain(most.levelEv, 4)} eV${doped}.`
  );
}

/** One line for each response and temperature. */
function rowsOf(result: CurvesResult, response: ResponseCurve): string[][] {
  const levels = result.level_eV;
  return result.temperature_K.map((temperatureK, t) => {
    const here = readingAt(levels, response.value[t], response.error[t], 0);
    const most = largestOf(levels, response.value[t], response.error[t]);
    return [
      t === 0 ? cleanLine(response.name) : "",
      t === 0 ? cleanLine(response.unit) : "",
      plain(temperatureK),
      here === undefined ? "outside" : withError(here.value, here.error),
      most === undefined ? "n/a" : withError(most.value, most.error),
      most === undefined ? "" : plain(most.levelEv, 4),
      most === undefined ? "" : plain(result.doping_per_cell[t][most.index], 3),
    ];
  });
}

const columns: Column[] = [
  { heading: "response", align: "left" },
  { heading: "unit", align: "left" },
  { heading: "T (K)", align: "right" },
  { heading: "at 0 eV", align: "right" },
  { heading: "largest", align: "right" },
  { heading: "at (eV)", align: "right" },
  { heading: "doping/cell", align: "right" },
];

/** What a reader must know before using the numbers of the table; empty when there is nothing. */
function cautions(result: CurvesResult): string[] {
  const levels = result.level_eV;
  const edge = new Set<string>();
  const unsure = new Set<string>();
  const barless = new Set<string>();
  for (const { name, value, error } of result.responses)
    for (let t = 0; t < result.temperature_K.length; t++) {
      const most = largestOf(levels, value[t], error[t]);
      const here = readingAt(levels, value[t], error[t], 0);
      if (most && levels.length > 2 && most.value !== 0 && (most.index === 0 || most.index === levels.length - 1))
        edge.add(name);
      if (here && here.value !== 0 && 2 * here.error >= Math.abs(here.value)) unsure.add(name);
      if (error[t].some((bar, e) => Number.isFinite(value[t][e]) && !Number.isFinite(bar))) barless.add(name);
    }
  const named = (names: Set<string>): string => cleanLine([...names].join(", "));
  return [
    ...(edge.size > 0
      ? [`Largest at the edge of the window, and may grow beyond it: ${named(edge)}. A wider --from --to shows.`]
      : []),
    ...(unsure.size > 0
      ? [`Not told apart from zero at the reference level (value within two bars): ${named(unsure)}.`]
      : []),
    ...(barless.size > 0 ? [`No bar could be estimated at some levels (shown as "?"): ${named(barless)}.`] : []),
  ];
}

function charts(result: CurvesResult, width: number): string {
  const rows = result.responses.flatMap((response) =>
    result.temperature_K.map((temperatureK, t) => {
      const finite = response.value[t].filter(Number.isFinite);
      const range =
        finite.length === 0 ? "no numbers" : `${plain(Math.min(...finite), 4)} to ${plain(Math.max(...finite), 4)}`;
      return [
        cleanLine(response.name),
        `${plain(temperatureK)} K`,
        range,
        sparkline(response.value[t], Math.min(48, width - 46)),
      ];
    }),
  );
  return table(rows, [
    { heading: "over the window", align: "left" },
    { heading: "", align: "right" },
    { heading: "lowest to highest", align: "left" },
    {
      heading: `${plain(result.level_eV[0])} eV ... ${plain(result.level_eV[result.level_eV.length - 1])} eV`,
      align: "left",
    },
  ]);
}

/** Only the bars of refined sweeps were calibrated; the others came out up to ten times too narrow in tests. */
const legend = (method: CurvesResult["sampling"]["method"]): string =>
  "257.4(5) means 257.4 with one bar of 0.5: " +
  (method === "refine"
    ? "the true value is expected within two bars about 95 times in 100. "
    : "a spread over contained meshes, not a calibrated error; it can be far too narrow. ") +
  "Positive doping is added electrons.";

/**
 * A sweep in words: what was computed, each response at the reference level and at its largest (by magnitude) with bars, small
 * charts, how the zone was sampled, notes and cautions. Lines of at most `width` characters (unless one name or number is
 * longer), a final line end, no colour, no control characters.
 */
export function curvesText(result: CurvesResult, options: TextOptions = {}): string {
  const width = Math.max(80, options.width ?? 96);
  const rows = result.responses.flatMap((response) => rowsOf(result, response));
  const warned = cautions(result).map((caution) => wrapped(`Caution: ${caution}`, width));
  const notes = result.notes.map((note) => wrapped(`Note: ${cleanLine(note)}`, width));
  const drawn = options.charts === false || result.level_eV.length === 1 ? [] : [charts(result, width)];
  return `${[
    wrapped(opening(result), width),
    wrapped(headline(result), width),
    table(rows, columns),
    wrapped(legend(result.sampling.method), width),
    ...drawn,
    [wrapped(samplingWords(result), width), ...warned, ...notes].join("\n"),
  ].join("\n\n")}\n`;
}
