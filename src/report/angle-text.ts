// angle-text.ts: what does `angle` say in words and tables, on a terminal?
import type {
  AngleResponse,
  AngleResult,
  AngleRow,
  MeasuredRow,
  ScatteringRow,
  SeriesResult,
} from "../studies/angle-result.js";
import { cleanLine } from "./clean.js";
import { plain, withError } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

const right = (heading: string): Column => ({ heading, align: "right" });
const left = (heading: string): Column => ({ heading, align: "left" });

/** Numbers of resistivity as people write them: uohm cm, or for a layer ohm. */
const shownUnit = ({ resistivity_unit: unit }: AngleResult) =>
  unit === "ohm m" ? { word: "uohm cm", factor: 1e8 } : { word: "ohm", factor: 1 };

const resistivityWords = (result: AngleResult, value: number, error: number | null): string => {
  const { factor } = shownUnit(result);
  return error === null || error === 0 ? plain(value * factor, 5) : withError(value * factor, error * factor);
};

const angleName = (response: string): string => {
  const [carrier, what] = cleanLine(response).split(":");
  return `${carrier === "charge" ? "anomalous" : carrier} Hall angle${what === "hall" ? "" : ` (${cleanLine(response)})`}`;
};

const percent = (part: number): string => `${plain(100 * part, 3)}%`;

/** The row that the sentence tells of: nearest to a room's temperature. */
const toldRow = (rows: readonly AngleRow[]): AngleRow =>
  rows.reduce((best, row) => (Math.abs(row.temperature_K - 300) < Math.abs(best.temperature_K - 300) ? row : best));

function headline(result: AngleResult, response: AngleResponse): string {
  const row = toldRow(response.rows);
  const unit = cleanLine(response.unit);
  const formula = response.multiplier === 2 ? "(2e/hbar) sigma / sigma_xx" : "sigma_xy / sigma_xx";
  return (
    `At ${plain(row.temperature_K, 4)} K the intrinsic ${angleName(response.name)} is ${withError(row.angle, row.angle_error)}, ` +
    `or ${percent(row.angle)}: ${cleanLine(response.name)} of ${withError(row.conductivity, row.conductivity_error)} ${unit} against ` +
    `${resistivityWords(result, row.resistivity, row.resistivity_error)} ${shownUnit(result).word}, as ${formula}.`
  );
}

/** No metal scatters more seldom, 1 ns: a longer time means that the level has next to no carriers of its own. */
const longestTauFs = 1e6;

/** Is there a Fermi surface at the level at all, as far as the bar can tell? */
const conducts = ({ drude, drude_error: error, tau_fs: tau }: ScatteringRow): boolean =>
  drude > 2 * (Number.isFinite(error) ? error : 0) && tau < longestTauFs;

const tauWords = (row: ScatteringRow): string => (conducts(row) ? withError(row.tau_fs, row.tau_error_fs) : "n/a");

/** Below this mean free path, a few lattice constants, bands are too blurred for the clean limit. */
const shortestPathNm = 1;

function scatteringWords(result: AngleResult): string {
  const [first] = result.scattering;
  const row = result.scattering.reduce(
    (a, b) => (Math.abs(b.temperature_K - 300) < Math.abs(a.temperature_K - 300) ? b : a),
    first,
  );
  if (!conducts(row) && row.drude > 0 && row.tau_fs < longestTauFs)
    return (
      `Caution: the Drude weight is not known well enough to tell a scattering time: ${withError(row.drude, row.drude_error)} ` +
      `${result.resistivity_unit === "ohm m" ? "(S/m)/s" : "S/s"}. A denser mesh or a smaller --accuracy makes it surer.`
    );
  if (!conducts(row))
    return (
      "Caution: the Drude weight is next to nothing: the level lies in a gap or at its edge, the resistivity says nothing of scattering in " +
      "these bands, and the angle means little."
    );
  const caution =
    row.mean_free_path_nm < shortestPathNm
      ? " Caution: that is a few lattice constants at most; the intrinsic value is one of the clean limit, and so dirty a metal may fall below it."
      : "";
  return (
    `By the Drude weight of the same pass, ${plain(row.drude, 4)} ${result.resistivity_unit === "ohm m" ? "(S/m)/s" : "S/s"}, carriers scatter every ` +
    `${withError(row.tau_fs, row.tau_error_fs)} fs (hbar/tau ${plain(1000 * row.hbar_over_tau_eV, 3)} meV, mean free path about ${plain(row.mean_free_path_nm, 2)} nm).${caution}`
  );
}

function angleTable(result: AngleResult): string {
  const rows = result.responses.flatMap((response) =>
    response.rows.map((row, i) => [
      i === 0 ? cleanLine(response.name) : "",
      i === 0 ? cleanLine(response.unit) : "",
      plain(row.temperature_K, 5),
      resistivityWords(result, row.resistivity, row.resistivity_error),
      withError(row.conductivity, row.conductivity_error),
      withError(row.angle, row.angle_error),
      tauWords(result.scattering[i]),
    ]),
  );
  return table(rows, [
    left("response"),
    left("unit"),
    right("T (K)"),
    right(shownUnit(result).word),
    right("intrinsic"),
    right("angle"),
    right("tau (fs)"),
  ]);
}

