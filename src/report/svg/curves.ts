// curves.ts: what does the picture of a sweep show, and where does everything stand on it?
import type { CurvesResult } from "../../curves/result.js";
import { cleanLine } from "../clean.js";
import { quantityWords } from "../quantities.js";
import { unitInPicture } from "./lettering.js";
import { temperatureColours } from "./palette.js";
import { type Panel, panelAt, pictureSvg } from "./stack.js";
import { footerAt, legendAt, levelAxisAt, titleAt } from "./surroundings.js";

export { quantityWords } from "../quantities.js";

export interface CurvesSvgOptions {
  /** Plain text; default: the grid's title. */
  title?: string;
  /** px, at least 480; default 760. The height follows from the content. */
  widthPx?: number;
  /** Prefix of all ids, to be set when several pictures stand in one page; default "curves". */
  idPrefix?: string;
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
    parts.push(
      panelAt(result.level_eV, panel, widthPx, bottomPx() + 14, `${id}-${at + 1}`, {
        levelTicks: at === panels.length - 1,
      }),
    );
  parts.push(levelAxisAt(result.level_eV, widthPx, bottomPx()));
  parts.push(footerAt(result, widthPx, bottomPx() + 14));
  const described = panels.map(({ words, name }) => (name === "" ? words : `${words} ${name}`)).join("; ");
  return pictureSvg({ id, title, described: `${described} against the level.`, widthPx, parts });
}
