// converge.ts: what does the picture of a convergence show? Error, and value at one level, against points per direction.
import * as Plot from "@observablehq/plot";
import { parseHTML } from "linkedom";
import type { ConvergeCurve, ConvergeResult } from "../../studies/converge-result.js";
import { cleanLine, escapeXml } from "../clean.js";
import { meshName, percent, shownLevels } from "../converge-text.js";
import { plain } from "../numbers.js";
import { quantityWords } from "./curves.js";
import { fittingLines, textLine, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import { pictureSvg } from "./stack.js";
import { edgePx, type Placed, ticksPx, titleAt } from "./surroundings.js";

export interface ConvergeSvgOptions {
  /** Plain text; default: the grid's title. */
  title?: string;
  /** px, at least 560; default 760. */
  widthPx?: number;
  /** Prefix of all ids; default "converge". */
  idPrefix?: string;
}

const [plainColour, refinedColour] = temperatureColours(2).reverse();
const panelHeightPx = 170;

/** A marked value on one mesh. */
interface Mark {
  /** Points per direction: the root of their number. */
  readonly x: number;
  readonly y: number;
  readonly off: number;
  readonly colour: string;
  /** An estimate, not a difference that was measured. */
  readonly hollow: boolean;
}

const rms = (values: readonly number[]): number =>
  Math.sqrt(values.reduce((sum, value) => sum + value ** 2, 0) / Math.max(1, values.length));

const perDirection = (result: ConvergeResult): number[] =>
  result.meshes.map(({ points, divisions }) => Math.round(1e6 * points ** (1 / divisions.length)) / 1e6);

/** Root mean square over the window of how far each mesh is off, as parts of the largest value. */
function errorMarks(result: ConvergeResult, curve: ConvergeCurve): Mark[] {
  const xs = perDirection(result);
  const mark = (m: number, colour: string, off: readonly number[], bound: readonly number[] | undefined): Mark[] => {
    const own = m === 0 ? (bound ?? []).map((value) => value / 2) : off;
    const y = rms(own) / curve.scale;
    return own.length > 0 && y > 0 && Number.isFinite(y) ? [{ x: xs[m], y, off: 0, colour, hollow: m === 0 }] : [];
  };
  return curve.meshes.flatMap((values, m) => [
    ...mark(m, plainColour, values.plain_off, curve.plain.bound),
    ...mark(m, refinedColour, values.refined_off, curve.refined?.bound),
  ]);
}

/** Values at one level, with how far they are off. */
function valueMarks(result: ConvergeResult, curve: ConvergeCurve, level: number): Mark[] {
  const xs = perDirection(result);
  return curve.meshes.flatMap(({ plain: sum, refined, plain_off: sumOff, refined_off: refinedOff }, m) => {
    const own = m === 0;
    const sums = {
      x: xs[m],
      y: sum[level],
      off: own ? curve.plain.bound[level] / 2 : sumOff[level],
      colour: plainColour,
      hollow: false,
    };
    if (refined.length === 0) return [sums];
    const off = own ? (curve.refined?.bound[level] ?? 0) / 2 : refinedOff[level];
    return [sums, { x: xs[m], y: refined[level], off, colour: refinedColour, hollow: false }];
  });
}

interface Frame {
  readonly x: number;
  readonly y: number;
  readonly widthPx: number;
}

/** A panel over points per direction (logarithmic). */
function drawn(marks: readonly Mark[], ticks: readonly number[], frame: Frame, log: boolean, target: number): string {
  const { document } = parseHTML("<html><body></body></html>");
  const style = { tickSize: 4, tickPadding: 4, label: null, color: tone.faint };
  const xs = [...ticks].sort((a, b) => a - b);
  const svg = Plot.plot({
    document,
    width: frame.widthPx,
    height: panelHeightPx,
    margin: 0,
    x: { type: "log", domain: [xs[0] / 1.15, xs[xs.length - 1] * 1.15], axis: null },
    y: log ? { type: "log", axis: null, domain: logDomain(marks, target) } : { axis: null, nice: true, zero: false },
    marks: [
      Plot.gridX(xs, { stroke: tone.grid, strokeOpacity: 1 }),
      Plot.gridY({ stroke: tone.grid, strokeOpacity: 1, ticks: 4 }),
      ...(log ? [Plot.ruleY([target], { stroke: tone.reference, strokeDasharray: "5 3" })] : []),
      ...[plainColour, refinedColour].flatMap((colour) => {
        const own = marks.filter((each) => each.colour === colour).sort((a, b) => a.x - b.x);
        return [
          Plot.lineY(own, { x: "x", y: "y", stroke: colour, strokeWidth: 1.4 }),
          ...(log
            ? []
            : [
                Plot.ruleX(own, { x: "x", y1: (m: Mark) => m.y - m.off, y2: (m: Mark) => m.y + m.off, stroke: colour }),
              ]),
          Plot.dot(own, {
            x: "x",
            y: "y",
            r: 3.5,
            stroke: colour,
            fill: (m: Mark) => (m.hollow ? tone.paper : colour),
          }),
        ];
      }),
      Plot.axisY({ ...style, ticks: 4, tickFormat: log ? (value: number) => percent(value) : undefined }),
      Plot.axisX(xs, { ...style, tickFormat: (value: number) => plain(value, 3) }),
    ],
  });
  const inner = String(svg.innerHTML)
    .replace(/<style>[\s\S]*?<\/style>/g, "")
    .replace(/-?\d+\.\d{3,}/g, (number) => String(Number(Number(number).toFixed(2))));
  return `<g transform="translate(${frame.x},${frame.y})" font-size="11" text-anchor="middle">${inner}</g>`;
}

function logDomain(marks: readonly Mark[], target: number): [number, number] {
  const sizes = [target, ...marks.map(({ y }) => y)];
  return [Math.min(...sizes) / 2, Math.max(...sizes) * 2];
}

/** Two panels side by side for one response and temperature. */
function rowAt(
  result: ConvergeResult,
  name: string,
  unit: string,
  curve: ConvergeCurve,
  widthPx: number,
  topPx: number,
): Placed {
  const heading = `${quantityWords(name)}  ${cleanLine(name)}, ${plain(curve.temperature_K)} K`;
  const ink = { sizePx: 13, colour: tone.ink, bold: true as const };
  const small = { sizePx: 11, colour: tone.faint };
  const half = (widthPx - 2 * edgePx - 2 * ticksPx - 16) / 2;
  const left = { x: edgePx + ticksPx, y: topPx + 44, widthPx: half };
  const right = { ...left, x: left.x + half + 16 + ticksPx };
  if (curve.vanishes) return { markup: textLine(`${heading}: zero`, edgePx, topPx + 13, ink), bottomPx: topPx + 24 };
  const level = shownLevels(result, curve).slice(-1)[0];
  const xs = perDirection(result);
  const parts = [
    textLine(heading, edgePx, topPx + 13, ink),
    textLine("error over the window (rms), parts of the largest value", left.x, topPx + 34, small),
    textLine(`value at ${plain(result.level_eV[level], 4)} eV, in ${unitInPicture(unit)}`, right.x, topPx + 34, small),
    drawn(errorMarks(result, curve), xs, left, true, result.target),
    drawn(valueMarks(result, curve, level), xs, right, false, result.target),
  ];
  return {
    markup: `<g class="panel" role="group" aria-label="${escapeXml(heading)}">${parts.join("")}</g>`,
    bottomPx: left.y + panelHeightPx + 22,
  };
}

/** Colours and marks. */
function legendAt(result: ConvergeResult, topPx: number): Placed {
  const refines = result.sampling.method === "refine";
  const swatch = (colour: string, label: string, x: number): string =>
    `<circle cx="${x}" cy="${topPx + 12}" r="3.5" fill="${colour}"/>${textLine(label, x + 10, topPx + 16, { sizePx: 12, colour: tone.ink })}`;
  const markup = [
    swatch(plainColour, "plain sum", edgePx + 4),
    ...(refines ? [swatch(refinedColour, "refined", edgePx + 110)] : []),
    textLine(
      `hollow: one bar of the densest mesh; dashed: ${percent(result.target)}`,
      edgePx + (refines ? 200 : 110),
      topPx + 16,
      { sizePx: 12, colour: tone.faint },
    ),
  ];
  return { markup: markup.join(""), bottomPx: topPx + 24 };
}

function footerAt(result: ConvergeResult, widthPx: number, topPx: number): Placed {
  const texts = [
    "points per direction; intrinsic only, rigid band — screening numbers",
    `densest mesh ${meshName(result.meshes[0].divisions)}; differences are to its ${result.sampling.method === "refine" ? "refined value" : "plain sum"}; tidegauge ${cleanLine(result.version)}`,
  ];
  const lines = texts.flatMap((text) => fittingLines(text, widthPx - 2 * edgePx, 11));
  const markup = lines.map((line, at) =>
    textLine(line, edgePx, topPx + 11 + 15 * at, { sizePx: 11, colour: tone.faint }),
  );
  return { markup: markup.join(""), bottomPx: topPx + 15 * lines.length };
}

/**
 * A convergence as one self-contained SVG document: for each response and temperature the error over the window, and the value at the least sure
 * level, against points per direction. Equal input gives equal bytes.
 */
export function convergeSvg(result: ConvergeResult, options: ConvergeSvgOptions = {}): string {
  const widthPx = Math.max(560, Math.round(options.widthPx ?? 760));
  const id = (options.idPrefix ?? "converge").replace(/[^\w-]/g, "");
  const title = cleanLine(options.title ?? result.grids[0].title) || "Convergence";
  const parts = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  parts.push(legendAt(result, bottomPx() + 2));
  for (const { name, unit, curves } of result.responses)
    for (const curve of curves) parts.push(rowAt(result, name, unit, curve, widthPx, bottomPx() + 14));
  parts.push(footerAt(result, widthPx, bottomPx() + 8));
  const described = `Error and value against points per direction: ${result.responses.map(({ name }) => name).join(", ")}.`;
  return pictureSvg({ id, title, described, widthPx, parts });
}
