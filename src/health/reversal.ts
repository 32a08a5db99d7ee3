// reversal.ts: which of time reversal and inversion does the crystal keep, how well are its pairs degenerate on disk, and what must vanish?
import type { GridFacts } from "../grid/grid.js";
import { type HealthFinding, shown } from "./finding.js";
import type { HealthPoint, PointSource } from "./lines.js";
import { setTraces } from "./traces.js";

/** What E(k), E(-k) and the traces of the moments say. */
export interface Reversal {
  /** "unknown": the mesh holds no point with its opposite, or nothing tells. */
  readonly kept: "both" | "time reversal" | "inversion" | "one of both" | "neither" | "unknown";
  /** Largest |E(k) - E(-k)|, eV; null where no opposite is stored. */
  readonly unevenEv: number | null;
  /** Largest splitting within pairs that are twofold everywhere, eV; null where bands are single. */
  readonly pairSplittingEv: number | null;
}

/** Flat index of -k; undefined where the mesh does not hold it. */
export function oppositeIndex(flat: number, { divisions, offset, periodic }: GridFacts): number | undefined {
  const index = [
    Math.floor(flat / (divisions[1] * divisions[2])),
    Math.floor(flat / divisions[2]) % divisions[1],
    flat % divisions[2],
  ];
  let out = 0;
  for (let j = 0; j < 3; j++) {
    const shift = 2 * offset[j];
    if (j < periodic && Math.abs(shift - Math.round(shift)) > 1e-9) return undefined;
    const turned =
      j < periodic ? (((-index[j] - Math.round(shift)) % divisions[j]) + divisions[j]) % divisions[j] : index[j];
    out = out * divisions[j] + turned;
  }
  return out;
}

interface Pair {
  readonly point: HealthPoint;
  readonly opposite: HealthPoint;
}

/** Points at which nothing but the crystal's own pairs should be degenerate: off the planes k = -k. */
function pairsOf(source: PointSource, flats: readonly number[]): Pair[] {
  return flats.flatMap((flat): Pair[] => {
    const opposite = oppositeIndex(flat, source.facts);
    return opposite === undefined || opposite === flat
      ? []
      : [{ point: source.point(flat), opposite: source.point(opposite) }];
  });
}

const largestOf = (values: Iterable<number>): number => {
  let largest = 0;
  for (const value of values) largest = Math.max(largest, Math.abs(value));
  return largest;
};

function unevenness({ point, opposite }: Pair): number {
  return largestOf(point.energyEv.map((e, band) => e - opposite.energyEv[band]));
}

/** Splitting within pairs (0, 1), (2, 3), ... and the typical distance of one pair to the next. */
function pairSplitting(energies: Float64Array): { within: number; between: number } {
  let within = 0;
  const between: number[] = [];
  for (let band = 0; band + 1 < energies.length; band += 2) {
    within = Math.max(within, energies[band + 1] - energies[band]);
    if (band + 2 < energies.length) between.push(energies[band + 2] - energies[band + 1]);
  }
  const sorted = between.sort((a, b) => a - b);
  return {
    within,
    between: sorted.length === 0 ? energies[energies.length - 1] - energies[0] : sorted[sorted.length >> 1],
  };
}

/** Bands whose partner lies within this of the typical distance of pairs are taken as pairs, if all do at all points. */
const pairedPart = 1e-3;

