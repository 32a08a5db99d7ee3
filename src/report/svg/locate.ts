// locate.ts: what do the pictures of `locate` show: where in a plane, seen along b3, and along a path, a response comes from?
import type { LocatedResponse, LocateResult } from "../../studies/locate-result.js";
import { cleanLine } from "../clean.js";
import { plain } from "../numbers.js";
import { quantityWords } from "./curves.js";
import { fittingLines, textLine, unitInPicture } from "./lettering.js";
import { temperatureColours, tone } from "./palette.js";
import type { Panel } from "./stack.js";
import { panelAt, pictureSvg } from "./stack.js";
import { edgePx, type Placed, titleAt } from "./surroundings.js";
import { type Scale, type Sheet, scaleAt, sharedScale, sheetAt } from "./zone-map.js";

const widthPx = 760;
/** Room for the half of the last corner's label that reaches beyond the panels. */
const labelPx = 30;
/** Energies shown about the level, eV. */
const bandsReachEv = 1.5;

type Row = readonly [number, number, number];

const combined = (k: Row, reciprocal: LocateResult["grid"]["reciprocal"]): Row =>
  [0, 1, 2].map((a) => k[0] * reciprocal[0][a] + k[1] * reciprocal[1][a] + k[2] * reciprocal[2][a]) as unknown as Row;

const at = (k: Row): string => k.map((x) => plain(x, 4)).join(" ");

function footer(result: LocateResult, more: string, topPx: number): Placed {
  const texts = [
    "intrinsic only, rigid band — screening numbers",
    more,
    `level ${plain(result.level_eV, 4)} eV from the reference, ${plain(result.temperature_K)} K; mesh ${result.grid.divisions.slice(0, result.grid.periodic).join(" × ")}, ${result.grid.bands} bands; method ${result.sampling.method}; tidegauge ${cleanLine(result.version)}`,
  ];
  const lines = texts.flatMap((text) => fittingLines(text, widthPx - 2 * edgePx, 11));
  const markup = lines.map((line, i) =>
    textLine(line, edgePx, topPx + 22 + 15 * i, { sizePx: 11, colour: tone.faint }),
  );
  return { markup: `<g class="footer">${markup.join("")}</g>`, bottomPx: topPx + 16 + 15 * lines.length };
}

/** Responses that something contributes to; all where nothing contributes to any. */
function shown({ responses }: LocateResult): readonly LocatedResponse[] {
  const some = responses.filter(({ vanishes }) => !vanishes);
  return some.length > 0 ? some : responses;
}

const titleWords = (result: LocateResult, what: string): string =>
  `${cleanLine(result.grid.title)}${result.grid.title === "" ? "" : ": "}${what}`;

/** The plane of the map. */
function planeSheet(result: LocateResult, { map }: LocatedResponse): Sheet {
  const { centre, along, across } = result.plane;
  const { reciprocal } = result.grid;
  return {
    rows: map,
    along: combined(along, reciprocal),
    across: combined(across, reciprocal),
    words: `plane about ${at(centre)}, along ${at(along)} (right) and ${at(across)}`,
  };
}

/** The zone seen along b3, centred like the default plane. */
function projectionSheet(result: LocateResult, { projection }: LocatedResponse): Sheet {
  const { reciprocal, offset, divisions, periodic } = result.grid;
  const [n1, n2] = divisions;
  const [first1, first2] = [Math.floor(n1 / 2), Math.floor(n2 / 2)];
  const rows = Array.from({ length: n2 }, (_, row) =>
    Array.from({ length: n1 }, (_unused, column) => projection[(column + first1) % n1][(row + first2) % n2]),
  );
  const middle = [n1, n2].map((n, j) => ([first1, first2][j] + offset[j] + (n - 1) / 2) / n - 1);
  return {
    rows,
    along: reciprocal[0],
    across: reciprocal[1],
    words: `${periodic === 3 ? "whole zone, mean along b3" : "whole zone, cell by cell"}, about ${middle.map((x) => plain(x, 3)).join(" ")}, along b1 (right) and b2`,
  };
}

