// panel.ts: how is one quantity drawn against the level?
import * as Plot from "@observablehq/plot";
import { parseHTML } from "linkedom";
import { tone } from "./palette.js";
import { type Trace, tickPower, verticalRange } from "./range.js";

export { type Trace, tickPower, verticalRange } from "./range.js";

/** The frame of a panel, px; the axes' tick labels lie outside it, to the left and below. */
export interface Frame {
  x: number;
  y: number;
  widthPx: number;
  heightPx: number;
}

/** Leaves a gap where a number is not finite. */
const orGap = (value: number): number => (Number.isFinite(value) ? value : Number.NaN);

/** The marks of one trace: band, plain sum, line; missing numbers leave gaps. */
function marksOf(levels: readonly number[], { colour, value, error, points }: Trace, scale: number): Plot.Markish[] {
  const x = [...levels];
  const band = (sign: number): number[] =>
    value.map((middle, e) => orGap((middle + sign * (error?.[e] ?? Number.NaN)) * scale));
  const indices = x.map((_, e) => e);
  return [
    ...(error
      ? [Plot.areaY(indices, { x, y1: band(-1), y2: band(1), fill: colour, fillOpacity: 0.18, clip: true })]
      : []),
    ...(points
      ? [
          Plot.lineY(indices, {
            x,
            y: points.map((sum) => sum * scale),
            stroke: colour,
            strokeWidth: 0.8,
            strokeOpacity: 0.6,
            strokeDasharray: "1.5 2",
            clip: true,
          }),
        ]
      : []),
    Plot.lineY(indices, {
      x,
      y: value.map((middle) => middle * scale),
      stroke: colour,
      strokeWidth: 1.6,
      strokeLinejoin: "round",
      clip: true,
    }),
  ];
}

/** Plot counts its clip paths over the life of the process; here they count within one panel, so that equal input gives equal bytes. */
function renamedClips(markup: string, prefix: string): string {
  const names = [...new Set(markup.match(/plot-clip-\d+/g) ?? [])];
  return names.reduce(
    (text, name, at) => text.replace(new RegExp(`${name}(?!\\d)`, "g"), `${prefix}-clip-${at + 1}`),
    markup,
  );
}

/** Coordinates to a hundredth of a pixel. */
function compactPaths(markup: string): string {
  return markup.replace(/ d="[^"]*"/g, (path) =>
    path.replace(/-?\d+\.\d{3,}/g, (number) => String(Number(Number(number).toFixed(2)))),
  );
}

export interface PanelOptions {
  /** Tick labels below; only the last panel of a stack has them. */
  levelTicks: boolean;
  /** Prefix of the ids in the markup, unique within the page. */
  idPrefix: string;
  /** Ticks of an axis that does not count eV, as places and labels; left out: levels, with a rule at 0. */
  ticks?: readonly { readonly at: number; readonly label: string }[];
  /** Marked places, e.g. peaks. */
  dots?: readonly Dot[];
}

/** A marked place; hollow where it is not to be relied on. */
export interface Dot {
  x: number;
  value: number;
  error?: number;
  colour: string;
  hollow: boolean;
}

/**
 * SVG markup (a group at the frame's place, no root element) of the traces over `levels` (eV, ascending, relative to the
 * reference level): grid, zero line, dashed rule at level 0, bands, plain sums, lines, ticks. Undefined when no trace holds a number.
 */
export function panelMarkup(
  levels: readonly number[],
  traces: readonly Trace[],
  frame: Frame,
  options: PanelOptions,
): string | undefined {
  const range = verticalRange(traces);
  if (range === undefined) return undefined;
  const scale = 10 ** -tickPower(range);
  const [first, last] = [levels[0], levels[levels.length - 1]];
  const domainX = last > first ? [first, last] : [first - 0.5, first + 0.5];
  const ticks = { tickSize: 4, tickPadding: 4, label: null, color: tone.faint };
  const { document } = parseHTML("<html><body></body></html>");
  const svg = Plot.plot({
    document,
    width: frame.widthPx,
    height: frame.heightPx,
    margin: 0,
    x: { domain: domainX, axis: null },
    y: { domain: range.map((bound) => bound * scale), axis: null },
    marks: [
      options.ticks
        ? Plot.gridX(
            options.ticks.map(({ at }) => at),
            { stroke: tone.grid, strokeOpacity: 1 },
          )
        : Plot.gridX({ stroke: tone.grid, strokeOpacity: 1, ticks: 9 }),
      Plot.gridY({ stroke: tone.grid, strokeOpacity: 1, ticks: tickCount(frame) }),
      Plot.ruleY([0], { stroke: tone.zero, strokeWidth: 1 }),
      ...(options.ticks === undefined && domainX[0] <= 0 && domainX[1] >= 0
        ? [Plot.ruleX([0], { stroke: tone.reference, strokeWidth: 1, strokeDasharray: "5 3" })]
        : []),
      ...traces.flatMap((trace) => marksOf(levels, trace, scale)),
      Plot.axisY({ ...ticks, ticks: tickCount(frame) }),
      ...dotMarks(options.dots ?? [], scale),
      ...axisBelow(options, ticks),
    ],
  });
  const inner = compactPaths(
    renamedClips(String(svg.innerHTML).replace(/<style>[\s\S]*?<\/style>/g, ""), options.idPrefix),
  );
  return `<g transform="translate(${frame.x},${frame.y})" font-size="11" text-anchor="middle">${inner}</g>`;
}

/** Ticks below: of levels by themselves, of another axis as told. */
function axisBelow(options: PanelOptions, style: object): Plot.Markish[] {
  if (!options.levelTicks) return [];
  const { ticks } = options;
  if (ticks === undefined) return [Plot.axisX({ ...style, ticks: 9 })];
  const labels = new Map(ticks.map(({ at, label }) => [at, label]));
  return [Plot.axisX([...labels.keys()], { ...style, tickFormat: (at: number) => labels.get(at) ?? "" })];
}

/** Marked places with their bars. */
function dotMarks(dots: readonly Dot[], scale: number): Plot.Markish[] {
  if (dots.length === 0) return [];
  const barred = dots.filter(({ error }) => error !== undefined && Number.isFinite(error));
  const at = (dot: Dot, bars: number): number => (dot.value + bars * (dot.error ?? 0)) * scale;
  const bars = { x: (dot: Dot) => dot.x, y1: (dot: Dot) => at(dot, -1), y2: (dot: Dot) => at(dot, 1) };
  return [
    Plot.ruleX(barred, { ...bars, stroke: (dot: Dot) => dot.colour, strokeWidth: 1.4, clip: true }),
    Plot.dot(dots, {
      x: (dot: Dot) => dot.x,
      y: (dot: Dot) => at(dot, 0),
      r: 3.6,
      stroke: (dot: Dot) => dot.colour,
      fill: (dot: Dot) => (dot.hollow ? tone.paper : dot.colour),
    }),
  ];
}

const tickCount = (frame: Frame): number => Math.max(3, Math.round(frame.heightPx / 36));
