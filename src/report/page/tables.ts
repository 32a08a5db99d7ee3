// tables.ts: what is told in numbers: the read-out at the cursor, and the peaks?
import { plain, withError } from "../numbers.js";
import { unitInPicture } from "../svg/lettering.js";
import { densityOfOne } from "./download.js";
import { element, tableElement } from "./element.js";
import { markedPeaks } from "./marked-peaks.js";
import { type Curves, type ReadOut, readAt, type Shown, type Source } from "./state.js";

const signed = (value: number, digits: number): string => `${value > 0 ? "+" : ""}${plain(value, digits)}`;
const densityUnit = ({ result }: Source): string => `per ${result.doping_density_unit.replace("per_cm", "cm^")}`;

/** Dopings below this are round-off of the counts. */
const noDoping = 1e-9;

/** Where the cursor stands, in words. */
export function placeWords(source: Source, { temperatureK }: Curves, { levelEv, dopingPerCell }: ReadOut): string {
  const place = `At ${signed(Number(levelEv.toFixed(5)), 6)} eV, ${plain(temperatureK)} K: `;
  if (Math.abs(dopingPerCell) < noDoping) return `${place}no doping`;
  const density = plain(Math.abs(dopingPerCell) * densityOfOne(source.result), 4);
  const way = dopingPerCell > 0 ? "more" : "fewer";
  return `${place}${plain(Math.abs(dopingPerCell), 5)} electrons per cell ${way} (${density} ${unitInPicture(densityUnit(source))})`;
}

/** All numbers at one level; the exact ones stand in data attributes, for tests and for scripts that read pages. */
export function readOutTable(source: Source, curves: Curves, shown: Shown, levelEv: number): HTMLTableElement {
  const read = readAt(source, curves, levelEv);
  const { responses } = source.result;
  const rows = shown.responses.map((r) => {
    const { value, error, points } = read.values[r];
    const heading = `${responses[r].name}, ${unitInPicture(responses[r].unit)}`;
    return [heading, withError(value, error), points === undefined ? "" : plain(points, 5)];
  });
  const others = [
    ["states per eV and cell", plain(read.states, 5), ""],
    ["electrons per cell", plain(read.electrons, 7), ""],
  ];
  const table = tableElement(
    placeWords(source, curves, read),
    ["quantity", "value(bar)", "plain sum"],
    [...rows, ...others],
  );
  const exact = [...shown.responses.map((r) => read.values[r].value), read.states, read.electrons];
  for (const [at, row] of [...table.tBodies[0].rows].entries())
    row.cells[1].setAttribute("data-value", String(exact[at]));
  table.setAttribute("data-level", String(levelEv));
  table.setAttribute("data-doping", String(read.dopingPerCell));
  return table;
}

/** The peaks of every shown response at the shown temperature. */
export function peaksTable(source: Source, curves: Curves, shown: Shown): HTMLElement {
  const rows = shown.responses.flatMap((r) =>
    markedPeaks(source, curves, r).map((peak) => [
      source.result.responses[r].name,
      withError(peak.value, peak.error),
      signed(Number(peak.levelEv.toFixed(4)), 4),
      plain(peak.widthEv, 2),
      Math.abs(peak.dopingPerCell) < noDoping ? "0" : signed(peak.dopingPerCell, 3),
      peak.resolved ? "" : peak.why,
    ]),
  );
  const caption = `Peaks at ${plain(curves.temperatureK)} K`;
  if (rows.length === 0) return element("p", { class: "faint" }, `${caption}: none inside the window.`);
  return tableElement(
    caption,
    ["response", "height(bar)", "level / eV", "width / eV", "doping per cell", "note"],
    rows,
  );
}
