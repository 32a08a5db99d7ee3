// curves.ts: what does the picture of a sweep show, and where does everything stand on it?
import type { CurvesResult } from "../../curves/result.js";
import { cleanLine, escapeXml } from "../clean.js";
import { fittingLines, fontFamily, superscript, textLine, textWidthPx, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import { type Frame, panelMarkup, type Trace, tickPower, verticalRange } from "./panel.js";
import { edgePx, footerAt, legendAt, levelAxisAt, type Placed, ticksPx, titleAt } from "./surroundings.js";

export interface CurvesSvgOptions {
  /** Plain text; default: the grid's title. */
  title?: string;
  /** px, at least 480; default 760. The height follows from the content. */
  widthPx?: number;
  /** Prefix of all ids, to be set when several pictures stand in one page; default "curves". */
  idPrefix?: string;
}

/** One panel: heading in words, its name, its unit and its lines. */
interface Panel {
  words: string;
  name: string;
  unit: string;
  heightPx: number;
  traces: Trace[];
}

const quantities: Record<string, string> = {
  charge: "Anomalous Hall conductivity",
  spin: "Spin Hall conductivity",
  orbital: "Orbital Hall conductivity",
};

/** "spin:xy:z" -> "Spin Hall conductivity"; another moment is named by its own name. */
export function quantityWords(response: string): string {
  const moment = cleanLine(response).split(":")[0];
  return Object.hasOwn(quantities, moment) ? quantities[moment] : `Hall conductivity of ${moment}`;
}

function panelsOf(result: CurvesResult, colours: readonly string[]): Panel[] {
  const heightPx = result.responses.length > 4 ? 120 : 170;
  const plainSum = result.sampling.method !== "points";
  const responses = result.responses.map(({ name, unit, value, error, points }) => ({
    words: quantityWords(name),
    name,
    unit: unitInPicture(unit),
    heightPx,
    traces: colours.map((colour, t) => ({
      colour,
      value: value[t],
      error: error[t],
      ...(plainSum ? { points: points[t] } : {}),
    })),
  }));
  const states = colours.map((colour, t) => ({ colour, value: result.states_per_eV[t] }));
  return [
    ...responses,
    { words: "Density of states", name: "", unit: "states/eV per cell", heightPx: 90, traces: states },
  ];
}

/** What stands above a panel: the quantity in bold, then response and unit, on one line where they fit. */
function headingAt(panel: Panel, widthPx: number, topPx: number): Placed {
  const range = verticalRange(panel.traces);
  const power = range === undefined ? 0 : tickPower(range);
  const unit = power === 0 ? panel.unit : `10${superscript(power)} ${panel.unit}`;
  const rest = `${panel.name === "" ? "" : `${cleanLine(panel.name)}, `}in ${unit}`;
  const roomPx = widthPx - 2 * edgePx;
  if (textWidthPx(`${panel.words}   ${rest}`, 13) <= roomPx)
    return {
      markup: `<text x="${edgePx}" y="${topPx + 13}" font-size="13" fill="${tone.ink}"><tspan font-weight="600">${escapeXml(panel.words)}</tspan><tspan dx="8" font-size="12" fill="${tone.faint}">${escapeXml(rest)}</tspan></text>`,
      bottomPx: topPx + 24,
    };
  const lines = [
    ...fittingLines(panel.words, roomPx, 13).map((text) => ({ text, bold: true })),
    ...fittingLines(rest, roomPx, 12).map((text) => ({ text, bold: false })),
  ];
  const markup = lines.map(({ text, bold }, at) =>
    textLine(
      text,
      edgePx,
      topPx + 13 + 16 * at,
      bold ? { sizePx: 13, colour: tone.ink, bold } : { sizePx: 12, colour: tone.faint },
    ),
  );
  return { markup: markup.join(""), bottomPx: topPx + 8 + 16 * lines.length };
}

function panelAt(
  levels: readonly number[],
  panel: Panel,
  widthPx: number,
  topPx: number,
  id: string,
  last: boolean,
): Placed {
  const heading = headingAt(panel, widthPx, topPx);
  const frame: Frame = {
    x: edgePx + ticksPx,
    y: heading.bottomPx,
    widthPx: widthPx - 2 * edgePx - ticksPx,
    heightPx: panel.heightPx,
  };
  const drawn =
    panelMarkup(levels, panel.traces, frame, { levelTicks: last, idPrefix: id }) ??
    textLine("no numbers", frame.x + frame.widthPx / 2, frame.y + frame.heightPx / 2, {
      sizePx: 12,
      colour: tone.faint,
      anchor: "middle",
    });
  const label = [panel.words, panel.name].filter((part) => part !== "").join(", ");
  return {
    markup: `<g class="panel" role="group" aria-label="${escapeXml(label)}">${heading.markup}${drawn}</g>`,
    bottomPx: frame.y + frame.heightPx,
  };
}

/**
 * A sweep as one self-contained SVG document: a panel per response (value, band of one bar, plain mesh sum dotted) and the
 * density of states, stacked over one level axis; temperatures as colours. All outside text is plain text, never markup.
 * Equal input gives equal bytes. Needs no web font, script or style sheet.
 */
export function curvesSvg(result: CurvesResult, options: CurvesSvgOptions = {}): string {
  const widthPx = Math.max(480, Math.round(options.widthPx ?? 760));
  const id = (options.idPrefix ?? "curves").replace(/[^\w-]/g, "");
  const title = cleanLine(options.title ?? result.grid.title) || "Sweep";
  const colours = temperatureColours(result.temperature_K.length);
  const parts = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  parts.push(legendAt(result, colours, widthPx, bottomPx() + 4));
  const panels = panelsOf(result, colours);
  for (const [at, panel] of panels.entries())
    parts.push(panelAt(result.level_eV, panel, widthPx, bottomPx() + 14, `${id}-${at + 1}`, at === panels.length - 1));
  parts.push(levelAxisAt(result.level_eV, widthPx, bottomPx()));
  parts.push(footerAt(result, widthPx, bottomPx() + 14));
  const heightPx = Math.ceil(bottomPx() + 14);
  const described = panels.map(({ words, name }) => (name === "" ? words : `${words} ${name}`)).join("; ");
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${widthPx}" height="${heightPx}" viewBox="0 0 ${widthPx} ${heightPx}" role="img" aria-labelledby="${id}-title ${id}-text" font-family="${fontFamily}" font-size="11">`,
    `<title id="${id}-title">${escapeXml(title)}</title>`,
    `<desc id="${id}-text">${escapeXml(`${described} against the level.`)}</desc>`,
    `<rect width="${widthPx}" height="${heightPx}" fill="${tone.paper}"/>`,
    ...parts.map(({ markup }) => markup),
    "</svg>\n",
  ].join("\n");
}
