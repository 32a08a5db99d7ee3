// charts.mjs: how do the study's numbers look? results.json -> gold.svg, curve.svg, dirac.svg, layer.svg. Ground, colours and lettering
// are those of the program's own pictures.
import { writeFileSync } from "node:fs";
import { join } from "node:path";
import * as Plot from "@observablehq/plot";
import { parseHTML } from "linkedom";
import { fontFamily, superscript, textLine, textWidthPx } from "../../dist/report/svg/lettering.js";
import { temperatureColours, tone } from "../../dist/report/svg/palette.js";

const [blue, orange] = temperatureColours(2);
const edgePx = 16;
const ticksPx = 50;

/** Ticks of a logarithmic axis, decades only: plain numbers from a thousandth up where the axis ends by 10,000, else powers of ten. */
const decadeOn = (domain) => (value) => {
  const power = Math.round(Math.log10(value));
  if (Math.abs(Math.log10(value) - power) > 1e-9) return "";
  if (power >= -3 && power < 3 + (domain[1] <= 1e4 ? 1 : 0)) return String(Number(value.toPrecision(1)));
  return `10${superscript(power)}`;
};

/** Powers of ten inside a range, all or every second one. */
function decades([low, high]) {
  const first = Math.ceil(Math.log10(low) - 1e-9);
  const count = Math.floor(Math.log10(high) + 1e-9) - first + 1;
  const step = count > 6 ? 2 : 1;
  return Array.from({ length: Math.ceil(count / step) }, (_, i) => 10 ** (first + step * i));
}

/** The marks of a line through points; `bar` draws the stated bars as an area from the bottom, `dashed` the plain sum. */
function lineMarks({ rows, x, y, colour, dashed, dots = true }) {
  const known = rows.filter((row) => Number.isFinite(y(row)));
  return [
    Plot.lineY(known, { x, y, stroke: colour, strokeWidth: 1.6, ...(dashed ? { strokeDasharray: "4 3" } : {}) }),
    ...(dots
      ? [Plot.dot(known, { x, y, r: 3.2, fill: dashed ? tone.paper : colour, stroke: colour, strokeWidth: 1.4 })]
      : []),
  ];
}

/** One panel: heading, frame, ticks, marks. Returns markup placed at (left, top). */
function panel({ heading, left, top, widthPx, heightPx, x, y, marks, xLabel }) {
  const { document } = parseHTML("<html><body></body></html>");
  const ticks = { tickSize: 4, tickPadding: 4, label: null, color: tone.faint };
  const xTicks = x.ticks ?? (x.type === "log" ? decades(x.domain) : 9);
  const yTicks = y.type === "log" ? decades(y.domain) : 5;
  const format = (axis) => axis.format ?? (axis.type === "log" ? decadeOn(axis.domain) : undefined);
  const scale = ({ type = "linear", domain, reverse = false }) => ({ type, domain, reverse, axis: null });
  const svg = Plot.plot({
    document,
    width: widthPx,
    height: heightPx,
    margin: 0,
    x: scale(x),
    y: scale(y),
    marks: [
      Plot.gridX({ stroke: tone.grid, strokeOpacity: 1, ticks: xTicks }),
      Plot.gridY({ stroke: tone.grid, strokeOpacity: 1, ticks: yTicks }),
      Plot.frame({ stroke: tone.grid }),
      ...marks,
      Plot.axisY({ ...ticks, ticks: yTicks, tickFormat: format(y) }),
      Plot.axisX({ ...ticks, ticks: xTicks, tickFormat: format(x) }),
    ],
  });
  const inner = String(svg.innerHTML)
    .replace(/<style>[\s\S]*?<\/style>/g, "")
    .replace(/ [\w-]+="[^"]*"/g, (attribute) =>
      attribute.replace(/-?\d+\.\d{3,}/g, (number) => String(Number(Number(number).toFixed(2)))),
    );
  const style = { sizePx: 11, colour: tone.faint };
  return [
    textLine(heading, left, top - 9, { sizePx: 12, colour: tone.ink, bold: true }),
    `<g transform="translate(${left},${top})" font-size="11" text-anchor="middle">${inner}</g>`,
    ...(xLabel ? [textLine(xLabel, left + widthPx / 2, top + heightPx + 34, { ...style, anchor: "middle" })] : []),
  ].join("\n");
}

