// dope.ts: what does the picture of `dope` show: responses against doping, with their peaks?
import { dopingCurve, levelAt, responseAt } from "../../curves/doping.js";
import type { CurvesResult, ResponseCurve } from "../../curves/result.js";
import type { DopeResult } from "../../studies/dope-result.js";
import { cleanLine } from "../clean.js";
import { densityWords } from "../doping-words.js";
import { plain } from "../numbers.js";
import { quantityWords } from "./curves.js";
import { superscript, textLine, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import type { Dot, Trace } from "./panel.js";
import { panelAt, pictureSvg } from "./stack.js";
import { bandItem, edgePx, footerAt, legendOf, type Placed, ticksPx, titleAt } from "./surroundings.js";

/** Dopings at which a line is drawn. */
const drawnDopings = 241;
/** Decades of concentration shown below the largest. */
const mostDecades = 6;

/** A horizontal axis: places in the picture and the dopings they stand for. */
interface DopingAxis {
  readonly x: readonly number[];
  readonly perCell: readonly number[];
  readonly placeOf: (perCell: number) => number;
  readonly ticks: readonly { at: number; label: string }[] | undefined;
  readonly name: string;
}

/** Carriers many: added electrons per cell. */
function linearAxis(result: DopeResult): DopingAxis {
  const [least, most] = result.doping_window_per_cell;
  const perCell = Array.from({ length: drawnDopings }, (_, i) => least + (i * (most - least)) / (drawnDopings - 1));
  const one = `${plain(result.density_of_one, 3)} ${densityWords(result.density_unit).replace(/\^(\d)/, (_, d) => superscript(Number(d)))}`;
  return {
    x: perCell,
    perCell,
    placeOf: (each) => each,
    ticks: undefined,
    name: `Added electrons per cell (1 is ${one})`,
  };
}

/** Carriers few: holes to the left, electrons to the right, each by decades; the least decade of both meets in the middle. */
function decadeAxis(result: DopeResult): DopingAxis {
  const [least, most] = result.doping_window_per_cell;
  const largest = Math.log10(Math.max(-least, most, Number.MIN_VALUE) * result.density_of_one);
  const floor = Math.floor(largest) - mostDecades + 1;
  const decades = (perCell: number): number =>
    Math.max(0, Math.log10(Math.abs(perCell) * result.density_of_one) - floor);
  const placeOf = (perCell: number): number => (perCell === 0 ? 0 : Math.sign(perCell) * decades(perCell));
  const [left, right] = [placeOf(least), placeOf(most)];
  const inCell = (place: number): number =>
    place === 0 ? 0 : (Math.sign(place) * 10 ** (Math.abs(place) + floor)) / result.density_of_one;
  const x = Array.from({ length: drawnDopings }, (_, i) => left + (i * (right - left)) / (drawnDopings - 1));
  const perCell = x.map(inCell);
  perCell[0] = least;
  perCell[perCell.length - 1] = most;
  const whole = Array.from({ length: Math.floor(right) - Math.ceil(left) + 1 }, (_, i) => Math.ceil(left) + i);
  const ticks = whole.map((at) => ({ at, label: `10${superscript(floor + Math.abs(at))}` }));
  const per = densityWords(result.density_unit).replace(/\^(\d)/, (_, d) => superscript(Number(d)));
  const sides = [...(left < 0 ? ["holes"] : []), ...(right > 0 ? ["electrons"] : [])].join(" (left) and ");
  return {
    x,
    perCell,
    placeOf,
    ticks,
    name: `Concentration of ${sides}${left < 0 && right > 0 ? " (right)" : ""}, ${per}`,
  };
}

/** A response along the axis at one temperature, the level following the doping. */
function traceOf(curves: CurvesResult, response: ResponseCurve, t: number, axis: DopingAxis, colour: string): Trace {
  const doping = dopingCurve(curves, t);
  const at = axis.perCell.map((perCell) => {
    const level = levelAt(doping, perCell);
    if (level === undefined) return { value: Number.NaN, error: Number.NaN };
    return responseAt(curves.level_eV, response.value[t], response.error[t], level);
  });
  return { colour, value: at.map(({ value }) => value), error: at.map(({ error }) => error) };
}

/** The axis' name below the last panel; where carriers are few also what meets in the middle. */
function nameAt(name: string, widthPx: number, topPx: number): Placed {
  const middle = (edgePx + ticksPx + widthPx - edgePx) / 2;
  const style = { sizePx: 12, colour: tone.ink, anchor: "middle" } as const;
  return { markup: `<g class="doping-axis">${textLine(name, middle, topPx + 38, style)}</g>`, bottomPx: topPx + 46 };
}

/**
 * `dope` as one self-contained SVG document: a panel per response over the doping (over decades of concentration where carriers are
 * few), temperatures as colours, a band of one bar, peaks as dots (hollow: unresolved). Equal input gives equal bytes.
 */
export function dopeSvg(result: DopeResult, curves: CurvesResult, options: { widthPx?: number } = {}): string {
  const widthPx = Math.max(480, Math.round(options.widthPx ?? 760));
  const title = cleanLine(result.grid.title) || "Doping";
  const colours = temperatureColours(result.temperature_K.length);
  const axis = result.carriers === "few" ? decadeAxis(result) : linearAxis(result);
  const parts = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  const dot = (fill: string): string => `<circle cx="11" cy="-4" r="3.6" stroke="${tone.ink}" fill="${fill}"/>`;
  const more = [
    bandItem,
    { label: "peak", swatch: dot(tone.ink) },
    { label: "unresolved peak", swatch: dot(tone.paper) },
  ];
  parts.push(legendOf(result.temperature_K, colours, more, widthPx, bottomPx() + 4));
  for (const [at, { name, unit, peaks }] of result.responses.entries()) {
    const traces = result.temperature_K.map((kelvin, c) =>
      traceOf(curves, curves.responses[at], curves.temperature_K.indexOf(kelvin), axis, colours[c]),
    );
    const dots = peaks.map(({ temperature_K, doping, value, error, resolved }): Dot => {
      const colour = colours[result.temperature_K.indexOf(temperature_K)];
      return { x: axis.placeOf(doping.per_cell), value, error, colour, hollow: !resolved };
    });
    const panel = { words: quantityWords(name), name, unit: unitInPicture(unit), heightPx: 190, traces };
    const axes = { levelTicks: at === result.responses.length - 1, dots, ...(axis.ticks ? { ticks: axis.ticks } : {}) };
    parts.push(panelAt(axis.x, panel, widthPx, bottomPx() + 14, `dope-${at + 1}`, axes));
  }
  parts.push(nameAt(axis.name, widthPx, bottomPx()));
  parts.push(footerAt({ ...curves, notes: result.notes }, widthPx, bottomPx() + 14));
  const described = `${result.responses.map(({ name }) => name).join("; ")} against doping, peaks marked.`;
  return pictureSvg({ id: "dope", title, described, widthPx, parts });
}
