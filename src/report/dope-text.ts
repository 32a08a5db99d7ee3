// dope-text.ts: what does `dope` say in words and tables, on a terminal?
import type { DopedPoint, DopedValue, DopePeak, DopeResponse, DopeResult } from "../studies/dope-result.js";
import { cleanLine } from "./clean.js";
import {
  carrierWords,
  densityWords,
  dopingWords,
  percent,
  signed,
  substitutedCell,
  substitutionWords,
} from "./doping-words.js";
import { plain, withError } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

/** Peaks shown of each response and temperature; the result holds all. */
const peaksShown = 4;

const roomK = 300;

/** Electrons per cell that do not move the level out of a gap. */
const hardlyAny = 1e-5;

/** A level to a tenth of a meV, with its sign. */
const levelWords = (levelEv: number): string => {
  const text = levelEv.toFixed(4);
  return Number(text) === 0 ? "0.0000" : levelEv > 0 ? `+${text}` : text;
};

const right = (heading: string): Column => ({ heading, align: "right" });
const left = (heading: string): Column => ({ heading, align: "left" });

/** A null is a level outside the window. */
const told = ({ value, error }: DopedValue): string =>
  value === null ? "outside" : withError(value, error ?? Number.NaN);

/** The doping as it is usual for this material: carriers by name where they are few. */
function amountWords(result: DopeResult, { doping }: DopePeak): string {
  if (result.carriers === "many" || doping.per_cell === 0) return dopingWords(doping, result);
  const carriers = carrierWords(doping, result);
  return Math.abs(doping.per_cell) < hardlyAny ? `hardly any doping (${carriers})` : carriers;
}

function robustWords(peak: DopePeak, unit: string): string {
  const heights = peak.at_temperatures.map((at) => `${told(at)} at ${plain(at.temperature_K)} K`);
  if (heights.length === 0) return "";
  const { from_per_cell: from, to_per_cell: to } = peak.keeps_90_percent;
  const range =
    from === null && to === null
      ? "90% of it holds all over the window"
      : `90% of it holds from ${from === null ? "the low end of the window" : signed(from, 2)} to ${to === null ? "the high end of the window" : signed(to, 2)} electrons per cell`;
  return `At this doping it is ${heights.join(", ")} (${unit}); ${range}.`;
}

function peakWords(result: DopeResult, response: DopeResponse, peak: DopePeak): string {
  const [name, unit] = [cleanLine(response.name), cleanLine(response.unit)];
  const replaced = substitutionWords(peak.doping, result);
  const unsure = peak.resolved
    ? ""
    : ` This peak is unresolved: it is ${peak.unresolved_why.replace(/^does/, "one that does")}.`;
  return (
    `At ${plain(peak.temperature_K)} K ${name} peaks at ${withError(peak.value, peak.error)} ${unit}, with the level ${levelWords(peak.level_eV)} eV ` +
    `from the reference. That takes ${amountWords(result, peak)}${replaced === "" ? "" : `: ${replaced}`}. ` +
    `${robustWords(peak, unit)}${unsure}`
  );
}

/** The temperature that the sentences tell of: a room's, else the lowest asked. */
const toldK = ({ temperature_K: asked }: DopeResult): number => (asked.includes(roomK) ? roomK : asked[0]);

/** The answer for one response at one temperature. */
function headline(result: DopeResult, response: DopeResponse): string {
  const temperatureK = toldK(result);
  const name = cleanLine(response.name);
  const end = response.grows_beyond.find((each) => each.temperature_K === temperatureK);
  const beyond =
    end === undefined
      ? ""
      : `It is largest at the ${end.end} end of the window, ${withError(end.value, end.error)} ${cleanLine(response.unit)} at ${plain(end.level_eV, 4)} eV ` +
        `(${signed(end.doping_per_cell, 3)} electrons per cell), and may grow beyond it: a wider --${end.end === "low" ? "from" : "to"} shows.`;
  const [peak] = response.peaks.filter((each) => each.temperature_K === temperatureK);
  if (peak === undefined)
    return `At ${plain(temperatureK)} K ${name} has no peak inside the window. ${beyond || peaklessWords(response, temperatureK)}`;
  return `${peakWords(result, response, peak)}${beyond === "" ? "" : ` ${beyond}`}`;
}

