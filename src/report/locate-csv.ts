// locate-csv.ts: what do the tables of `locate` look like?
import { stringify } from "csv-stringify/sync";
import type { LocateResult } from "../studies/locate-result.js";
import { planePlaces } from "../studies/locate-where.js";
import { csvNumber, heading } from "./csv.js";
import { setWords } from "./locate-text.js";

const axes = ["1", "2", "3"];

/** `locate-cells.csv`: one row for each response and listed cell, largest magnitude first; units as in locate.json. */
export function locateCellsCsv({ responses, sets }: LocateResult): string {
  const headings = [
    "response",
    "unit",
    "rank",
    "cell",
    ...axes.map((j) => `k${j}`),
    "kx_per_angstrom",
    "ky_per_angstrom",
    "kz_per_angstrom",
    "contribution",
    "correction",
    "cumulated",
    "share_of_magnitudes",
    "share_of_zone",
    ...axes.map((j) => `hottest_k${j}`),
    "hottest_density",
    "hottest_lower_bands",
    "hottest_upper_bands",
    "hottest_gap_eV",
    "lower_bands",
    "upper_bands",
    "pair_contribution",
    "closest_gap_eV",
    ...axes.map((j) => `closest_k${j}`),
    "closest_lower_bands",
    "closest_upper_bands",
  ];
  const bands = (set: number): string => setWords(sets, set);
  const rows = responses.flatMap(({ name, unit, cells }) =>
    cells.map((cell) => [
      heading(name),
      heading(unit),
      String(cell.rank),
      String(cell.cell),
      ...[...cell.k, ...cell.k_cartesian].map(csvNumber),
      ...[cell.contribution, cell.correction, cell.cumulated, cell.share, cell.zone].map(csvNumber),
      ...[...cell.hottest.k, cell.hottest.density].map(csvNumber),
      bands(cell.hottest.lower),
      bands(cell.hottest.upper),
      csvNumber(cell.hottest.gap_eV),
      bands(cell.pair.lower),
      bands(cell.pair.upper),
      csvNumber(cell.pair.contribution),
      ...(cell.closest === null
        ? ["NaN", "NaN", "NaN", "NaN", "", ""]
        : [
            csvNumber(cell.closest.gap_eV),
            ...cell.closest.k.map(csvNumber),
            bands(cell.closest.lower),
            bands(cell.closest.upper),
          ]),
    ]),
  );
  return stringify([headings, ...rows]);
}

/** `locate-pairs.csv`: one row for each response and pair of sets of bands, largest magnitude first; they sum to the value. */
export function locatePairsCsv({ responses, sets }: LocateResult): string {
  const rows = responses.flatMap(({ name, unit, pairs }) =>
    pairs.map(({ lower, upper, contribution, correction, cumulated }, i) => [
      heading(name),
      heading(unit),
      String(i + 1),
      setWords(sets, lower),
      setWords(sets, upper),
      ...[contribution, correction, cumulated].map(csvNumber),
    ]),
  );
  return stringify([
    ["response", "unit", "rank", "lower_bands", "upper_bands", "contribution", "correction", "cumulated"],
    ...rows,
  ]);
}

/** `locate-bands.csv`: what every set of bands gives, column by column a response. */
export function locateBandsCsv({ responses, sets }: LocateResult): string {
  const rows = sets.map((_, set) => [setWords(sets, set), ...responses.map(({ by_set }) => csvNumber(by_set[set]))]);
  return stringify([["bands", ...named(responses)], ...rows]);
}

const named = (responses: LocateResult["responses"]): string[] =>
  responses.map(({ name, unit }) => heading(`${name} [${unit}]`));

/** `locate-map.csv`: the integrand at every place of the plane, row after row. */
export function locateMapCsv({ plane, responses }: LocateResult): string {
  const rows = planePlaces(plane).map((k, i) => [
    ...k.map(csvNumber),
    ...responses.map(({ map }) => csvNumber(map[Math.floor(i / plane.points)][i % plane.points])),
  ]);
  return stringify([[...axes.map((j) => `k${j}`), ...named(responses)], ...rows]);
}

/** `locate-projection.csv`: zone means along b3, one row for each (i1, i2) of the mesh; their mean is the value. */
export function locateProjectionCsv({ grid, responses }: LocateResult): string {
  const [n1, n2] = grid.divisions;
  const rows = Array.from({ length: n1 * n2 }, (_, flat) => {
    const [i1, i2] = [Math.floor(flat / n2), flat % n2];
    const k = [(i1 + grid.offset[0]) / n1, (i2 + grid.offset[1]) / n2];
    return [...k.map(csvNumber), ...responses.map(({ projection }) => csvNumber(projection[i1][i2]))];
  });
  return stringify([["k1", "k2", ...named(responses)], ...rows]);
}

/** `locate-path.csv`: along the path, the integrand of every response and the energies of all bands about the reference level. */
export function locatePathCsv({ grid, path, responses }: LocateResult): string {
  if (path === undefined) return "";
  const rows = path.k.map((k, i) => [
    ...[...k, path.length[i]].map(csvNumber),
    ...responses.map((response) => csvNumber(response.path?.[i] ?? Number.NaN)),
    ...path.energies_eV[i].map(csvNumber),
  ]);
  const bands = Array.from({ length: grid.bands }, (_, band) => `band_${band}_eV`);
  return stringify([[...axes.map((j) => `k${j}`), "length_per_angstrom", ...named(responses), ...bands], ...rows]);
}