/** Sheets side by side, two in a row, on the scale of all responses of their unit. */
function sheetsAt(
  result: LocateResult,
  sheetOf: (result: LocateResult, response: LocatedResponse) => Sheet,
  topPx: number,
): { readonly parts: Placed[]; readonly bottomPx: number } {
  const gapPx = 28;
  const each = (widthPx - 2 * edgePx - gapPx) / 2;
  const parts: Placed[] = [];
  let bottom = topPx;
  for (const unit of new Set(shown(result).map((response) => response.unit))) {
    const own = shown(result).filter((response) => response.unit === unit);
    const sheets = own.map((response) => sheetOf(result, response));
    const scale: Scale = sharedScale(sheets.flatMap(({ rows }) => rows.flat()));
    for (let i = 0; i < own.length; i += 2) {
      const placed = own.slice(i, i + 2).map((response, column) => {
        const heading = `${quantityWords(response.name)}, ${cleanLine(response.name)}`;
        return sheetAt(sheets[i + column], scale, heading, {
          x: edgePx + column * (each + gapPx),
          y: bottom,
          widthPx: each,
        });
      });
      parts.push(...placed);
      bottom = Math.max(...placed.map(({ bottomPx }) => bottomPx)) + 14;
    }
    const legend = scaleAt(scale, unitInPicture(unit), edgePx, bottom, widthPx - 2 * edgePx);
    parts.push(legend);
    bottom = legend.bottomPx + 18;
  }
  return { parts, bottomPx: bottom };
}

/** `locate-map.svg`: the plane, and below it the whole zone seen along b3; responses side by side, one scale for each unit. Equal input gives equal bytes. */
export function locateMapSvg(result: LocateResult): string {
  const title = titleWords(result, "where the responses come from");
  const head = titleAt(title, widthPx, 18);
  const plane = sheetsAt(result, planeSheet, head.bottomPx + 14);
  const whole = sheetsAt(result, projectionSheet, plane.bottomPx + 10);
  const foot = footer(
    result,
    "Colours: what the response would be if all of the zone were like that place; linear about zero, logarithmic further out; the darkest also stand for more.",
    whole.bottomPx,
  );
  return pictureSvg({
    id: "locate-map",
    title,
    described: `The integrand of ${shown(result)
      .map(({ name }) => cleanLine(name))
      .join(", ")} in a plane, and its mean along b3.`,
    widthPx,
    parts: [head, ...plane.parts, ...whole.parts, foot],
  });
}

/** Bands near the level, and below them each response along the path. */
function pathPanels(result: LocateResult): Panel[] {
  const { path, grid, level_eV: level } = result;
  const [colour] = temperatureColours(1);
  const near = (energy: number): number => (Math.abs(energy - level) <= bandsReachEv ? energy - level : Number.NaN);
  const bands = Array.from({ length: grid.bands }, (_, band) => ({
    colour: tone.ink,
    value: (path?.energies_eV ?? []).map((row) => near(row[band])),
  })).filter(({ value }) => value.some(Number.isFinite));
  return [
    { words: "Bands", name: "energy from the level", unit: "eV", heightPx: 240, traces: bands },
    ...shown(result).map((response) => ({
      words: quantityWords(response.name),
      name: `${cleanLine(response.name)} if all of the zone were like here`,
      unit: unitInPicture(response.unit),
      heightPx: 150,
      traces: [{ colour, value: response.path ?? [] }],
    })),
  ];
}

/** `locate-path.svg`; throws nothing; empty panels where the result has no path. */
export function locatePathSvg(result: LocateResult): string {
  const title = titleWords(result, "bands and responses along a path");
  const lengths = result.path?.length ?? [];
  const ticks = (result.path?.corners ?? []).map((corner) => ({ at: lengths[corner.at], label: at(corner.k) }));
  const parts = [titleAt(title, widthPx, 18)];
  const bottomPx = (): number => parts[parts.length - 1].bottomPx;
  const panels = pathPanels(result);
  for (const [i, panel] of panels.entries())
    parts.push(
      panelAt(lengths, panel, widthPx - labelPx, bottomPx() + 14, `locate-path-${i + 1}`, {
        levelTicks: i === panels.length - 1,
        ticks,
      }),
    );
  parts.push(footer(result, "Places of the path in b1, b2, b3; bands within 1.5 eV of the level.", bottomPx() + 24));
  return pictureSvg({
    id: "locate-path",
    title,
    described: `Bands, and ${shown(result)
      .map(({ name }) => cleanLine(name))
      .join(", ")}, along a path.`,
    widthPx,
    parts,
  });
}
