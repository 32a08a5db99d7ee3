// explorer.ts: how do the parts that show one sweep work together: controls, panels, cursor, read-out, downloads?
import type { CurvesResult } from "../../curves/result.js";
import { plain } from "../numbers.js";
import { edges } from "./chart.js";
import { cursorControl, responseControl, temperatureControl, viewControl } from "./controls.js";
import { saveFile, shownCsv, shownSvg } from "./download.js";
import { element } from "./element.js";
import { domainOf, panelsOf, placesOf } from "./panels.js";
import { followPointer } from "./pointer.js";
import { type Curves, heldLevel, openSource, readAt, type Shown, type Source } from "./state.js";
import { peaksTable, placeWords, readOutTable } from "./tables.js";

/** Responses shown at first. */
const mostAtFirst = 6;

function firstShown({ temperature_K, responses, level_eV }: CurvesResult): Shown {
  const inside = level_eV[0] <= 0 && level_eV[level_eV.length - 1] >= 0;
  return {
    temperatureK: temperature_K[temperature_K.length - 1],
    axis: "level",
    held: { kind: "level", at: inside ? 0 : level_eV[level_eV.length >> 1] },
    responses: responses.slice(0, mostAtFirst).map((_, at) => at),
    beside: undefined,
  };
}

/** What the lines mean for what is shown. */
function legendOf({ result }: Source, { points }: Curves, shown: Shown): HTMLElement {
  const items = [["live", `${plain(shown.temperatureK)} K, with a band of one bar`]];
  if (points !== undefined && result.sampling.method !== "points") items.push(["plain", "plain mesh sum"]);
  if (shown.beside !== undefined) items.push(["beside", `${plain(result.temperature_K[shown.beside])} K`]);
  items.push(["peak", "peak; hollow: not resolved"]);
  return element(
    "p",
    { class: "legend" },
    ...items.map(([kind, words]) =>
      element("span", {}, element("i", { class: `swatch ${kind}`, "aria-hidden": "true" }), words),
    ),
  );
}

/** The places that are filled anew whenever something changes. */
function places() {
  return {
    legend: element("div", {}),
    stack: element("div", { class: "stack" }),
    cursor: element("div", { class: "cursor", "aria-hidden": "true" }),
    readOut: element("div", { class: "readout scroll", tabindex: "0", role: "region", "aria-label": "Read-out" }),
    status: element("p", { class: "unseen", role: "status" }),
    peaks: element("div", { class: "peaks scroll", tabindex: "0", role: "region", "aria-label": "Peaks" }),
  };
}

/** Buttons for the two files; `now` tells what is shown when they are pressed. */
function filesBar(source: Source, id: string, now: () => { curves: Curves; shown: Shown; panels: HTMLElement[] }) {
  const nameOf = (shown: Shown): string => `${id}-${plain(shown.temperatureK)}K`.replace(/[^\w.-]/g, "");
  const csv = element("button", { type: "button" }, "Shown curves as CSV");
  csv.addEventListener("click", () => {
    const { curves, shown } = now();
    saveFile(`${nameOf(shown)}.csv`, "text/csv", shownCsv(source, curves, shown));
  });
  const svg = element("button", { type: "button" }, "Shown picture as SVG");
  svg.addEventListener("click", () => {
    const { shown, panels } = now();
    const { grid, version } = source.result;
    const foot = `${plain(shown.temperatureK)} K; intrinsic only, rigid band; tidegauge ${version}`;
    saveFile(`${nameOf(shown)}.svg`, "image/svg+xml", shownSvg(panels, grid.title, foot));
  });
  return element("p", { class: "files" }, csv, " ", svg);
}

/** Fills `root` with everything about one sweep. `id` is unique in the page. */
export function startExplorer(root: HTMLElement, result: CurvesResult, id: string): void {
  const source = openSource(result);
  const { legend, stack, cursor, readOut, status, peaks } = places();
  let shown = firstShown(result);
  let panels: HTMLElement[] = [];
  let waiting = false;
  const curvesNow = (): Curves => source.at(shown.temperatureK);
  const held = (): number => heldLevel(curvesNow(), shown.held);
  const change = (part: Partial<Shown>): void => {
    shown = { ...shown, ...part };
    if (!waiting) requestAnimationFrame(draw);
    waiting = true;
  };
  const makers = [temperatureControl, cursorControl, viewControl, responseControl];
  const controls = makers.map((make) => make(source, id, change));
  const show = (levelEv: number): void => {
    const [low, high] = domainOf(placesOf(source, curvesNow(), shown.axis));
    const place = shown.axis === "level" ? levelEv : readAt(source, curvesNow(), levelEv).dopingPerCell;
    const widthPx = stack.clientWidth - edges.leftPx - edges.rightPx;
    cursor.style.left = `${edges.leftPx + ((place - low) / (high - low)) * widthPx}px`;
    readOut.replaceChildren(readOutTable(source, curvesNow(), shown, levelEv));
  };
  const draw = (): void => {
    waiting = false;
    panels = panelsOf(source, curvesNow(), shown, Math.max(260, stack.clientWidth));
    stack.replaceChildren(...panels, cursor);
    legend.replaceChildren(legendOf(source, curvesNow(), shown));
    for (const control of controls) control.update(shown, curvesNow());
    show(held());
    peaks.replaceChildren(peaksTable(source, curvesNow(), shown));
    root.dataset.temperature = String(shown.temperatureK);
  };
  followPointer(stack, {
    now: () => ({ curves: curvesNow(), places: placesOf(source, curvesNow(), shown.axis), axis: shown.axis }),
    over: (level) => show(level ?? held()),
    chosen: (at) => change({ held: { kind: "level", at } }),
  });
  root.addEventListener("change", () => {
    status.textContent = placeWords(source, curvesNow(), readAt(source, curvesNow(), held()));
  });
  const side = element("div", { class: "side" }, ...controls.map((control) => control.root), readOut, status);
  const files = filesBar(source, id, () => ({ curves: curvesNow(), shown, panels }));
  const main = element("div", { class: "main" }, legend, stack, peaks, files);
  root.replaceChildren(element("div", { class: "explorer" }, side, main));
  draw();
  let widthPx = stack.clientWidth;
  new ResizeObserver(() => {
    if (stack.clientWidth !== widthPx) change({});
    widthPx = stack.clientWidth;
  }).observe(stack);
}
