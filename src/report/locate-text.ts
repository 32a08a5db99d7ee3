// locate-text.ts: what does `locate` say in words and tables, on a terminal?
import type { LocatedCell, LocatedResponse, LocateResult, Overlap } from "../studies/locate-result.js";
import { cleanLine } from "./clean.js";
import { grouped, plain, withError } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

const pairsShown = 6;
/** Groups of cells that are alike. */
const cellsShown = 8;
/** Contributions that differ by less than this part of themselves are alike. */
const alike = 0.01;
/** A value, or a pair's part, below this share of all contributions is what round-off leaves of contributions that cancel. */
const cancelled = 1e-9;
/** Contributions against the value's sign that are told as a matter of its own, in parts of all magnitudes. */
const cancelling = 0.02;

const right = (heading: string): Column => ({ heading, align: "right" });
const left = (heading: string): Column => ({ heading, align: "left" });

/** A share in percent, never "0%" for what is not nothing. */
export const percent = (share: number): string => `${plain(100 * share, Math.abs(share) > 0.0995 ? 3 : 2)}%`;

/** Bands of a set: "7", "10-11". */
export function setWords(sets: LocateResult["sets"], set: number): string {
  const bands = sets[set] ?? [];
  return bands.length < 2 ? String(bands[0] ?? "?") : `${bands[0]}-${bands[bands.length - 1]}`;
}

const level = (levelEv: number): string => `${levelEv > 0 ? "+" : ""}${plain(levelEv, 4)} eV`;

/** Energies in eV, meV or ueV. */
const gap = (gapEv: number): string => {
  if (!Number.isFinite(gapEv)) return "none";
  if (gapEv >= 0.1) return `${plain(gapEv, 3)} eV`;
  return gapEv >= 1e-4 ? `${plain(1e3 * gapEv, 3)} meV` : `${plain(1e6 * gapEv, 3)} ueV`;
};

function opening(result: LocateResult): string {
  const { grid, sampling } = result;
  const title = cleanLine(grid.title);
  const patched = sampling.patches > 0 ? `, ${grouped(sampling.patches)} cells replaced by patches` : "";
  return (
    `${title === "" ? "" : `${title}: `}where the responses at ${level(result.level_eV)} from the reference level (${plain(result.reference_eV)} eV) ` +
    `and ${plain(result.temperature_K)} K come from. Mesh ${grid.divisions.slice(0, grid.periodic).join(" x ")}, ${grid.bands} bands; method ${sampling.method}${patched}.`
  );
}

/** The answer for one response. */
export function answer(result: LocateResult, response: LocatedResponse): string {
  const { value, error, positive, negative, concentration, pairs } = response;
  const [name, unit] = [cleanLine(response.name), cleanLine(response.unit)];
  const start = `${name} is ${withError(value, error)} ${unit}.`;
  const all = positive - negative;
  if (response.vanishes) return `${start} No place in the zone contributes to it at this level (more than round-off).`;
  const most = concentration.find(({ share }) => share === 0.8) ?? concentration[0];
  const part = `${percent(most.zone)} of the zone makes ${percent(most.share)}`;
  if (Math.abs(positive + negative) < cancelled * all)
    return `${start} Contributions of both signs cancel, ${plain(positive, 4)} and ${plain(negative, 4)}; ${part} of them, sizes added.`;
  const against = Math.min(positive, -negative) / all;
  const mixed = against > cancelling;
  const where = mixed
    ? `${part} of all contributions, sizes added; they are of both signs, ${plain(positive, 4)} and ${plain(negative, 4)}, and this part gives ${plain(most.net, 4)} net.`
    : `${part} of it.`;
  const [first] = pairs;
  const pair =
    first === undefined || Math.abs(first.contribution) < cancelled * all
      ? ""
      : ` The pair of bands ${setWords(result.sets, first.lower)} and ${setWords(result.sets, first.upper)} gives most, ${plain(first.contribution, 4)}.`;
  return `${start} ${where}${pair}`;
}

/** Pairs that give more than round-off. */
const pairsOf = ({ pairs, positive, negative }: LocatedResponse): LocatedResponse["pairs"] =>
  pairs.filter(({ contribution }) => Math.abs(contribution) >= cancelled * (positive - negative));

