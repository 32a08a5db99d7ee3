// series-text.ts: what does `series` say in words and tables, on a terminal?
import type { SeriesPeak, SeriesPoint, SeriesResponse, SeriesResult } from "../studies/series-result.js";
import { cleanLine } from "./clean.js";
import { densityWords, signed } from "./doping-words.js";
import { plain, withError } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

/** Tracks shown of each response and temperature; the result holds all. */
const tracksShown = 3;
const roomK = 300;

const right = (heading: string): Column => ({ heading, align: "right" });
const left = (heading: string): Column => ({ heading, align: "left" });

const told = ({ value, error }: SeriesPoint): string =>
  value === null ? "outside" : withError(value, error ?? Number.NaN);

const levelWords = (levelEv: number | null): string =>
  levelEv === null ? "outside" : `${levelEv > 0 ? "+" : ""}${levelEv.toFixed(4)}`;

/** "no doping", "a doping of -0.1 per cell". */
export function seriesDopingWords(doping: number, result: SeriesResult): string {
  if (doping === 0) return "no doping";
  const unit = result.doping_unit === "per_cell" ? "per cell" : densityWords(result.doping_unit);
  return `${signed(doping, 3)} ${unit}`;
}

/** Whether two values differ by more than their bars leave room for. */
function changeWords(first: SeriesPoint, last: SeriesPoint, unit: string): string {
  const change = (last.value as number) - (first.value as number);
  const bar = Math.hypot(first.error as number, last.error as number);
  const sure = Math.abs(change) > 2 * bar ? "a change" : "no change beyond two bars";
  return `from ${told(first)} to ${told(last)} ${unit}, ${sure} (${withError(change, bar)})`;
}

/** The answer for one response at fixed doping. */
function fixedWords(result: SeriesResult, response: SeriesResponse): string {
  const temperatureK = result.temperature_K.includes(roomK) ? roomK : result.temperature_K[0];
  const curve = response.at_dopings.find(({ temperature_K }) => temperature_K === temperatureK);
  const name = cleanLine(response.name);
  const points = curve?.points.filter(({ value }) => value !== null) ?? [];
  if (curve === undefined || points.length < 2) return `${name} cannot be told at one doping in all grids.`;
  const [first, last] = [points[0], points[points.length - 1]];
  const most = points.reduce((best, each) =>
    Math.abs(each.value as number) > Math.abs(best.value as number) ? each : best,
  );
  const inner = most === first || most === last ? "" : `; it is largest at ${plain(most.tag)}, ${told(most)}`;
  return (
    `At ${plain(temperatureK)} K and ${seriesDopingWords(curve.doping, result)}, ${name} goes ${changeWords(first, last, cleanLine(response.unit))} ` +
    `as ${cleanLine(result.tag)} goes from ${plain(first.tag)} to ${plain(last.tag)}${inner}.`
  );
}

/** The answer for the highest peak that can be followed. */
function peakWords(result: SeriesResult, response: SeriesResponse): string {
  const temperatureK = result.temperature_K.includes(roomK) ? roomK : result.temperature_K[0];
  const tracks = response.peaks.filter(({ temperature_K }) => temperature_K === temperatureK);
  const name = cleanLine(response.name);
  if (tracks.length === 0) return `${name} has no peak inside the window in any of the grids.`;
  const present = tracks[0].points.filter((point) => point !== null);
  const [first, last] = [present[0], present[present.length - 1]];
  const place = (peak: SeriesPeak): string =>
    `${levelWords(peak.level_eV)} eV (${signed(peak.doping_per_cell, 3)} electrons per cell)`;
  if (present.length === 1)
    return `Its highest peak, ${told(first)} at ${place(first)}, is there at ${plain(first.tag)} only.`;
  const lost =
    present.length < result.members.length ? `, present in ${present.length} of ${result.members.length} grids,` : "";
  const doubtful = present.filter(({ resolved }) => !resolved).length;
  const unsure = doubtful === 0 ? "" : ` It is unresolved in ${doubtful} of ${present.length} grids.`;
  return (
    `Its highest peak${lost} goes ${changeWords(first, last, cleanLine(response.unit))}, and moves from ${place(first)} to ` +
    `${place(last)}, each from its grid's own neutral crystal.${unsure}`
  );
}

