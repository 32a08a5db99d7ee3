// zone-map.ts: how is a quantity of both signs coloured over a parallelogram of k space, so that maps side by side compare?
import { plain } from "../numbers.js";
import { fittingLines, textLine } from "./lettering.js";
import { diverging, tone } from "./palette.js";
import type { Placed } from "./surroundings.js";

/** Values over a parallelogram, rows along `along`, one row after another along `across` (Cartesian, 1/angstrom). */
export interface Sheet {
  readonly rows: readonly (readonly number[])[];
  readonly along: readonly [number, number, number];
  readonly across: readonly [number, number, number];
  /** Where it lies. */
  readonly words: string;
}

/** Steps of the scale to either side of zero. */
const steps = 9;
/** Colours span at most so many decades, and not much less than the usual place needs; below that they are linear. */
const decades = 3;

/** Linear about zero up to `smallest`, logarithmic up to `largest`. */
export interface Scale {
  readonly largest: number;
  readonly smallest: number;
}

/** One scale for all values of a picture: its top is exceeded by one place in two hundred, so that single spikes do not set it. */
export function sharedScale(values: readonly number[]): Scale {
  const sizes = values
    .filter(Number.isFinite)
    .map(Math.abs)
    .sort((a, b) => a - b);
  const largest = sizes[Math.min(sizes.length - 1, Math.floor(0.995 * sizes.length))] ?? 0;
  const top = largest > 0 ? largest : (sizes[sizes.length - 1] ?? 0);
  if (!(top > 0)) return { largest: 1, smallest: 1 };
  const usual = sizes[Math.floor(sizes.length / 2)];
  return { largest: top, smallest: Math.min(top, Math.max(usual, top / 10 ** decades)) };
}

/** -steps .. steps. */
function stepOf(value: number, { largest, smallest }: Scale): number {
  const size = Math.abs(value);
  const part = Math.asinh(size / smallest) / Math.asinh(largest / smallest);
  return Math.sign(value) * Math.min(steps, Math.round(steps * part));
}

/** One path for each colour: rectangles of runs of equal colour along the rows, unit squares. */
function coloured(rows: Sheet["rows"], scale: Scale): string {
  const paths = new Map<number, string>();
  for (const [y, row] of rows.entries())
    for (let x = 0; x < row.length; ) {
      const step = stepOf(row[x], scale);
      let end = x + 1;
      while (end < row.length && stepOf(row[end], scale) === step) end++;
      if (step !== 0 && Number.isFinite(step))
        paths.set(step, `${paths.get(step) ?? ""}M${x} ${y}h${end - x}v1h${x - end}z`);
      x = end;
    }
  return [...paths]
    .sort(([a], [b]) => a - b)
    .map(([step, d]) => `<path fill="${diverging(step / steps)}" d="${d}"/>`)
    .join("");
}

const dot = (a: readonly number[], b: readonly number[]): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

const short = (value: number): string => String(Number(value.toFixed(3)));

/** A sheet in its true shape, `along` to the right, under a heading; as wide as the frame, or as high as it is wide. */
export function sheetAt(
  sheet: Sheet,
  scale: Scale,
  heading: string,
  frame: { readonly x: number; readonly y: number; readonly widthPx: number },
): Placed {
  const [a, b] = [Math.sqrt(dot(sheet.along, sheet.along)), Math.sqrt(dot(sheet.across, sheet.across))];
  const shift = dot(sheet.along, sheet.across) / a;
  const height = Math.sqrt(Math.max(0, b * b - shift * shift));
  const size = Math.min(frame.widthPx / (a + Math.abs(shift)), frame.widthPx / height);
  const words = [
    ...fittingLines(heading, frame.widthPx, 13).map((text) => ({ text, bold: true })),
    ...fittingLines(sheet.words, frame.widthPx, 11).map((text) => ({ text, bold: false })),
  ];
  const lines = words.map(({ text, bold }, i) =>
    textLine(text, frame.x, frame.y + 13 + 16 * i, {
      sizePx: bold ? 13 : 11,
      colour: bold ? tone.ink : tone.faint,
      ...(bold ? { bold: true as const } : {}),
    }),
  );
  const top = frame.y + 16 * words.length + 8;
  const [columns, rows] = [sheet.rows[0]?.length ?? 1, sheet.rows.length];
  // Pixels of one step along and of one across; `across` points upwards.
  const [px, qx, qy] = [(a * size) / columns, (shift * size) / rows, (-height * size) / rows];
  const [x0, y0] = [frame.x + Math.max(0, -shift * size), top + height * size];
  const matrix = [px, 0, qx, qy, x0, y0].map(short).join(",");
  const corners = [
    [0, 0],
    [columns, 0],
    [columns, rows],
    [0, rows],
  ].map(([u, v]) => `${short(x0 + u * px + v * qx)},${short(y0 + v * qy)}`);
  const outline = (fill: string, stroke: string): string =>
    `<polygon points="${corners.join(" ")}" fill="${fill}" stroke="${stroke}"/>`;
  const colours = `<g transform="matrix(${matrix})" shape-rendering="crispEdges">${coloured(sheet.rows, scale)}</g>`;
  return {
    markup: `<g class="sheet">${lines.join("")}${outline(diverging(0), "none")}${colours}${outline("none", tone.zero)}</g>`,
    bottomPx: Math.ceil(y0),
  };
}

/** The scale as a bar with its marks. */
export function scaleAt(scale: Scale, unit: string, x: number, topPx: number, widthPx: number): Placed {
  const barPx = Math.min(360, widthPx);
  const each = barPx / (2 * steps + 1);
  const boxes = Array.from({ length: 2 * steps + 1 }, (_, i) => {
    const step = i - steps;
    return `<rect x="${short(x + i * each)}" y="${topPx}" width="${short(each + 0.3)}" height="12" fill="${diverging(step / steps)}"/>`;
  });
  const inner = Math.sqrt(scale.smallest * scale.largest);
  const ends = scale.smallest < scale.largest / 3 ? [-scale.largest, -inner] : [-scale.largest];
  const marks = [...ends, 0, ...ends.map((value) => -value).reverse()].map((value) => {
    const place = x + barPx / 2 + stepOf(value, scale) * each;
    return textLine(plain(value, 2), Number(short(place)), topPx + 26, {
      sizePx: 11,
      colour: tone.faint,
      anchor: "middle",
    });
  });
  const label = textLine(unit, x + barPx + 12, topPx + 11, { sizePx: 11, colour: tone.ink });
  return { markup: `<g class="scale">${boxes.join("")}${marks.join("")}${label}</g>`, bottomPx: topPx + 30 };
}
