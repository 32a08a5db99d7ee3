// surroundings.ts: what stands around the panels of a picture: title, legend, level axis, footer?
import type { CurvesResult } from "../../curves/result.js";
import { cleanLine } from "../clean.js";
import { grouped, plain } from "../numbers.js";
import { fittingLines, textLine, textWidthPx } from "./lettering.js";
import { tone } from "./palette.js";

/** Markup and where the next element may begin. */
export interface Placed {
  markup: string;
  bottomPx: number;
}

/** Free edge of the picture, px. */
export const edgePx = 24;
/** Room for tick labels to the left of a frame, px. */
export const ticksPx = 58;

/** The title in as many lines as it needs. */
export function titleAt(text: string, widthPx: number, topPx: number): Placed {
  const lines = fittingLines(text, widthPx - 2 * edgePx, 17);
  const markup = lines.map((line, at) =>
    textLine(line, edgePx, topPx + 17 + 22 * at, { sizePx: 17, colour: tone.ink, bold: true }),
  );
  return { markup: markup.join("\n"), bottomPx: topPx + 22 * lines.length };
}

/** What a legend explains: markup of a swatch 22 px wide about its base line, and what it means. */
interface LegendItem {
  readonly label: string;
  readonly swatch: string;
}

const lineSwatch = (colour: string, more: string): string =>
  `<line x1="0" x2="22" y1="-4" y2="-4" stroke="${colour}" ${more}/>`;

/** Swatch and label of each temperature and of whatever more there is, flowing into as many rows as they need. */
export function legendOf(
  temperaturesK: readonly number[],
  colours: readonly string[],
  more: readonly LegendItem[],
  widthPx: number,
  topPx: number,
): Placed {
  const lines = temperaturesK.map((temperatureK, t) => ({
    label: `${plain(temperatureK)} K`,
    swatch: lineSwatch(colours[t], 'stroke-width="2.4"'),
  }));
  let [x, y] = [edgePx, topPx + 16];
  const markup = [...lines, ...more].map(({ label, swatch }) => {
    const spacePx = 28 + textWidthPx(label, 12) + 16;
    if (x > edgePx && x + spacePx > widthPx - edgePx) [x, y] = [edgePx, y + 19];
    const placed = `<g transform="translate(${x},${y})">${swatch}${textLine(label, 28, 0, { sizePx: 12, colour: tone.ink })}</g>`;
    x = Math.round(x + spacePx);
    return placed;
  });
  return { markup: `<g class="legend">${markup.join("")}</g>`, bottomPx: y + 8 };
}

/** The band of one bar. */
export const bandItem: LegendItem = {
  label: "value ± one bar",
  swatch: `<rect x="0" y="-10" width="22" height="11" fill="${tone.faint}" fill-opacity="0.25"/>`,
};

/** The legend of a sweep: temperatures, band and plain sum. */
export function legendAt(result: CurvesResult, colours: readonly string[], widthPx: number, topPx: number): Placed {
  const banded = result.responses.some(({ error }) => error.some((row) => row.some((bar) => bar > 0)));
  const plainSum = {
    label: "plain mesh sum",
    swatch: lineSwatch(tone.faint, 'stroke-width="1.2" stroke-dasharray="1.5 2"'),
  };
  const more = [...(banded ? [bandItem] : []), ...(result.sampling.method !== "points" ? [plainSum] : [])];
  return legendOf(result.temperature_K, colours, more, widthPx, topPx);
}

/** Below the last panel: the mark of the reference level under its rule, and the name of the axis. */
export function levelAxisAt(levels: readonly number[], widthPx: number, topPx: number): Placed {
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
export function footerAt(result: CurvesResult, widthPx: number, topPx: number): Placed {
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
