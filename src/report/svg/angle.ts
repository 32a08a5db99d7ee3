// angle.ts: what does the picture of `angle` show: angles against temperature, and the level curves with measured values on them?
import type { CurvesResult } from "../../curves/result.js";
import type { AngleResponse, AngleResult, MeasuredRow } from "../../studies/angle-result.js";
import { cleanLine } from "../clean.js";
import { quantityWords } from "./curves.js";
import { textLine, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import type { Dot, Trace } from "./panel.js";
import { type Panel, panelAt, pictureSvg } from "./stack.js";
import { edgePx, footerAt, legendAt, levelAxisAt, type Placed, ticksPx, titleAt } from "./surroundings.js";

const anglePanelPx = 130;
const curvePanelPx = 170;

const angleWords = (name: string): string => quantityWords(name).replace(/conductivity/, "angle");

/** Angle of one response against temperature. */
function anglePanel({ name, rows }: AngleResponse, colour: string): Panel {
  const percent = (part: number): number => 100 * part;
  const value = rows.map((row) => percent(row.angle));
  const traces = [{ colour, value, error: rows.map((row) => percent(row.angle_error)) }];
  return { words: angleWords(name), name, unit: "%", heightPx: anglePanelPx, traces };
}

/** The level curve of one response, with room for the measured values. */
function curvePanel(response: AngleResponse, colours: readonly string[], measured: readonly MeasuredRow[]): Panel {
  const { name, unit, curve, curve_error: error } = response;
  const traces: Trace[] = colours.map((colour, t) => ({ colour, value: curve[t], error: error[t] }));
  const widest = measured.reduce((most, { value }) => (Math.abs(value) > Math.abs(most) ? value : most), 0);
  const room: Trace[] = measured.length === 0 ? [] : [{ colour: "none", value: curve[0].map(() => widest) }];
  return {
    words: quantityWords(name),
    name,
    unit: unitInPicture(unit),
    heightPx: curvePanelPx,
    traces: [...traces, ...room],
  };
}

/** Measured values at the level where they would be intrinsic; hollow at the reference where no level gives them. */
const dotsOf = (measured: readonly MeasuredRow[]): Dot[] =>
  measured.map(({ value, error, verdict, shift_eV: shift }) => ({
    x: shift ?? 0,
    value,
    ...(error === null ? {} : { error }),
    colour: tone.ink,
    hollow: verdict !== "agrees" && verdict !== "level",
  }));

function axisName(name: string, widthPx: number, topPx: number): Placed {
  const middle = (edgePx + ticksPx + widthPx - edgePx) / 2;
  const style = { sizePx: 12, colour: tone.ink, anchor: "middle" } as const;
  return { markup: `<g class="axis-name">${textLine(name, middle, topPx + 36, style)}</g>`, bottomPx: topPx + 44 };
}

/** Ticks of a temperature axis: about six round numbers. */
function kelvinTicks(kelvin: readonly number[]): { at: number; label: string }[] {
  const [low, high] = [kelvin[0], kelvin[kelvin.length - 1]];
  const step = [1, 2, 5, 10, 20, 50, 100, 200, 500, 1000].find((each) => (high - low) / each <= 8) ?? 5000;
  const first = Math.ceil(low / step);
  return Array.from({ length: Math.floor(high / step) - first + 1 }, (_, i) => {
    const at = (first + i) * step;
    return { at, label: String(at) };
  });
}

/**
 * `angle` as one self-contained SVG document: where there are several temperatures a panel of each angle against them, then the level curve
 * of each response with the measured values as dots. Equal input gives equal bytes; all outside text is plain text.
 */
export function angleSvg(result: AngleResult, curves: CurvesResult): string {
  const widthPx = 760;
  const colours = temperatureColours(curves.temperature_K.length);
  const title = cleanLine(result.grid.title) || "Hall angles";
  const parts: Placed[] = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  const kelvin = result.scattering.map((row) => row.temperature_K);
  if (kelvin.length > 1) {
    for (const [i, response] of result.responses.entries()) {
      const options = { levelTicks: i === result.responses.length - 1, ticks: kelvinTicks(kelvin) };
      parts.push(panelAt(kelvin, anglePanel(response, colours[0]), widthPx, bottomPx() + 14, `angle-t${i}`, options));
    }
    parts.push(axisName("Temperature, in K", widthPx, bottomPx()));
  }
  parts.push(
    legendAt({ ...curves, sampling: { ...curves.sampling, method: "points" } }, colours, widthPx, bottomPx() + 4),
  );
  for (const [i, response] of result.responses.entries()) {
    const measured = result.measured.filter((row) => row.response === response.name);
    const options = { levelTicks: i === result.responses.length - 1, dots: dotsOf(measured) };
    const panel = curvePanel(response, colours, measured);
    parts.push(panelAt(result.level_eV, panel, widthPx, bottomPx() + 14, `angle-e${i}`, options));
  }
  parts.push(levelAxisAt(result.level_eV, widthPx, bottomPx()));
  const dots =
    result.measured.length > 0 ? ["dots: measured values, at the level that gives them; hollow: none does"] : [];
  parts.push(footerAt({ ...curves, notes: [...dots, ...result.notes] }, widthPx, bottomPx() + 14));
  const described = `Hall angles and conductivities of ${result.responses.map(({ name }) => name).join(", ")}.`;
  return pictureSvg({ id: "angle", title, described, widthPx, parts });
}