function fixedTable(result: SeriesResult): string {
  const density = result.doping_unit === "per_cell" ? "electrons/cell" : densityWords(result.doping_unit);
  const columns = [
    right(cleanLine(result.tag)),
    right(density),
    right("T (K)"),
    right("level (eV)"),
    ...result.responses.map(({ name }) => right(cleanLine(name))),
  ];
  const curves = result.responses[0]?.at_dopings ?? [];
  const rows = curves.flatMap(({ doping, temperature_K, points }, at) =>
    points.map(({ tag, level_eV }, member) => [
      plain(tag),
      signed(doping, 3),
      plain(temperature_K),
      levelWords(level_eV),
      ...result.responses.map(({ at_dopings }) => told(at_dopings[at].points[member])),
    ]),
  );
  return rows.length === 0 ? "" : table(rows, columns);
}

function peakTable(result: SeriesResult): string {
  const columns = [
    left("peak of"),
    right("T (K)"),
    right(cleanLine(result.tag)),
    right("height"),
    right("level (eV)"),
    right("width (eV)"),
    right("electrons/cell"),
    right(densityWords(result.density_unit)),
    left(""),
  ];
  const rows = result.responses.flatMap((response) =>
    result.temperature_K.flatMap((kelvin) =>
      response.peaks
        .filter(({ temperature_K }) => temperature_K === kelvin)
        .slice(0, tracksShown)
        .flatMap(({ points }, track) =>
          points.map((point, at) => peakRow(result, response.name, kelvin, track, at, point)),
        ),
    ),
  );
  return rows.length === 0 ? "" : table(rows, columns);
}

function peakRow(
  result: SeriesResult,
  name: string,
  kelvin: number,
  track: number,
  member: number,
  point: SeriesPeak | null,
): string[] {
  const head = [member === 0 ? `${cleanLine(name)}, ${track + 1}` : "", member === 0 ? plain(kelvin) : ""];
  const tag = plain(result.members[member].tag);
  if (point === null) return [...head, tag, "none"];
  return [
    ...head,
    tag,
    told(point),
    levelWords(point.level_eV),
    plain(point.width_eV, 2),
    signed(point.doping_per_cell, 3),
    signed(point.doping_density, 3),
    point.resolved ? "" : "unresolved",
  ];
}

const legend =
  "257.4(5) means 257.4 with one bar of 0.5. Dopings count added electrons; the level follows temperature and grid so that the doping stays. " +
  "Peaks are followed to the nearest doping of the next grid.";

/** The whole result as text of lines of about `width` columns, with a final line end. */
export function seriesText(result: SeriesResult, options: { width?: number } = {}): string {
  const width = Math.max(80, options.width ?? 96);
  const lines = (texts: readonly string[]): string => texts.map((text) => wrapped(text, width)).join("\n");
  const { members } = result;
  const opening =
    `${members.length} grids ordered by ${cleanLine(result.tag)}: ` +
    `${members.map(({ grid, tag }) => `${plain(tag)} (${cleanLine(grid)})`).join(", ")}.`;
  const hidden = result.responses.reduce(
    (sum, { peaks }) =>
      sum +
      result.temperature_K.reduce((part, kelvin) => {
        const count = peaks.filter(({ temperature_K }) => temperature_K === kelvin).length;
        return part + Math.max(0, count - tracksShown);
      }, 0),
    0,
  );
  const parts = [
    lines([opening]),
    ...result.responses.map((response) => lines([`${fixedWords(result, response)} ${peakWords(result, response)}`])),
    fixedTable(result),
    peakTable(result),
    lines([...(hidden > 0 ? [`${hidden} lower peaks are in the result (--json).`] : []), legend]),
    lines(result.notes.map((note) => `Note: ${cleanLine(note)}`)),
  ];
  return `${parts.filter((part) => part !== "").join("\n\n")}\n`;
}
