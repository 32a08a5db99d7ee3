// curves.ts: what does the picture of a sweep show, and where does everything stand on it?
import type { CurvesResult } from "../../curves/result.js";
import { cleanLine, escapeXml } from "../clean.js";
import { grouped, plain } from "../numbers.js";
import { fittingLines, fontFamily, superscript, textLine, textWidthPx, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import { type Frame, panelMarkup, type Trace, tickPower, verticalRange } from "./panel.js";

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

/** Markup and where the next element may begin. */
interface Placed {
  markup: string;
  bottomPx: number;
}

const edgePx = 24;
const ticksPx = 58;

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

function titleAt(text: string, widthPx: number, topPx: number): Placed {
  const lines = fittingLines(text, widthPx - 2 * edgePx, 17);
  const markup = lines.map((line, at) =>
    textLine(line, edgePx, topPx + 17 + 22 * at, { sizePx: 17, colour: tone.ink, bold: true }),
  );
  return { markup: markup.join("\n"), bottomPx: topPx + 22 * lines.length };
}

/** Swatch and label of each temperature, band and plain sum, flowing into as many rows as they need. */
function legendAt(result: CurvesResult, colours: readonly string[], widthPx: number, topPx: number): Placed {
  const line = (colour: string, more: string): string =>
    `<line x1="0" x2="22" y1="-4" y2="-4" stroke="${colour}" ${more}/>`;
  const banded = result.responses.some(({ error }) => error.some((row) => row.some((bar) => bar > 0)));
  const items = [
    ...result.temperature_K.map((temperatureK, t) => ({
      label: `${plain(temperatureK)} K`,
      swatch: line(colours[t], 'stroke-width="2.4"'),
    })),
    ...(banded
      ? [
          {
            label: "value ± one bar",
            swatch: `<rect x="0" y="-10" width="22" height="11" fill="${tone.faint}" fill-opacity="0.25"/>`,
          },
        ]
      : []),
    ...(result.sampling.method !== "points"
      ? [{ label: "plain mesh sum", swatch: line(tone.faint, 'stroke-width="1.2" stroke-dasharray="1.5 2"') }]
      : []),
  ];
  let [x, y] = [edgePx, topPx + 16];
  const markup = items.map(({ label, swatch }) => {
    const spacePx = 28 + textWidthPx(label, 12) + 16;
    if (x > edgePx && x + spacePx > widthPx - edgePx) [x, y] = [edgePx, y + 19];
    const placed = `<g transform="translate(${x},${y})">${swatch}${textLine(label, 28, 0, { sizePx: 12, colour: tone.ink })}</g>`;
    x = Math.round(x + spacePx);
    return placed;
  });
  return { markup: `<g class="legend">${markup.join("")}</g>`, bottomPx: y + 8 };
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
      bottomPx: topPx + 20,
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
  return { markup: markup.join(""), bottomPx: topPx + 4 + 16 * lines.length };
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

/** Below the last panel: the mark of the reference level under its rule, and the name of the axis. */
function levelAxisAt(levels: readonly number[], widthPx: number, topPx: number): Placed {
  const [left, right] = [edgePx + ticksPx, widthPx - edgePx];
  const [first, last] = [levels[0], levels[levels.length - 1]];
  const share = last > first ? -first / (last - first) : first === 0 ? 0.5 : -1;
  const x = Math.round(left + share * (right - left));
  const mark = textLine("Fermi level", Math.min(Math.max(x, left + 20), right - 30), topPx + 34, {
    sizePx: 11,
    colour: tone.faint,
    anchor: "middle",
  });
  const inside = share >= 0 && share <= 1;
  const name = textLine(
    "Level relative to the reference (Fermi) level, in eV",
    (left + right) / 2,
    topPx + (inside ? 54 : 40),
    {
      sizePx: 12,
      colour: tone.ink,
      anchor: "middle",
    },
  );
  return { markup: `<g class="level-axis">${inside ? mark : ""}${name}</g>`, bottomPx: topPx + (inside ? 60 : 46) };
}

/** The statement of scope, the sampling, and the notes beyond the first. */
function footerAt(result: CurvesResult, widthPx: number, topPx: number): Placed {
  const { grid, sampling } = result;
  const mesh = grid.divisions.slice(0, grid.periodic).join(" × ");
  const texts = [
    "intrinsic only, rigid band — screening numbers",
    `mesh ${mesh}, ${grid.bands} bands; method ${sampling.method}, ${grouped(sampling.samples)} samples; reference level ${plain(result.reference_eV)} eV; tidegauge ${cleanLine(result.version)}`,
    ...result.notes.filter((note) => !/^intrinsic only, rigid band\.?$/.test(note)),
  ];
  const lines = texts.flatMap((text) => fittingLines(text, widthPx - 2 * edgePx, 11));
  const markup = lines.map((line, at) =>
    textLine(line, edgePx, topPx + 11 + 15 * at, { sizePx: 11, colour: tone.faint }),
  );
  return { markup: `<g class="footer">${markup.join("")}</g>`, bottomPx: topPx + 15 * lines.length };
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
