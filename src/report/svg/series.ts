// series.ts: what does the picture of a series show: responses against the tag, at fixed doping and at the highest peak?
import type { SeriesPoint, SeriesResponse, SeriesResult } from "../../studies/series-result.js";
import { cleanLine } from "../clean.js";
import { plain } from "../numbers.js";
import { seriesDopingWords } from "../series-text.js";
import { quantityWords } from "./curves.js";
import { fittingLines, textLine, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import type { Dot, Trace } from "./panel.js";
import { panelAt, pictureSvg } from "./stack.js";
import { edgePx, legendOf, type Placed, ticksPx, titleAt } from "./surroundings.js";

/** Fixed dopings drawn of each response. */
const dopingsDrawn = 3;

/** One panel: its name and, for each temperature, a point a member. */
interface Course {
  readonly name: string;
  readonly points: readonly (readonly (SeriesPoint | null)[])[];
}

/** At fixed dopings, and at the highest peak of each temperature. */
function coursesOf(result: SeriesResult, response: SeriesResponse): Course[] {
  const { name, at_dopings, peaks } = response;
  const fixed = result.dopings.slice(0, dopingsDrawn).map((_, at) => {
    const first = at * result.temperature_K.length;
    const curves = at_dopings.slice(first, first + result.temperature_K.length);
    return {
      name: `${name} at ${seriesDopingWords(result.dopings[at], result)}`,
      points: curves.map(({ points }) => points),
    };
  });
  const highest = result.temperature_K.map(
    (kelvin) => peaks.find(({ temperature_K }) => temperature_K === kelvin)?.points ?? [],
  );
  return highest.some((points) => points.length > 0)
    ? [...fixed, { name: `${name} at its highest peak`, points: highest }]
    : fixed;
}

/** Equal tick labels of the members; too many are thinned. */
function tagTicks(result: SeriesResult): { at: number; label: string }[] {
  const every = Math.ceil(result.members.length / 10);
  return result.members.filter((_, i) => i % every === 0).map(({ tag }) => ({ at: tag, label: plain(tag, 4) }));
}

function coursePanel(result: SeriesResult, course: Course, response: SeriesResponse, colours: readonly string[]) {
  const numbers = (points: readonly (SeriesPoint | null)[], of: (point: SeriesPoint) => number | null): number[] =>
    result.members.map((_, at) => {
      const point = points[at];
      return point ? (of(point) ?? Number.NaN) : Number.NaN;
    });
  const traces = course.points.map(
    (points, t): Trace => ({
      colour: colours[t],
      value: numbers(points, ({ value }) => value),
      error: numbers(points, ({ error }) => error),
    }),
  );
  const dots = course.points.flatMap((points, t) =>
    points.flatMap((point): Dot[] => {
      if (point === null || point.value === null) return [];
      const hollow = "resolved" in point && point.resolved === false;
      const bar = point.error === null ? {} : { error: point.error };
      return [{ x: point.tag, value: point.value, colour: colours[t], hollow, ...bar }];
    }),
  );
  const panel = {
    words: quantityWords(response.name),
    name: course.name,
    unit: unitInPicture(response.unit),
    heightPx: 150,
    traces,
  };
  return { panel, dots };
}

/** The tag below the last panel, then scope and notes. */
function surroundings(result: SeriesResult, widthPx: number, topPx: number): Placed {
  const middle = (edgePx + ticksPx + widthPx - edgePx) / 2;
  const name = textLine(cleanLine(result.tag), middle, topPx + 38, { sizePx: 12, colour: tone.ink, anchor: "middle" });
  const texts = [
    "intrinsic only, rigid band — screening numbers",
    `first grid: ${cleanLine(result.members[0].title)}; tidegauge ${cleanLine(result.version)}`,
    ...result.notes.slice(1),
  ];
  const lines = texts.flatMap((text) => fittingLines(text, widthPx - 2 * edgePx, 11));
  const footer = lines.map((line, at) =>
    textLine(line, edgePx, topPx + 71 + 15 * at, { sizePx: 11, colour: tone.faint }),
  );
  return { markup: `${name}<g class="footer">${footer.join("")}</g>`, bottomPx: topPx + 60 + 15 * lines.length };
}

/**
 * A series as one self-contained SVG document: for each response panels at the fixed dopings and at the highest peak against the tag, a
 * dot with its bar a grid (hollow: unresolved), temperatures as colours. Equal input gives equal bytes.
 */
export function seriesSvg(result: SeriesResult, options: { widthPx?: number } = {}): string {
  const widthPx = Math.max(480, Math.round(options.widthPx ?? 760));
  const title = `${result.members.length} grids along ${cleanLine(result.tag)}`;
  const colours = temperatureColours(result.temperature_K.length);
  const parts = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  parts.push(legendOf(result.temperature_K, colours, [], widthPx, bottomPx() + 4));
  const tags = result.members.map(({ tag }) => tag);
  const panels = result.responses.flatMap((response) =>
    coursesOf(result, response).map((course) => coursePanel(result, course, response, colours)),
  );
  for (const [at, { panel, dots }] of panels.entries()) {
    const more = { levelTicks: at === panels.length - 1, ticks: tagTicks(result), dots };
    parts.push(panelAt(tags, panel, widthPx, bottomPx() + 14, `series-${at + 1}`, more));
  }
  parts.push(surroundings(result, widthPx, bottomPx()));
  const described = `${result.responses.map(({ name }) => name).join("; ")} against ${cleanLine(result.tag)}.`;
  return pictureSvg({ id: "series", title, described, widthPx, parts });
}
