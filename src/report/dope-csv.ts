// dope-csv.ts: what does dope.csv look like?
import { stringify } from "csv-stringify/sync";
import type { DopeResult, DopingAmount } from "../studies/dope-result.js";
import { csvNumber, heading } from "./csv.js";
import { signed } from "./doping-words.js";

/**
 * `dope.csv`: one row for each response at each temperature and fixed doping: the doping of each peak (`of` = "peak", with
 * what the peak is like) and each doping asked for (`of` = "doping"). "NaN" where there is no number.
 */
export function dopeCsv(result: DopeResult): string {
  const columns = [
    "response",
    "unit",
    "of",
    "resolved",
    "peak_temperature_K",
    "peak_level_eV",
    "prominence",
    "width_eV",
    "keeps_90_percent_from_per_cell",
    "keeps_90_percent_to_per_cell",
    "doping_per_cell",
    `doping_${result.density_unit}`,
    ...result.substitute.map((added) => `substituted by ${signed(added)}`),
    "temperature_K",
    "level_eV",
    "value",
    "error",
  ];
  const amount = ({ per_cell, density, substituted }: DopingAmount): string[] =>
    [per_cell, density, ...substituted].map((each) => csvNumber(each ?? Number.NaN));
  const peaks = result.responses.flatMap(({ name, unit, peaks: all }) =>
    all.flatMap((peak) => {
      const { from_per_cell: from, to_per_cell: to } = peak.keeps_90_percent;
      const facts = [peak.temperature_K, peak.level_eV, peak.prominence, peak.width_eV, from, to];
      const itself = {
        temperature_K: peak.temperature_K,
        level_eV: peak.level_eV,
        value: peak.value,
        error: peak.error,
      };
      const others = peak.at_temperatures.filter(({ temperature_K }) => temperature_K !== peak.temperature_K);
      return [itself, ...others].map((at) => [
        heading(name),
        unit,
        "peak",
        peak.resolved ? "yes" : "no",
        ...facts.map((each) => csvNumber(each ?? Number.NaN)),
        ...amount(peak.doping),
        ...[at.temperature_K, at.level_eV, at.value, at.error].map((each) => csvNumber(each ?? Number.NaN)),
      ]);
    }),
  );
  const dopings = result.dopings.flatMap(({ doping, responses }) =>
    responses.flatMap(({ name, unit, at_temperatures }) =>
      at_temperatures.map((at) => [
        heading(name),
        unit,
        "doping",
        ...["", ...new Array<string>(6).fill("NaN")],
        ...amount(doping),
        ...[at.temperature_K, at.level_eV, at.value, at.error].map((each) => csvNumber(each ?? Number.NaN)),
      ]),
    ),
  );
  return stringify([columns, ...peaks, ...dopings]);
}
