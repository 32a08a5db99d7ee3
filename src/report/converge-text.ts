// converge-text.ts: what does a study of convergence say in words and tables, on a terminal?
import type { ConvergeCurve, ConvergeResponse, ConvergeResult, ConvergeVerdict } from "../studies/converge-result.js";
import { cleanLine } from "./clean.js";
import { grouped, plain, withError } from "./numbers.js";
import { type Column, table, wrapped } from "./table.js";

/** [40, 40, 40] -> "40^3"; unequal divisions as a product. */
export function meshName(divisions: readonly number[]): string {
  const [first] = divisions;
  return divisions.every((n) => n === first) ? `${first}^${divisions.length}` : divisions.join(" x ");
}

/** A part as a percentage with two digits at most: 0.0042 -> "0.42%"; "?" where nothing tells. */
export function percent(part: number): string {
  if (!Number.isFinite(part)) return "?";
  if (part < 1e-6) return "under 0.0001%";
  return `${plain(100 * part, 2)}%`;
}

const span = ({ from_eV: from, to_eV: to }: ConvergeVerdict): string =>
  from === to ? `at ${plain(from, 4)} eV` : `between ${plain(from, 4)} and ${plain(to, 4)} eV`;

/** What would be needed, in words; empty where nothing can be named. */
function needWords(verdict: ConvergeVerdict, refines: boolean): string {
  const words: string[] = [];
  if (verdict.samples_wanted && refines) words.push("more samples (a smaller --accuracy, or --samples)");
  if (refines && verdict.refined_needs) words.push(`about ${meshName(verdict.refined_needs)} points with refinement`);
  if (verdict.plain_needs) words.push(`about ${meshName(verdict.plain_needs)} as a plain sum`);
  return words.length === 0
    ? "no mesh can be named: the coarser ones show no fall of the errors to go by"
    : `needs ${words.join(", or ")}`;
}

/** One verdict as a sentence without its full stop. */
export function verdictWords(verdict: ConvergeVerdict, refines: boolean): string {
  const { plain_error: sum, refined_error: refined } = verdict;
  switch (verdict.good) {
    case "plain":
      return `converged to ${percent(sum)} ${span(verdict)}, already as a plain sum${refines ? ` (refined: ${percent(refined)})` : ""}`;
    case "refined": {
      const mesh = verdict.plain_needs === null ? "" : `, and would need about ${meshName(verdict.plain_needs)}`;
      return `converged to ${percent(refined)} ${span(verdict)} with refinement; the plain sum is off by up to ${percent(sum)}${mesh}`;
    }
    case "neither": {
      const errors = refines
        ? `refined to ${percent(refined)}, the plain sum to ${percent(sum)}`
        : `to ${percent(sum)}`;
      return `not converged ${span(verdict)} (${errors}): ${needWords(verdict, refines)}`;
    }
    case "unknown":
      return `nothing tells ${span(verdict)}: the mesh contains no coarser one`;
  }
}

interface Told {
  readonly response: ConvergeResponse;
  readonly curve: ConvergeCurve;
}

const told = (result: ConvergeResult): Told[] =>
  result.responses.flatMap((response) => response.curves.map((curve) => ({ response, curve })));

const nameOf = ({ response, curve }: Told): string => `${cleanLine(response.name)} at ${plain(curve.temperature_K)} K`;

const worst = (values: readonly number[]): number => values.reduce((a, b) => (b > a || Number.isNaN(b) ? b : a), 0);

const windowWords = ({ level_eV: levels }: ConvergeResult): string =>
  levels.length === 1
    ? `at ${plain(levels[0])} eV`
    : `from ${plain(levels[0])} to ${plain(levels[levels.length - 1])} eV`;

const good = (kind: "plain" | "refined", { curve }: Told): boolean =>
  curve.vanishes || curve.verdicts.every((verdict) => verdict.good === "plain" || verdict.good === kind);