/** A key above the panels: `[kind, colour, words]`, kind line, dashed, area or dots. */
function keyMarkup(entries, left, top) {
  let at = left;
  const parts = [];
  for (const [kind, colour, words] of entries) {
    const middle = top - 4;
    if (kind === "area")
      parts.push(`<rect x="${at}" y="${middle - 5}" width="22" height="10" fill="${colour}" fill-opacity="0.18"/>`);
    else if (kind !== "dots") {
      const dash = kind === "dashed" ? ' stroke-dasharray="4 3"' : "";
      parts.push(
        `<line x1="${at}" x2="${at + 22}" y1="${middle}" y2="${middle}" stroke="${colour}" stroke-width="1.6"${dash}/>`,
      );
    }
    if (kind === "dots")
      parts.push(`<circle cx="${at + 11}" cy="${middle}" r="2.6" fill="none" stroke="${colour}" stroke-width="1.2"/>`);
    parts.push(textLine(words, at + 28, top, { sizePx: 11, colour: tone.ink }));
    at += 28 + Math.round(textWidthPx(words, 11) * 0.82) + 18;
  }
  return parts.join("\n");
}

/** The whole picture as one document. */
function picture({ title, key, widthPx, heightPx, panels }) {
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${widthPx}" height="${heightPx}" viewBox="0 0 ${widthPx} ${heightPx}" role="img" font-family="${fontFamily}" font-size="11">`,
    `<title>${title}</title>`,
    `<rect width="${widthPx}" height="${heightPx}" fill="${tone.paper}"/>`,
    textLine(title, edgePx, 24, { sizePx: 15, colour: tone.ink, bold: true }),
    keyMarkup(key, edgePx, 46),
    ...panels,
    "</svg>\n",
  ].join("\n");
}

/** Decade-wide range that holds all positive numbers given. */
function decadeRange(values) {
  const positive = values.filter((value) => value > 0).map(Math.log10);
  return [10 ** Math.floor(Math.min(...positive)), 10 ** Math.ceil(Math.max(...positive))];
}

/** Refined error, plain error and the stated bar (area up to it) on logarithmic axes. */
function errorMarks(rows, x, truthOf, bottom) {
  return [
    Plot.areaY(rows, { x, y1: bottom, y2: (row) => row.bar, fill: blue, fillOpacity: 0.18 }),
    ...lineMarks({ rows, x, y: (row) => Math.abs(row.plain - truthOf(row)), colour: orange, dashed: true }),
    ...lineMarks({ rows, x, y: (row) => Math.abs(row.value - truthOf(row)), colour: blue }),
  ];
}

const errorKey = [
  ["line", blue, "error of the refined value"],
  ["area", blue, "its stated bar"],
  ["dashed", orange, "error of the plain sum"],
];

function goldPicture({ rows, truth }) {
  const meshes = rows.map(({ mesh }) => mesh);
  const panels = ["spin", "orbital"].map((moment, at) => {
    const flat = rows.map((row) => ({ mesh: row.mesh, ...row[moment] }));
    const errors = flat.flatMap(({ value, plain, bar }) =>
      [value, plain].map((y) => Math.abs(y - truth[moment])).concat(bar),
    );
    const domain = decadeRange(errors);
    return panel({
      heading: `${moment}:xy:z, error in (ħ/e) S/cm; truth ${truth[moment].toFixed(1)}`,
      left: edgePx + ticksPx - 14 + at * 372,
      top: 88,
      widthPx: 310,
      heightPx: 230,
      x: { type: "log", domain: [5.5, 17.5], ticks: meshes, format: String },
      y: { type: "log", domain },
      marks: errorMarks(
        flat,
        (row) => row.mesh,
        () => truth[moment],
        domain[0],
      ),
      xLabel: "stored mesh, divisions along each axis",
    });
  });
  return picture({
    title: "Gold at 300 K, level 0: error against the stored mesh",
    key: errorKey,
    widthPx: 760,
    heightPx: 372,
    panels,
  });
}

function curvePicture({ runs }) {
  const { levelEv, spin, orbital, accuracy } = runs[0];
  const panels = [spin, orbital].map((moment, at) => {
    const rows = levelEv.map((level, i) => {
      const { value, bar, plain, truth } = moment;
      return {
        level,
        value: value[i],
        low: value[i] - bar[i],
        high: value[i] + bar[i],
        plain: plain[i],
        truth: truth[i],
      };
    });
    const all = rows.flatMap(({ low, high, truth, plain }) => [low, high, truth, plain]);
    const [low, high] = [Math.min(...all), Math.max(...all)];
    const x = (row) => row.level;
    return panel({
      heading: `${["spin", "orbital"][at]}:xy:z in (ħ/e) S/cm`,
      left: edgePx + ticksPx - 8,
      top: 88 + at * 238,
      widthPx: 690,
      heightPx: 190,
      x: { domain: [levelEv[0], levelEv[levelEv.length - 1]] },
      y: { domain: [low - 0.06 * (high - low), high + 0.06 * (high - low)] },
      marks: [
        Plot.areaY(rows, { x, y1: (row) => row.low, y2: (row) => row.high, fill: blue, fillOpacity: 0.18 }),
        Plot.lineY(rows, { x, y: (row) => row.plain, stroke: orange, strokeWidth: 1.2, strokeDasharray: "4 3" }),
        Plot.lineY(rows, { x, y: (row) => row.value, stroke: blue, strokeWidth: 1.6 }),
        Plot.dot(rows, { x, y: (row) => row.truth, r: 2.6, stroke: tone.ink, strokeWidth: 1.1 }),
      ],
      xLabel: at === 1 ? "level, eV from the Fermi level" : undefined,
    });
  });
  const key = [
    ["line", blue, "refined"],
    ["area", blue, "one bar"],
    ["dashed", orange, "plain sum, the same points"],
    ["dots", tone.ink, "dense reference"],
  ];
  return picture({
    title: `Gold at 300 K: the curve from 12³ stored points, --accuracy ${accuracy}`,
    key,
    widthPx: 760,
    heightPx: 566,
    panels,
  });
}