const signedEv = (value: number): string => `${value > 0 ? "+" : ""}${plain(value, 2)} eV`;

/** What the comparison of one measured value says. */
export function verdictWords(row: MeasuredRow, shiftEv: number): string {
  const allowed = `+-${plain(shiftEv)} eV`;
  switch (row.verdict) {
    case "agrees":
      return "agrees with the intrinsic value";
    case "level":
      return `intrinsic if the level lies at ${signedEv(row.shift_eV ?? 0)}`;
    case "larger":
      return `larger by ${plain(row.factor ?? Number.NaN, 3)} than any level within ${allowed} gives: look for impurity scattering`;
    case "smaller":
      return `smaller, ${plain(row.factor ?? Number.NaN, 2)} of the least within ${allowed}: look for lost signal or a dirty metal`;
    case "sign":
      return `of the other sign at every level within ${allowed}: check signs, then scattering`;
  }
}

function measuredTable(result: AngleResult): string {
  if (result.measured.length === 0) return "";
  const rows = result.measured.map((row) => [
    cleanLine(row.label) || `line ${row.line}`,
    cleanLine(row.response),
    plain(row.temperature_K, 5),
    row.resistivity === null ? "" : resistivityWords(result, row.resistivity, row.resistivity_error),
    row.error === null ? plain(row.value, 4) : withError(row.value, row.error),
    withError(row.intrinsic, row.intrinsic_error),
    verdictWords(row, result.shift_eV),
  ]);
  return table(rows, [
    left("measured"),
    left("response"),
    right("T (K)"),
    right(shownUnit(result).word),
    right("value"),
    right("intrinsic"),
    left("reading"),
  ]);
}

const constantWords: Record<SeriesResult["constant"], string> = {
  conductivity: "The conductivity keeps still and the angle does not: the intrinsic part (or side jump) leads.",
  angle: "The angle keeps still and the conductivity does not: skew scattering leads.",
  neither:
    "Neither the conductivity nor the angle keeps still: several mechanisms, or a scatter larger than the errors say.",
  undecided:
    "Conductivity and angle cannot be told apart: the resistivities span too little, or the values scatter too much.",
};

function seriesWords(result: AngleResult, series: SeriesResult): string[] {
  const response = result.responses.find(({ name }) => name === series.response) as AngleResponse;
  const unit = cleanLine(response.unit);
  const opening =
    `Series of ${series.rows} measured ${cleanLine(series.response)}, resistivities over a factor of ${plain(series.span, 3)}: conductivity ` +
    `${withError(series.conductivity, series.conductivity_error)} ${unit} (spread ${percent(series.conductivity_spread)}), angle ` +
    `${withError(series.angle, series.angle_error)} (spread ${percent(series.angle_spread)}). ${constantWords[series.constant]}`;
  const { scaling } = series;
  if (scaling === null)
    return [opening, "The fit rho_H = a rho_0 + b rho^2 is not possible: rho_0/rho^2 does not vary."];
  const row = toldRow(response.rows);
  const quality =
    scaling.chi2_per_freedom === null ? "" : `, chi^2 ${plain(scaling.chi2_per_freedom, 2)} per degree of freedom`;
  const fit =
    `Fit rho_H = a rho_0 + b rho^2 (Tian, Ye, Jin 2009; rho_0: ${scaling.residual}): skew angle ${withError(scaling.skew_angle, scaling.skew_angle_error)}, ` +
    `part without scattering ${withError(scaling.intrinsic, scaling.intrinsic_error)} ${unit}${quality}; computed intrinsic ` +
    `${withError(row.conductivity, row.conductivity_error)} at ${plain(row.temperature_K, 4)} K.`;
  return [opening, fit];
}

const legend = "0.0424(9) means 0.0424 with one bar of 0.0009, resistivity and computation together.";

/** The whole result as text of lines of about `width` columns, with a final line end. */
export function angleText(result: AngleResult, options: { width?: number } = {}): string {
  const width = Math.max(80, options.width ?? 96);
  const lines = (texts: readonly string[]): string => texts.map((text) => wrapped(text, width)).join("\n");
  const title = cleanLine(result.grid.title);
  const parts = [
    title === "" ? "" : lines([`${title}.`]),
    ...result.responses.map((response) => lines([headline(result, response)])),
    lines([scatteringWords(result)]),
    angleTable(result),
    measuredTable(result),
    ...result.series.map((series) => lines(seriesWords(result, series))),
    lines([legend]),
    lines(result.notes.map((note) => `Note: ${cleanLine(note)}`)),
  ];
  return `${parts.filter((part) => part !== "").join("\n\n")}\n`;
}