/** The answer in two sentences. */
function answer(result: ConvergeResult): string {
  const curves = told(result);
  const refines = result.sampling.method === "refine";
  const verdict = (kind: "plain" | "refined"): string => {
    const bad = curves.filter((each) => !good(kind, each));
    if (bad.length === 0) return `yes, at every level ${windowWords(result)}`;
    const most = worst(
      bad.flatMap(({ curve }) =>
        curve.verdicts.map((each) => (kind === "plain" ? each.plain_error : each.refined_error)),
      ),
    );
    const part = bad.length === curves.length ? "" : ` for ${bad.map(nameOf).join(", ")}`;
    return `not everywhere${part} (${Number.isFinite(most) ? `${percent(most)} at worst` : "at some levels nothing tells"})`;
  };
  const start = `Is ${meshName(result.meshes[0].divisions)} dense enough for ${percent(result.target)} of the largest value?`;
  return refines
    ? `${start} With refinement: ${verdict("refined")}. As a plain sum: ${verdict("plain")}.`
    : `${start} As a plain sum: ${verdict("plain")}.`;
}

function opening(result: ConvergeResult): string {
  const title = cleanLine(result.grids[0].title);
  const [densest, ...others] = result.meshes;
  const by =
    others.length === 0
      ? "no coarser mesh to compare with"
      : `compared with ${others.map(({ divisions }) => meshName(divisions)).join(", ")}${result.grids.length > 1 ? "" : ", which it contains"}`;
  return `${title === "" ? "" : `${title}: `}mesh ${meshName(densest.divisions)}, ${by}; levels ${windowWords(result)} about ${plain(result.reference_eV)} eV.`;
}

function verdictLines(result: ConvergeResult, width: number): string {
  const refines = result.sampling.method === "refine";
  return told(result)
    .map((each) => {
      const { response, curve } = each;
      const unit = cleanLine(response.unit);
      const head = `${nameOf(each)}, largest ${plain(curve.scale, 4)} ${unit}:`;
      if (curve.vanishes)
        return wrapped(`${nameOf(each)}: zero for all purposes (below ${plain(curve.scale, 2)} ${unit})`, width);
      const lines = curve.verdicts.map((verdict) => {
        const text = wrapped(verdictWords(verdict, refines), width, "    ");
        return `  - ${text.trimStart()}`;
      });
      return [head, ...lines].join("\n");
    })
    .join("\n");
}

/** Index of the level nearest to one. */
const nearest = (levels: readonly number[], level: number): number =>
  levels.reduce((best, each, at) => (Math.abs(each - level) < Math.abs(levels[best] - level) ? at : best), 0);

/** Levels shown mesh by mesh: those asked for; else the reference level, the largest value and the least sure one. */
export function shownLevels(result: ConvergeResult, curve: ConvergeCurve): number[] {
  const { level_eV: levels, chosen_level_eV: chosen } = result;
  if (chosen.length > 0) return [...new Set(chosen.map((level) => nearest(levels, level)))];
  const top = (values: readonly number[]): number =>
    values.reduce(
      (best, value, at) => (Math.abs(value) > Math.abs(values[best]) || !Number.isFinite(values[best]) ? at : best),
      0,
    );
  const inside = levels[0] <= 0 && levels[levels.length - 1] >= 0 ? [nearest(levels, 0)] : [];
  return [...new Set([...inside, top(curve.best), top((curve.refined ?? curve.plain).bound)])];
}

const meshColumns = (refines: boolean): Column[] => [
  { heading: "response", align: "left" },
  { heading: "T (K)", align: "right" },
  { heading: "level (eV)", align: "right" },
  { heading: "mesh", align: "right" },
  { heading: "plain sum", align: "right" },
  { heading: "off (%)", align: "right" },
  ...(refines
    ? ([
        { heading: "refined", align: "right" },
        { heading: "off (%)", align: "right" },
      ] as Column[])
    : []),
];