function diracPicture({ rows }) {
  const x = { type: "log", domain: [0.0002, 0.45], reverse: true };
  const massOf = (row) => row.mass;
  const truthOf = (row) => row.truth;
  const errors = rows.flatMap(({ value, plain, truth, bar }) => [
    Math.abs(value - truth),
    Math.abs(plain - truth),
    bar,
  ]);
  const domain = decadeRange(errors);
  const needed = (row) => row.plainNeeded.points;
  const counts = decadeRange(rows.flatMap((row) => [needed(row), row.samples]));
  const size = { top: 88, widthPx: 310, heightPx: 230, x, xLabel: "D, half the gap, eV (sharper to the right)" };
  const panels = [
    panel({
      ...size,
      heading: "charge:xy, error in e²/h, 24² stored points",
      left: edgePx + ticksPx - 14,
      y: { type: "log", domain },
      marks: errorMarks(rows, massOf, truthOf, domain[0]),
    }),
    panel({
      ...size,
      heading: "points at which the bands are evaluated",
      left: edgePx + ticksPx - 14 + 372,
      y: { type: "log", domain: counts },
      marks: [
        ...lineMarks({ rows, x: massOf, y: needed, colour: orange, dashed: true }),
        ...lineMarks({ rows, x: massOf, y: (row) => row.samples, colour: blue }),
        Plot.text([rows[3]], {
          x: massOf,
          y: needed,
          text: () => "plain mesh of step D/2",
          dx: -8,
          dy: -8,
          textAnchor: "end",
          fill: orange,
        }),
        Plot.text([rows[3]], {
          x: massOf,
          y: (row) => row.samples,
          text: () => "refined, samples",
          dy: 16,
          fill: blue,
        }),
      ],
    }),
  ];
  return picture({
    title: "Massive Dirac point at 0 K, level in the gap",
    key: errorKey,
    widthPx: 760,
    heightPx: 372,
    panels,
  });
}

function layerPicture({ rows }) {
  const levels = [...new Set(rows.map(({ levelEv }) => levelEv))];
  const meshes = [...new Set(rows.map(({ mesh }) => mesh))];
  const truthOf = (row) => row.truth;
  const floor = 1e-7;
  const shown = (error) => Math.max(error, floor);
  const errors = rows.flatMap(({ value, plain, truth, bar }) =>
    [Math.abs(value - truth), Math.abs(plain - truth), bar].map(shown),
  );
  const domain = decadeRange(errors);
  const panels = levels.map((level, at) => {
    const mine = rows
      .filter(({ levelEv }) => levelEv === level)
      .map((row) => ({
        ...row,
        bar: shown(row.bar),
        value: row.truth + shown(Math.abs(row.value - row.truth)),
        plain: row.truth + shown(Math.abs(row.plain - row.truth)),
      }));
    return panel({
      heading: `level ${String(level).replace("-", "−")} eV`,
      left: edgePx + ticksPx - 14 + (at % 3) * 244,
      top: 104 + Math.floor(at / 3) * 262,
      widthPx: 192,
      heightPx: 190,
      x: { type: "log", domain: [9, 45], ticks: meshes, format: String },
      y: { type: "log", domain },
      marks: errorMarks(mine, (row) => row.mesh, truthOf, domain[0]),
      xLabel: "stored mesh",
    });
  });
  const said = textLine("orbital:xy:z, error in e/2π; errors below 10⁻⁷ stand on the lower edge", edgePx, 68, {
    sizePx: 11,
    colour: tone.faint,
  });
  return picture({
    title: "s and p layer whose p bands touch, kT = 0.05 eV: error against the stored mesh",
    key: errorKey,
    widthPx: 760,
    heightPx: 600,
    panels: [said, ...panels],
  });
}

/** Draws whatever the results hold. */
export function drawPictures(results, directory) {
  const drawings = { gold: goldPicture, curve: curvePicture, dirac: diracPicture, layer: layerPicture };
  for (const [name, draw] of Object.entries(drawings))
    if (results[name]) writeFileSync(join(directory, `${name}.svg`), draw(results[name]));
}