function pairTable(result: LocateResult, response: LocatedResponse): string {
  const { value } = response;
  const rows = pairsOf(response)
    .slice(0, pairsShown)
    .map(({ lower, upper, contribution, cumulated }) => [
      `${setWords(result.sets, lower)} / ${setWords(result.sets, upper)}`,
      plain(contribution, 4),
      plain(cumulated, 4),
      value === 0 ? "" : percent(cumulated / value),
    ]);
  return table(rows, [left("bands"), right("contribution"), right("summed"), right("of the value")]);
}

/** Cells in a row of the ranking that give as much through the same bands: as a rule images of each other under the crystal's symmetry. */
function alikeCells(cells: readonly LocatedCell[]): LocatedCell[][] {
  const groups: LocatedCell[][] = [];
  for (const cell of cells) {
    const [first] = groups.at(-1) ?? [];
    const same =
      first !== undefined &&
      Math.abs(cell.contribution - first.contribution) <= alike * Math.abs(first.contribution) &&
      cell.pair.lower === first.pair.lower &&
      cell.pair.upper === first.pair.upper;
    if (same) groups[groups.length - 1].push(cell);
    else groups.push([cell]);
  }
  return groups;
}

function cellTable(result: LocateResult, { cells }: LocatedResponse): string {
  const axes = [0, 1, 2].slice(0, result.grid.periodic);
  const place = (k: LocatedCell["k"]): string => axes.map((j) => plain(k[j], 3)).join(" ");
  const rows = alikeCells(cells)
    .slice(0, cellsShown)
    .map((group) => {
      const [{ k, contribution, hottest, pair }, last] = [group[0], group[group.length - 1]];
      return [
        String(group.length),
        plain(contribution, 3),
        plain(last.cumulated, 4),
        percent(last.zone),
        place(k),
        place(hottest.k),
        gap(hottest.gap_eV),
        `${setWords(result.sets, pair.lower)} / ${setWords(result.sets, pair.upper)}`,
      ];
    });
  return table(rows, [
    right("cells"),
    right("each"),
    right("summed"),
    right("zone"),
    left("one is at k"),
    left("hottest at k"),
    right("gap there"),
    left("most by bands"),
  ]);
}

const grades: readonly (readonly [least: number, words: string])[] = [
  [0.75, "largely the same"],
  [0.45, "partly the same"],
  [0, "mostly different"],
];
const graded = (part: number): string => (grades.find(([least]) => part >= least) ?? grades[2])[1];

const signWords = (cosine: number): string =>
  Math.abs(cosine) < 0.3 ? "signs unrelated" : cosine > 0 ? "signs alike" : "signs opposite";

/** Whether two responses come from the same crossings. */
export function overlapWords({ a, b, ...each }: Overlap): string {
  const cells =
    `${cleanLine(a)} and ${cleanLine(b)} come from ${graded(each.cells_common)} cells ` +
    `(${percent(each.cells_common)} in common, ${signWords(each.cells_cosine)}: cosine ${cosine(each.cells_cosine)})`;
  if (each.pairs_common === 0) return `${cells}; no pair of bands gives anything net to both.`;
  return `${cells} and ${graded(each.pairs_common)} pairs of bands (${percent(each.pairs_common)} in common, cosine ${cosine(each.pairs_cosine)}).`;
}

/** To two decimals. */
const cosine = (value: number): string => String(Math.abs(value) < 0.005 ? 0 : Number(value.toFixed(2)));

/** The text of a location; `width` in columns. Ends with a newline. */
export function locateText(result: LocateResult, { width }: { readonly width: number }): string {
  const blocks = result.responses.flatMap((response) => [
    wrapped(answer(result, response), width),
    ...(response.vanishes || pairsOf(response).length === 0 ? [] : [pairTable(result, response)]),
    ...(response.vanishes ? [] : [cellTable(result, response)]),
  ]);
  const overlap = result.overlap
    .filter((each) => each.cells_common > 0)
    .map((each) => wrapped(overlapWords(each), width));
  const paragraphs = [
    wrapped(opening(result), width),
    ...blocks,
    ...overlap,
    result.notes.map((note) => wrapped(`- ${cleanLine(note)}`, width)).join("\n"),
  ];
  return `${paragraphs.join("\n\n")}\n`;
}
