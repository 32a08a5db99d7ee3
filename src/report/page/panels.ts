// panels.ts: which panels stand one below another for what is shown?
import { plain } from "../numbers.js";
import { quantityWords } from "../quantities.js";
import { unitInPicture } from "../svg/lettering.js";
import { type Curve, type PanelDot, type PanelFacts, panelFigure } from "./chart.js";
import { markedPeaks } from "./marked-peaks.js";
import { momentPairs, ratioOf, sumOf } from "./moment-pairs.js";
import type { Curves, Shown, Source } from "./state.js";

/** Peaks with a label in the drawing; the table holds the others. */
const labelled = 3;

type Content = Pick<PanelFacts, "words" | "name" | "unit" | "curve" | "dots" | "heightPx">;

/** Places along the axis for every level. */
export const placesOf = ({ result }: Source, curves: Curves, axis: Shown["axis"]): readonly number[] =>
  axis === "level" ? result.level_eV : curves.dopings.perCell;

/** The ends of the axis; never the same. */
export function domainOf(places: readonly number[]): readonly [number, number] {
  const [first, last] = [places[0], places[places.length - 1]];
  return last > first ? [first, last] : [first - 0.5, first + 0.5];
}

function dotsOf(source: Source, curves: Curves, response: number, axis: Shown["axis"]): PanelDot[] {
  return markedPeaks(source, curves, response).map((peak, at) => ({
    x: axis === "level" ? peak.levelEv : peak.dopingPerCell,
    value: peak.value,
    resolved: peak.resolved,
    label: at < labelled && peak.resolved ? plain(peak.value, 4) : "",
  }));
}

type BesideOf = (row: (of: Curves) => readonly number[]) => Partial<Curve>;

/** The same quantity at the temperature drawn beside. */
function besideOf(source: Source, { beside, axis }: Shown): BesideOf {
  if (beside === undefined) return () => ({});
  const other = source.at(source.result.temperature_K[beside]);
  return (row) => ({ beside: { x: placesOf(source, other, axis), value: row(other) } });
}

function contents(source: Source, curves: Curves, shown: Shown): Content[] {
  const { responses, sampling } = source.result;
  const beside = besideOf(source, shown);
  const plainSum = sampling.method !== "points" && curves.points !== undefined;
  const heightPx = shown.responses.length > 4 ? 130 : 180;
  const panels = shown.responses.map((r): Content => {
    const { name, unit } = responses[r];
    const points = plainSum ? { points: curves.points?.[r] } : {};
    const curve = { value: curves.value[r], error: curves.error[r], ...points, ...beside((of) => of.value[r]) };
    const dots = dotsOf(source, curves, r, shown.axis);
    return { words: quantityWords(name), name, unit: unitInPicture(unit), curve, dots, heightPx };
  });
  const pairs = momentPairs(source.result).filter(
    ({ spin, orbital }) => shown.responses.includes(spin) && shown.responses.includes(orbital),
  );
  for (const pair of pairs) {
    const sum = { ...sumOf(curves, pair), ...beside((of) => sumOf(of, pair).value) };
    const ratio = { ...ratioOf(curves, pair), ...beside((of) => ratioOf(of, pair).value) };
    const names = `spin:${pair.component}, orbital:${pair.component}`;
    panels.push(
      { words: "Spin plus orbital", name: names, unit: unitInPicture(pair.unit), curve: sum, dots: [], heightPx: 110 },
      { words: "Spin over orbital", name: names, unit: "", curve: ratio, dots: [], heightPx: 110 },
    );
  }
  const states = { value: curves.states, ...beside((of) => of.states) };
  const electrons = { value: curves.doping, ...beside((of) => of.doping) };
  panels.push(
    { words: "Density of states", name: "", unit: "states/eV per cell", curve: states, dots: [], heightPx: 90 },
    { words: "Added electrons", name: "", unit: "electrons per cell", curve: electrons, dots: [], heightPx: 90 },
  );
  return panels;
}

/** The figures of what is shown, `widthPx` wide. */
export function panelsOf(source: Source, curves: Curves, shown: Shown, widthPx: number): HTMLElement[] {
  const x = placesOf(source, curves, shown.axis);
  const domain = domainOf(x);
  const all = contents(source, curves, shown);
  const name =
    shown.axis === "level"
      ? "Level relative to the reference (Fermi) level, in eV"
      : "Doping: added electrons per cell";
  return all.map((content, at) =>
    panelFigure({ ...content, x, domain, axisName: at === all.length - 1 ? name : undefined, widthPx }),
  );
}
