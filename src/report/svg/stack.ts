// stack.ts: how do panels stand one above another in a picture, each under its heading?
import { cleanLine, escapeXml } from "../clean.js";
import { fittingLines, fontFamily, superscript, textLine, textWidthPx } from "./lettering.js";
import { tone } from "./palette.js";
import { type Frame, type PanelOptions, panelMarkup, type Trace, tickPower, verticalRange } from "./panel.js";
import { edgePx, type Placed, ticksPx } from "./surroundings.js";

/** One panel: heading in words, its name, its unit and its lines. */
export interface Panel {
  words: string;
  name: string;
  unit: string;
  heightPx: number;
  traces: Trace[];
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

/** Heading, frame and lines of one panel over `levels` (or whatever its axis counts); "no numbers" where there are none. */
export function panelAt(
  levels: readonly number[],
  panel: Panel,
  widthPx: number,
  topPx: number,
  id: string,
  options: Omit<PanelOptions, "idPrefix">,
): Placed {
  const heading = headingAt(panel, widthPx, topPx);
  const frame: Frame = {
    x: edgePx + ticksPx,
    y: heading.bottomPx,
    widthPx: widthPx - 2 * edgePx - ticksPx,
    heightPx: panel.heightPx,
  };
  const drawn =
    panelMarkup(levels, panel.traces, frame, { ...options, idPrefix: id }) ??
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

/** What a picture is made of, from top to bottom. */
interface Picture {
  readonly id: string;
  readonly title: string;
  readonly described: string;
  readonly widthPx: number;
  readonly parts: readonly Placed[];
}

/** A self-contained SVG document. All text given is plain text, never markup. */
export function pictureSvg({ id, title, described, widthPx, parts }: Picture): string {
  const heightPx = Math.ceil(parts[parts.length - 1].bottomPx + 14);
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${widthPx}" height="${heightPx}" viewBox="0 0 ${widthPx} ${heightPx}" role="img" aria-labelledby="${id}-title ${id}-text" font-family="${fontFamily}" font-size="11">`,
    `<title id="${id}-title">${escapeXml(title)}</title>`,
    `<desc id="${id}-text">${escapeXml(described)}</desc>`,
    `<rect width="${widthPx}" height="${heightPx}" fill="${tone.paper}"/>`,
    ...parts.map(({ markup }) => markup),
    "</svg>\n",
  ].join("\n");
}