/** What a grid's points say of its symmetry, with what contradicts it. */
export function checkReversal(
  source: PointSource,
  flats: readonly number[],
  noiseEv: number,
): { reversal: Reversal; findings: HealthFinding[] } {
  const { facts } = source;
  const pairs = pairsOf(source, flats);
  if (pairs.length === 0) return { reversal: { kept: "unknown", unevenEv: null, pairSplittingEv: null }, findings: [] };
  const unevenEv = Math.max(...pairs.map(unevenness));
  const spans = pairs.map(({ point }) => point.energyEv[point.energyEv.length - 1] - point.energyEv[0]);
  const even = unevenEv <= Math.max(1e-5 * Math.max(...spans), 10 * noiseEv);
  const splittings = pairs.map(({ point }) => pairSplitting(point.energyEv));
  const twofold =
    facts.electronsPerBand === 1 &&
    facts.bands % 2 === 0 &&
    facts.bands >= 4 &&
    splittings.every(({ within, between }) => within <= pairedPart * between);
  const pairSplittingEv = twofold ? Math.max(...splittings.map(({ within }) => within)) : null;
  if (!even) {
    return { reversal: { kept: twofold ? "unknown" : "neither", unevenEv, pairSplittingEv }, findings: [] };
  }
  const parities = facts.moments.map((moment) => ({ moment, parity: parityOf(pairs, moment.name, noiseEv) }));
  const spin = parities.find(({ moment }) => moment.name === "spin" && moment.underTimeReversal === "odd")?.parity;
  const kept = twofold ? "both" : spin === "odd" ? "time reversal" : spin === "even" ? "inversion" : "one of both";
  const findings =
    kept === "time reversal" ? parities.flatMap(({ moment, parity }) => parityFindings(moment, parity)) : [];
  if (kept === "both") findings.push(...traceFindings(pairs, facts, noiseEv));
  return { reversal: { kept, unevenEv, pairSplittingEv }, findings };
}

type Parity = "odd" | "even" | "mixed" | "none";

/** How the traces of a moment over sets of bands go from k to -k. */
function parityOf(pairs: readonly Pair[], name: string, noiseEv: number): Parity {
  let [sum, difference, size] = [0, 0, 0];
  for (const { point, opposite } of pairs) {
    const here = setTraces(point.energyEv, point.moments.get(name) ?? [], noiseEv);
    const there = setTraces(opposite.energyEv, opposite.moments.get(name) ?? [], noiseEv);
    if (here.length !== there.length) continue;
    for (const [i, x] of here.entries()) {
      sum += (x + there[i]) ** 2;
      difference += (x - there[i]) ** 2;
      size += x * x + there[i] ** 2;
    }
  }
  if (size < 1e-6 * pairs.length) return "none";
  if (sum < 1e-3 * size) return "odd";
  return difference < 1e-3 * size ? "even" : "mixed";
}

function parityFindings({ name, underTimeReversal }: GridFacts["moments"][number], parity: Parity): HealthFinding[] {
  if ((parity !== "odd" && parity !== "even") || parity === underTimeReversal) return [];
  return [
    {
      id: "moment-parity",
      severity: "warn",
      message: `moments.${name} is declared ${underTimeReversal} under time reversal, but its expectation values are ${parity}`,
      evidence: `E(k) = E(-k), the spin turns round from k to -k, and ${name} ${parity === "even" ? "does not" : "does"}`,
      measured: "traces over sets of bands at sampled k and -k",
      cure: `Set underTimeReversal of arrays.moments.${name} to "${parity}".`,
    },
  ];
}

/** With time reversal and inversion together every pair of bands has no moment that is odd and axial. */
function traceFindings(pairs: readonly Pair[], facts: GridFacts, noiseEv: number): HealthFinding[] {
  return facts.moments.flatMap(({ name, kind, underTimeReversal }): HealthFinding[] => {
    if (kind !== "axial" || underTimeReversal !== "odd" || name !== "spin") return [];
    const traces = pairs.flatMap(({ point }) => setTraces(point.energyEv, point.moments.get(name) ?? [], noiseEv));
    const worst = largestOf(traces);
    if (worst < 0.02) return [];
    return [
      {
        id: "pairs-with-moment",
        severity: "warn",
        message: "every level is twofold, but its pairs carry a spin, which time reversal with inversion forbids",
        evidence: `largest trace of a spin component over a set of bands: ${shown(worst)} hbar`,
        measured: "traces over sets of degenerate bands at sampled k",
        cure: "Check that energies and spin come from the same bands and the same k points.",
      },
    ];
  });
}

/** The default degeneracy tolerance, eV: ten times what pairs are split by on disk, at least 1e-5. */
export function toleranceFor({ pairSplittingEv }: Reversal): number {
  const wanted = Math.max(1e-5, 10 * (pairSplittingEv ?? 0));
  return wanted === 1e-5 ? wanted : Number(wanted.toPrecision(2));
}

/** Energy noise on disk, eV: the last digit of 32-bit numbers of the size of these energies, or of 64-bit ones. */
export const storedNoise = (type: string, largestEv: number): number =>
  (type === "float32" ? 1.2e-7 : 4e-16) * largestEv;
