// health-text.ts: what do the health checks of a grid say in words?
import type { InspectedHealth } from "../studies/inspect-result.js";
import { cleanLine } from "./clean.js";
import { plain } from "./numbers.js";
import { wrapped } from "./table.js";

/** A summary line, then every finding with its evidence, how it was measured, and what to change. */
export function healthLines(health: InspectedHealth, width: number): string[] {
  const findings = health.findings.flatMap(({ severity, message, evidence, measured, cure }) => [
    entry(severity === "note" ? "note" : severity === "fault" ? "fault" : "warning", message, width),
    entry("  seen", evidence, width),
    entry("  how", measured, width),
    ...(cure === "" ? [] : [entry("  change", cure, width)]),
  ]);
  return [entry("health", summary(health), width), ...findings];
}

function entry(word: string, text: string, width: number): string {
  return `  ${word}: ${wrapped(cleanLine(text), width, " ".repeat(word.length + 4)).trimStart()}`;
}

function summary(health: InspectedHealth): string {
  const { slopes_left: left, points, equations } = health;
  const slopes =
    left === null
      ? `the mesh is too coarse to compare velocities with energies (${plain(health.step_eV, 3)} eV from point to point)`
      : `velocities explain the slopes of the bands but for ${plain(100 * left, 2)}% of their squares (${points} points, ${equations} equations)`;
  return [slopes, sums(health), symmetry(health)].filter((part) => part !== "").join("; ");
}

function sums({ sums_closed: closed, sums_trusted_up_to_eV: upTo }: InspectedHealth): string {
  if (closed === true) return "sums over bands close at all bands";
  return upTo === null ? "" : `sums over bands are good to 10% up to ${plain(upTo, 5)} eV`;
}

const symmetryWords: Record<InspectedHealth["symmetry"], string> = {
  both: "time reversal and inversion are kept: the charge Hall response must vanish",
  "time reversal": "time reversal is kept, inversion is not: the charge Hall response must vanish",
  inversion: "inversion is kept, time reversal is not",
  "one of both": "E(k) = E(-k): time reversal or inversion is kept",
  neither: "E(k) differs from E(-k): neither time reversal nor inversion is kept",
  unknown: "",
};

function symmetry({
  symmetry: kept,
  pair_splitting_eV: splitting,
  degenerate_eV: degenerate,
}: InspectedHealth): string {
  const pairs =
    splitting === null
      ? ""
      : `, pairs of bands are split by up to ${plain(splitting, 2)} eV on disk (--degenerate is ${plain(degenerate)} eV by default)`;
  return `${symmetryWords[kept]}${pairs}`;
}