/** Magnitudes below this, in any unit on offer, are round-off. */
const roundOff = 1e-7;

/** Why a response that does not grow towards an end has no peak. */
function peaklessWords({ largest, unit }: DopeResponse, temperatureK: number): string {
  const most = largest.find(({ temperature_K }) => temperature_K === temperatureK);
  if (most === undefined || !(Math.abs(most.value) > roundOff)) return "It is zero throughout.";
  return (
    `Its largest magnitude, ${withError(most.value, most.error)} ${cleanLine(unit)} at ${plain(most.level_eV, 4)} eV ` +
    `(${signed(most.doping_per_cell, 3)} electrons per cell), stands out by too little (see --prominence).`
  );
}

/** The peaks that the tables show. */
function shownPeaks(result: DopeResult): { name: string; peak: DopePeak }[] {
  return result.responses.flatMap(({ name, peaks }) =>
    result.temperature_K.flatMap((kelvin) =>
      peaks
        .filter(({ temperature_K }) => temperature_K === kelvin)
        .slice(0, peaksShown)
        .map((peak) => ({ name, peak })),
    ),
  );
}

function peakTable(result: DopeResult): string {
  const columns = [
    left("peak of"),
    right("T (K)"),
    right("height"),
    right("prominence"),
    right("level (eV)"),
    right("width (eV)"),
    right("electrons/cell"),
    right(densityWords(result.density_unit)),
    ...result.substitute.map((added) => right(`of ${signed(added)}`)),
    left(""),
  ];
  const rows = shownPeaks(result).map(({ name, peak }) => [
    cleanLine(name),
    plain(peak.temperature_K),
    withError(peak.value, peak.error),
    plain(peak.prominence, 3),
    levelWords(peak.level_eV),
    plain(peak.width_eV, 2),
    signed(peak.doping.per_cell, 3),
    signed(peak.doping.density, 3),
    ...peak.doping.substituted.map(substitutedCell),
    peak.resolved ? "" : "unresolved",
  ]);
  return table(rows, columns);
}

/** Heights at the doping of each peak, whatever the temperature. */
function robustTable(result: DopeResult): string {
  const columns = [
    left("at fixed doping"),
    right("electrons/cell"),
    right("90% from"),
    right("to"),
    ...result.robustness_K.flatMap((kelvin) => [right(`${plain(kelvin)} K`), right("level")]),
  ];
  const open = (perCell: number | null): string => (perCell === null ? "beyond" : signed(perCell, 2));
  const rows = shownPeaks(result)
    .filter(({ peak }) => peak.resolved)
    .map(({ name, peak }) => [
      `${cleanLine(name)}, ${plain(peak.temperature_K)} K`,
      signed(peak.doping.per_cell, 3),
      open(peak.keeps_90_percent.from_per_cell),
      open(peak.keeps_90_percent.to_per_cell),
      ...peak.at_temperatures.flatMap((at) => [told(at), at.level_eV === null ? "" : levelWords(at.level_eV)]),
    ]);
  return rows.length === 0 ? "" : table(rows, columns);
}

/** Responses at the dopings asked for. */
function dopingTable(result: DopeResult): string {
  if (result.dopings.length === 0) return "";
  const columns = [
    right("electrons/cell"),
    right(densityWords(result.density_unit)),
    ...result.substitute.map((added) => right(`of ${signed(added)}`)),
    right("T (K)"),
    right("level (eV)"),
    ...result.dopings[0].responses.map(({ name }) => right(cleanLine(name))),
  ];
  return table(result.dopings.flatMap(dopingRows), columns);
}

