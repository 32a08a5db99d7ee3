// series-csv.ts: what does series.csv look like?
import { stringify } from "csv-stringify/sync";
import type { SeriesPeak, SeriesPoint, SeriesResult } from "../studies/series-result.js";
import { csvNumber, heading } from "./csv.js";

/**
 * `series.csv`: one row for each response, temperature and grid, at each fixed doping (`of` = "doping") and at each followed peak (`of`
 * = "peak", `track` counts from 1, highest first). "NaN" where there is no number; a grid without the peak has no row.
 */
export function seriesCsv(result: SeriesResult): string {
  const columns = [
    "response",
    "unit",
    "of",
    "track",
    "temperature_K",
    heading(result.tag),
    "doping_per_cell",
    `doping_${result.density_unit}`,
    "level_eV",
    "value",
    "error",
    "width_eV",
    "resolved",
  ];
  const numbers = ({ tag, doping_per_cell, doping_density, level_eV, value, error }: SeriesPoint): string[] =>
    [tag, doping_per_cell, doping_density, level_eV, value, error].map((each) => csvNumber(each ?? Number.NaN));
  const peakRow = (peak: SeriesPeak): string[] => [
    ...numbers(peak),
    csvNumber(peak.width_eV),
    peak.resolved ? "yes" : "no",
  ];
  const rows = result.responses.flatMap(({ name, unit, at_dopings, peaks }) => [
    ...at_dopings.flatMap(({ temperature_K, points }, at) =>
      points.map((point) => [
        heading(name),
        unit,
        "doping",
        String(1 + Math.floor(at / result.temperature_K.length)),
        csvNumber(temperature_K),
        ...numbers(point),
        "NaN",
        "",
      ]),
    ),
    ...result.temperature_K.flatMap((kelvin) =>
      peaks
        .filter(({ temperature_K }) => temperature_K === kelvin)
        .flatMap(({ points }, track) =>
          points
            .filter((point) => point !== null)
            .map((point) => [heading(name), unit, "peak", String(track + 1), csvNumber(kelvin), ...peakRow(point)]),
        ),
    ),
  ]);
  return stringify([columns, ...rows]);
}