/** Values mesh by mesh at a few levels. */
function meshRows(result: ConvergeResult, each: Told): string[][] {
  const { response, curve } = each;
  if (curve.vanishes) return [];
  const refines = curve.refined !== undefined;
  const off = (value: number): string => (Number.isFinite(value) ? plain((100 * value) / curve.scale, 2) : "?");
  return shownLevels(result, curve).flatMap((level, i) =>
    result.meshes.map(({ divisions }, m) => {
      const { plain: sum, refined, plain_off: sumOff, refined_off: refinedOff } = curve.meshes[m];
      const own = m === 0;
      return [
        i === 0 && own ? cleanLine(response.name) : "",
        i === 0 && own ? plain(curve.temperature_K) : "",
        own ? plain(result.level_eV[level], 4) : "",
        meshName(divisions),
        plain(sum[level], 5),
        off(own ? curve.plain.bound[level] : sumOff[level]),
        ...(refines
          ? refined.length === 0
            ? ["", ""]
            : [
                own ? withError(refined[level], (curve.refined?.bound[level] ?? 0) / 2) : plain(refined[level], 5),
                off(own ? (curve.refined?.bound[level] ?? Number.NaN) : refinedOff[level]),
              ]
          : []),
      ];
    }),
  );
}

const middle = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];

/** How fast errors fall, in words. */
function rateWords(result: ConvergeResult): string {
  const curves = told(result).filter(({ curve }) => !curve.vanishes);
  if (curves.length === 0) return "";
  const sentence = (kind: "plain" | "refined"): string[] => {
    const bounds = curves.flatMap(({ curve }) => curve[kind] ?? []);
    if (bounds.length === 0) return [];
    const assumed = bounds.some(({ rate_from: from }) => from < 2);
    const rate = plain(middle(bounds.flatMap(({ rate: rates }) => rates)), 2);
    const subject = kind === "plain" ? "plain sums" : "refined values";
    return [
      `errors of ${subject} fall like the mesh step to the power ${rate}${assumed ? " (assumed: too few meshes tell)" : ""}`,
    ];
  };
  const words = [...sentence("plain"), ...sentence("refined")].join("; ");
  return `Rates, in the middle of what the levels show: ${words}.`;
}

function legend(result: ConvergeResult): string {
  const refines = result.sampling.method === "refine";
  const one = result.grids.length === 1;
  return (
    `"off" is in parts of the largest value: for ${meshName(result.meshes[0].divisions)} the distance within which the truth is expected about 95 times in 100, ` +
    `for coarser meshes the distance${one ? ", root mean square over all shifts and neighbouring levels," : ""} to ${refines ? "the refined value" : "the plain sum"} of the first row. ` +
    (refines
      ? "The bounds of plain sums are differences to refined values where these are surer; else extrapolated spreads."
      : "Without refinement a bound is an extrapolated spread; it can be too narrow where bands nearly touch between the points.")
  );
}

/** A study of convergence in words: the answer first, verdicts by level range, then values mesh by mesh. Lines of at most `width` characters, a final line end. */
export function convergeText(result: ConvergeResult, wanted = 96): string {
  const width = Math.max(80, wanted);
  const refines = result.sampling.method === "refine";
  const rows = told(result).flatMap((each) => meshRows(result, each));
  return `${[
    wrapped(answer(result), width),
    wrapped(opening(result), width),
    verdictLines(result, width),
    ...(rows.length > 0 ? [table(rows, meshColumns(refines)), wrapped(legend(result), width)] : []),
    [rateWords(result), `${grouped(result.sampling.samples)} samples in all.`]
      .filter((words) => words !== "")
      .map((words) => wrapped(words, width))
      .concat(result.notes.map((note) => wrapped(`Note: ${cleanLine(note)}`, width)))
      .join("\n"),
  ].join("\n\n")}\n`;
}