function dopingRows({ doping, responses }: DopedPoint): string[][] {
  return (responses[0]?.at_temperatures ?? []).map(({ temperature_K, level_eV }, t) => [
    t === 0 ? signed(doping.per_cell, 3) : "",
    t === 0 ? signed(doping.density, 3) : "",
    ...doping.substituted.map((part) => (t === 0 ? substitutedCell(part) : "")),
    plain(temperature_K),
    level_eV === null ? "outside" : levelWords(level_eV),
    ...responses.map(({ at_temperatures }) => told(at_temperatures[t])),
  ]);
}

/** One line for the stretch of everything shown: the worst, and each that goes beyond usual practice. */
function rigidBandLines(result: DopeResult): string[] {
  const peaks = shownPeaks(result).map(({ name, peak }) => ({
    what: `${cleanLine(name)} at ${plain(peak.temperature_K)} K, ${levelWords(peak.level_eV)} eV`,
    stretch: peak.rigid_band,
  }));
  const dopings = result.dopings.map(({ doping, rigid_band }) => ({
    what: `doping ${signed(doping.per_cell, 3)} per cell`,
    stretch: rigid_band,
  }));
  const all = [...peaks, ...dopings];
  if (all.length === 0) return [];
  const beyond = all.filter(({ stretch }) => stretch.caution !== "");
  const shift = Math.max(...all.map(({ stretch }) => Math.abs(stretch.level_shift_eV) || 0));
  const share = Math.max(...all.map(({ stretch }) => stretch.electrons_share));
  if (beyond.length === 0)
    return [
      `Rigid band: the level moves by up to ${plain(shift, 2)} eV and ${percent(share)} of the electrons change, within usual practice (a few tenths of an eV, a few percent).`,
    ];
  const shown = beyond
    .slice(0, peaksShown)
    .map(({ what, stretch }) => `Caution, rigid bands stretched beyond usual practice at ${what}: ${stretch.caution}.`);
  const more = beyond.length - shown.length;
  return more > 0 ? [...shown, `The same holds for ${more} more of the rows above.`] : shown;
}

function opening(result: DopeResult): string {
  const title = cleanLine(result.grid.title);
  const [from, to] = result.window_eV;
  const [least, most] = result.doping_window_per_cell;
  return (
    `${title === "" ? "" : `${title}. `}Levels from ${plain(from)} to ${plain(to)} eV about the reference hold ${signed(least, 3)} to ${signed(most, 3)} electrons per cell ` +
    `(${signed(least * result.density_of_one, 2)} to ${signed(most * result.density_of_one, 2)} ${densityWords(result.density_unit)}).`
  );
}

const legend =
  "Dopings count added electrons; the level follows the temperature so that the doping stays. 257.4(5) means 257.4 with one bar of 0.5. " +
  "Prominence: height above the saddle to higher ground. Unresolved: narrower than level step, temperature or mesh can show, or within two bars of its surroundings.";

/** The whole result as text of lines of about `width` columns, with a final line end. */
export function dopeText(result: DopeResult, options: { width?: number } = {}): string {
  const width = Math.max(80, options.width ?? 96);
  const lines = (texts: readonly string[]): string => texts.map((text) => wrapped(text, width)).join("\n");
  const shown = shownPeaks(result);
  const hidden = result.responses.reduce((sum, { peaks }) => sum + peaks.length, 0) - shown.length;
  const parts = [
    lines([opening(result)]),
    ...result.responses.map((response) => lines([headline(result, response)])),
    shown.length === 0 ? "" : peakTable(result),
    robustTable(result),
    dopingTable(result),
    lines([...(hidden > 0 ? [`${hidden} lower peaks are in the result (--json).`] : []), legend]),
    lines([...rigidBandLines(result), ...result.notes.map((note) => `Note: ${cleanLine(note)}`)]),
  ];
  return `${parts.filter((part) => part !== "").join("\n\n")}\n`;
}
