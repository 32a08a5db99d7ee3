// download.ts: what do the files look like that the page gives: the shown curves as CSV, the shown picture as SVG?
import { escapeXml } from "../clean.js";
import type { Curves, Shown, Source } from "./state.js";

/** A cell, quoted where it must be; no spreadsheet takes it for a formula. */
function textCell(text: string): string {
  const safe = text.replace(/^[=+\-@]+/, "");
  return /[",\n\r]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

const numberCell = (value: number): string => (Number.isFinite(value) ? String(value) : "NaN");

/** The shown responses at the shown temperature, one row per level; the columns are those of curves.csv, and each plain mesh sum. */
export function shownCsv({ result }: Source, curves: Curves, { responses }: Shown): string {
  const perDensity = densityOfOne(result);
  const heads = responses.flatMap((r) => {
    const { name, unit } = result.responses[r];
    return [`${name} [${unit}]`, `${name} error`, ...(curves.points ? [`${name} plain sum`] : [])];
  });
  const first = ["temperature_K", "level_eV", "absolute_eV", "electrons_per_cell", "doping_per_cell"];
  const header = [...first, `doping_${result.doping_density_unit}`, "states_per_eV", ...heads].map(textCell);
  const rows = result.level_eV.map((levelEv, e) =>
    [
      curves.temperatureK,
      levelEv,
      Number((result.reference_eV + levelEv).toFixed(12)),
      curves.electrons[e],
      curves.doping[e],
      curves.doping[e] * perDensity,
      curves.states[e],
      ...responses.flatMap((r) => [
        curves.value[r][e],
        curves.error[r][e],
        ...(curves.points ? [curves.points[r][e]] : []),
      ]),
    ].map(numberCell),
  );
  return `${[header, ...rows].map((cells) => cells.join(",")).join("\n")}\n`;
}

/** The density of one carrier per cell, from the level with the largest doping. */
export function densityOfOne({ doping_per_cell: perCell, doping_density: density }: Source["result"]): number {
  const row = perCell[0];
  const at = row.reduce((best, each, i) => (Math.abs(each) > Math.abs(row[best]) ? i : best), 0);
  return row[at] === 0 ? Number.NaN : density[0][at] / row[at];
}

/** All panels one below another in one drawing, in the colours of the page as it stands. */
export function shownSvg(panels: readonly HTMLElement[], title: string, foot: string): string {
  const style = getComputedStyle(document.documentElement);
  const colours = (markup: string): string =>
    markup.replace(/var\((--[a-z]+)\)/g, (_, name: string) => style.getPropertyValue(name).trim());
  let y = 34;
  let widthPx = 0;
  const parts = panels.map((panel) => {
    const drawing = panel.querySelector("svg");
    const heading = panel.querySelector("figcaption")?.textContent ?? "";
    const under = panel.querySelector(".axis-name")?.textContent ?? "";
    const top = y + 16;
    const text = `<text x="8" y="${top}" font-size="12" fill="var(--ink)">${escapeXml(heading)}</text>`;
    if (drawing === null) {
      y = top + 20;
      return text;
    }
    const copy = drawing.cloneNode(true) as SVGSVGElement;
    const [width, height] = [Number(copy.getAttribute("width")), Number(copy.getAttribute("height"))];
    copy.setAttribute("y", String(top + 4));
    widthPx = Math.max(widthPx, width);
    y = top + 8 + height + (under === "" ? 0 : 16);
    const name =
      under === ""
        ? ""
        : `<text x="${width / 2}" y="${y - 4}" font-size="11" text-anchor="middle" fill="var(--faint)">${escapeXml(under)}</text>`;
    return text + new XMLSerializer().serializeToString(copy) + name;
  });
  const height = y + 26;
  const footer = `<text x="8" y="${y + 16}" font-size="10" fill="var(--faint)">${escapeXml(foot)}</text>`;
  const markup = `<svg xmlns="http://www.w3.org/2000/svg" width="${widthPx}" height="${height}" viewBox="0 0 ${widthPx} ${height}" font-family="Helvetica, Arial, sans-serif"><rect width="${widthPx}" height="${height}" fill="var(--paper)"/><text x="8" y="22" font-size="15" font-weight="600" fill="var(--ink)">${escapeXml(title)}</text>${parts.join("")}${footer}</svg>\n`;
  return colours(markup);
}

/** Hands a file to the person, without a request to anywhere. */
export function saveFile(name: string, type: string, text: string): void {
  const address = URL.createObjectURL(new Blob([text], { type }));
  const link = document.createElement("a");
  link.href = address;
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(address), 1000);
}
