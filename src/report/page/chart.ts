// chart.ts: how is one quantity drawn along the level or the doping?
import * as Plot from "@observablehq/plot";
import { superscript } from "../svg/lettering.js";
import { tickPower, verticalRange } from "../svg/range.js";
import { element } from "./element.js";

/** Free edges of a panel's frame, px: every panel has the same, so that one cursor crosses all. */
export const edges = { leftPx: 54, rightPx: 14 } as const;

export interface Curve {
  readonly value: readonly number[];
  readonly error?: readonly number[];
  /** Drawn faintly. */
  readonly points?: readonly number[];
  /** The same quantity at another temperature, along the same axis or its own. */
  readonly beside?: { readonly x: readonly number[]; readonly value: readonly number[] };
}

export interface PanelDot {
  readonly x: number;
  readonly value: number;
  readonly label: string;
  readonly resolved: boolean;
}

export interface PanelFacts {
  readonly words: string;
  readonly name: string;
  readonly unit: string;
  readonly curve: Curve;
  readonly x: readonly number[];
  readonly domain: readonly [number, number];
  /** Name of the axis where it is drawn: on the last panel. */
  readonly axisName: string | undefined;
  readonly dots: readonly PanelDot[];
  readonly widthPx: number;
  readonly heightPx: number;
}

type Range = readonly [number, number];

/** Band, plain sum, other temperature and value, from back to front. */
function curveMarks({ x, curve }: PanelFacts, scale: number): Plot.Markish[] {
  const along = x.map((_, at) => at);
  const scaled = (row: readonly number[]): number[] => row.map((each) => each * scale);
  const { value, error, points, beside } = curve;
  const bound = (sign: number): number[] => scaled(value.map((each, at) => each + sign * (error?.[at] ?? Number.NaN)));
  const line = (xs: readonly number[], row: readonly number[], style: object): Plot.Markish =>
    Plot.line(
      xs.map((_, at) => at),
      { x: [...xs], y: scaled(row), clip: true, ...style },
    );
  return [
    ...(error
      ? [
          Plot.areaY(along, {
            x: [...x],
            y1: bound(-1),
            y2: bound(1),
            fill: "var(--live)",
            fillOpacity: 0.2,
            clip: true,
          }),
        ]
      : []),
    ...(points ? [line(x, points, { stroke: "var(--faint)", strokeWidth: 1, strokeDasharray: "1.5 2.5" })] : []),
    ...(beside
      ? [line(beside.x, beside.value, { stroke: "var(--beside)", strokeWidth: 1.3, strokeDasharray: "6 3" })]
      : []),
    line(x, value, { stroke: "var(--live)", strokeWidth: 2, strokeLinejoin: "round" }),
  ];
}

function dotMarks(dots: readonly PanelDot[], scale: number, range: Range): Plot.Markish[] {
  if (dots.length === 0) return [];
  const y = (dot: PanelDot): number => dot.value * scale;
  const high = dots.filter((dot) => dot.value * scale > range[0] + 0.8 * (range[1] - range[0]));
  const low = dots.filter((dot) => !high.includes(dot));
  const label = (which: PanelDot[], dy: number): Plot.Markish =>
    Plot.text(which, {
      x: "x",
      y,
      text: "label",
      dy,
      fill: "var(--ink)",
      stroke: "var(--paper)",
      strokeWidth: 3,
      fontSize: 11,
    });
  return [
    Plot.dot(dots, {
      x: "x",
      y,
      r: 4,
      stroke: "var(--live)",
      strokeWidth: 1.6,
      fill: (dot: PanelDot) => (dot.resolved ? "var(--live)" : "var(--paper)"),
    }),
    label(high, 13),
    label(low, -11),
  ];
}

function marksOf(facts: PanelFacts, scale: number, range: Range): Plot.Markish[] {
  const { domain, heightPx, widthPx, axisName } = facts;
  const ticks = { tickSize: 4, tickPadding: 4, label: null, color: "var(--faint)" };
  const yTicks = Math.max(3, Math.round(heightPx / 36));
  const xTicks = Math.max(4, Math.round(widthPx / 95));
  return [
    Plot.gridX({ stroke: "var(--grid)", strokeOpacity: 1, ticks: xTicks }),
    Plot.gridY({ stroke: "var(--grid)", strokeOpacity: 1, ticks: yTicks }),
    Plot.ruleY([0], { stroke: "var(--zero)" }),
    ...(domain[0] <= 0 && domain[1] >= 0 ? [Plot.ruleX([0], { stroke: "var(--zero)", strokeDasharray: "5 3" })] : []),
    ...curveMarks(facts, scale),
    Plot.axisY({ ...ticks, ticks: yTicks }),
    ...(axisName === undefined ? [] : [Plot.axisX({ ...ticks, ticks: xTicks })]),
    ...dotMarks(facts.dots, scale, range),
  ];
}

/** A figure: heading in words with the unit, and the drawing; "no numbers" where there are none. */
export function panelFigure(facts: PanelFacts): HTMLElement {
  const { words, name, curve, domain, axisName, widthPx } = facts;
  const traces = [{ colour: "", ...curve }, ...(curve.beside ? [{ colour: "", value: curve.beside.value }] : [])];
  const wanted = verticalRange(traces);
  const power = wanted === undefined ? 0 : tickPower(wanted);
  const unit = [power === 0 ? "" : `10${superscript(power)}`, facts.unit].filter((part) => part !== "").join(" ");
  const details = [name, unit === "" ? "" : `in ${unit}`].filter((part) => part !== "").join(", ");
  const caption = element(
    "figcaption",
    {},
    element("strong", {}, words),
    " ",
    element("span", { class: "faint" }, details),
  );
  if (wanted === undefined)
    return element("figure", { class: "panel" }, caption, element("p", { class: "faint" }, "no numbers"));
  const scale = 10 ** -power;
  const range: Range = [wanted[0] * scale, wanted[1] * scale];
  const drawing = Plot.plot({
    width: widthPx,
    height: facts.heightPx + (axisName === undefined ? 0 : 24),
    marginLeft: edges.leftPx,
    marginRight: edges.rightPx,
    marginTop: 6,
    marginBottom: axisName === undefined ? 6 : 30,
    style: { background: "transparent", color: "var(--ink)", fontSize: "11px", overflow: "visible" },
    x: { domain: [...domain], axis: null },
    y: { domain: [...range], axis: null },
    marks: marksOf(facts, scale, range),
  });
  // The drawing is one picture with one name: the library's labels of its parts have no role that could carry them.
  for (const part of drawing.querySelectorAll("[aria-label], [aria-description]")) {
    part.removeAttribute("aria-label");
    part.removeAttribute("aria-description");
  }
  drawing.setAttribute("role", "img");
  drawing.setAttribute(
    "aria-label",
    `${words}${details === "" ? "" : `, ${details}`}. Read-out and tables hold the numbers.`,
  );
  const under = axisName === undefined ? [] : [element("p", { class: "axis-name" }, axisName)];
  return element("figure", { class: "panel" }, caption, drawing, ...under);
}
