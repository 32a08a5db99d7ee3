// request.ts: what does the picture of a request show? How much of the models' error is left, against the k points computed.
import * as Plot from "@observablehq/plot";
import { parseHTML } from "linkedom";
import type { RequestResult } from "../../studies/request-result.js";
import { cleanLine } from "../clean.js";
import { grouped, plain, withError } from "../numbers.js";
import { fittingLines, textLine } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import { pictureSvg } from "./stack.js";
import { edgePx, type Placed, ticksPx, titleAt } from "./surroundings.js";

export interface RequestSvgOptions {
  /** Plain text; default: the grid's title. */
  title?: string;
  /** px, at least 560; default 760. */
  widthPx?: number;
  /** Prefix of all ids; default "request". */
  idPrefix?: string;
}

const panelHeightPx = 220;
const [curveColour] = temperatureColours(1);

/** What is left after each cell, from nothing computed on. */
function leftAfter({ cells, divide }: RequestResult): { points: number; left: number }[] {
  const perCell = divide[0] * divide[1] * divide[2];
  return [{ points: 0, left: 1 }, ...cells.map(({ left }, i) => ({ points: (i + 1) * perCell, left }))];
}

function panelAt(result: RequestResult, widthPx: number, topPx: number): Placed {
  const { document } = parseHTML("<html><body></body></html>");
  const style = { tickSize: 4, tickPadding: 4, label: null, color: tone.faint };
  const rows = leftAfter(result);
  const percent = (part: number): string => `${plain(100 * part, 3)}%`;
  const svg = Plot.plot({
    document,
    width: widthPx - 2 * edgePx - ticksPx,
    height: panelHeightPx,
    margin: 0,
    x: { axis: null, domain: [0, rows[rows.length - 1].points] },
    y: { axis: null, domain: [0, 1] },
    marks: [
      Plot.gridX({ stroke: tone.grid, strokeOpacity: 1, ticks: 6 }),
      Plot.gridY({ stroke: tone.grid, strokeOpacity: 1, ticks: 5 }),
      Plot.lineY(rows, { x: "points", y: "left", stroke: curveColour, strokeWidth: 1.8 }),
      Plot.axisY({ ...style, ticks: 5, tickFormat: percent }),
      Plot.axisX({ ...style, ticks: 6, tickFormat: (value: number) => grouped(value) }),
    ],
  });
  const inner = String(svg.innerHTML)
    .replace(/<style>[\s\S]*?<\/style>/g, "")
    .replace(/-?\d+\.\d{3,}/g, (number) => String(Number(Number(number).toFixed(2))));
  const small = { sizePx: 11, colour: tone.faint };
  const markup = [
    textLine("Error of the local models that is left", edgePx, topPx + 13, {
      sizePx: 13,
      colour: tone.ink,
      bold: true,
    }),
    `<g transform="translate(${edgePx + ticksPx},${topPx + 28})" font-size="11" text-anchor="middle">${inner}</g>`,
    textLine("k points computed, best cells first", edgePx + ticksPx, topPx + panelHeightPx + 60, small),
  ];
  return { markup: markup.join(""), bottomPx: topPx + panelHeightPx + 70 };
}

function linesAt(texts: readonly string[], widthPx: number, topPx: number, colour: string, sizePx: number): Placed {
  const lines = texts.flatMap((text) => fittingLines(cleanLine(text), widthPx - 2 * edgePx, sizePx));
  const step = sizePx + 5;
  const markup = lines.map((line, at) => textLine(line, edgePx, topPx + sizePx + step * at, { sizePx, colour }));
  return { markup: markup.join(""), bottomPx: topPx + step * lines.length };
}

/** A request as one self-contained SVG document. Equal input gives equal bytes. */
export function requestSvg(result: RequestResult, options: RequestSvgOptions = {}): string {
  const widthPx = Math.max(560, Math.round(options.widthPx ?? 760));
  const id = (options.idPrefix ?? "request").replace(/[^\w-]/g, "");
  const title = cleanLine(options.title ?? result.grid.title) || "Request";
  const expected = result.expected.map(
    ({ name, unit, level_eV, temperature_K, value, error_now, error_expected }) =>
      `${name} at ${plain(level_eV, 4)} eV, ${plain(temperature_K)} K: ${withError(value, error_now)} ${unit}; bar ${plain(error_now, 2)}, expected ${plain(error_expected, 2)}`,
  );
  const parts = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  parts.push(linesAt(expected, widthPx, bottomPx() + 2, tone.ink, 12));
  parts.push(panelAt(result, widthPx, bottomPx() + 12));
  const { divisions, periodic, points } = result.grid;
  const mesh = divisions.slice(0, periodic).join(" x ");
  const footer = [
    `${grouped(result.cells.length)} of ${grouped(points)} cells of a ${mesh} mesh; intrinsic only, rigid band — screening numbers; tidegauge ${result.version}`,
  ];
  parts.push(linesAt(footer, widthPx, bottomPx() + 4, tone.faint, 11));
  return pictureSvg({
    id,
    title,
    described: "Error of the local models left, against k points computed.",
    widthPx,
    parts,
  });
}
