// verdicts.ts: between which levels is a value good enough, and which mesh would be needed where it is not?
import type { Bounds } from "./convergence.js";

/** `plain`: the plain sum is good enough; `refined`: only the refined value is; `neither`; `unknown`: nothing tells an error. */
export type Status = "plain" | "refined" | "neither" | "unknown";

/** A run of neighbouring levels with one verdict. Errors are parts of the scale, at two bars; NaN where nothing tells. */
export interface Verdict {
  /** Indices of the first and the last level. */
  readonly first: number;
  readonly last: number;
  readonly status: Status;
  /** Largest within the run. */
  readonly plainError: number;
  readonly refinedError: number;
  /** Times as many divisions as the finest mesh has for the worst level of the run; 1 where it is good enough, undefined where none can be named. */
  readonly plainFactor: number | undefined;
  readonly refinedFactor: number | undefined;
  /** The refined value lacks samples, not mesh points. */
  readonly samplesWanted: boolean;
}

export interface VerdictInput {
  /** What a bound is measured against: the response's largest value in the window. */
  readonly scale: number;
  /** Wanted error as a part of the scale. */
  readonly target: number;
  readonly plain: Bounds;
  readonly refined: Bounds | undefined;
  /** Standard bars from sampling, by level; empty without refined values. */
  readonly samplingBar: readonly number[];
}

/** Slower falls than this are none: no mesh that could be named follows from them. */
const slowestRate = 0.5;
/** Faster falls are not trusted beyond the meshes that showed them. */
const fastestRate = 4;
/** No mesh more than this many times as dense is named. */
const mostFactor = 20;

/** Times as many divisions as bring an error down to the wanted one. */
export function meshFactor(error: number, wanted: number, rate: number): number | undefined {
  if (!Number.isFinite(error)) return undefined;
  if (error <= wanted) return 1;
  if (rate < slowestRate) return undefined;
  const factor = (error / wanted) ** (1 / Math.min(rate, fastestRate));
  return factor > mostFactor ? undefined : factor;
}

function statusAt({ scale, target, plain, refined }: VerdictInput, level: number): Status {
  const wanted = target * scale;
  const errors = [plain.bound[level], refined?.bound[level] ?? Number.NaN];
  if (errors[0] <= wanted) return "plain";
  if (errors[1] <= wanted) return "refined";
  return errors.some(Number.isFinite) ? "neither" : "unknown";
}

const worse: Readonly<Record<Status, number>> = { plain: 0, refined: 1, neither: 2, unknown: 3 };

/**
 * Good runs narrower than `least` levels between worse ones are taken for worse: an error that passes through zero there does not mean
 * that the value is known. The other way round nothing is smoothed away.
 */
export function runsOf(statuses: readonly Status[], least: number): { first: number; last: number; status: Status }[] {
  const settled = [...statuses];
  for (let again = true; again; ) {
    again = false;
    for (const run of runs(settled)) {
      if (run.last - run.first + 1 >= least) continue;
      const beside = [settled[run.first - 1], settled[run.last + 1]].filter((status) => status !== undefined);
      if (beside.length === 0 || beside.some((status) => worse[status] <= worse[run.status])) continue;
      const [next] = [...beside].sort((a, b) => worse[a] - worse[b]);
      settled.fill(next, run.first, run.last + 1);
      again = true;
      break;
    }
  }
  return runs(settled);
}

function runs(statuses: readonly Status[]): { first: number; last: number; status: Status }[] {
  const found: { first: number; last: number; status: Status }[] = [];
  for (const [level, status] of statuses.entries()) {
    const open = found[found.length - 1];
    if (open?.status === status) open.last = level;
    else found.push({ first: level, last: level, status });
  }
  return found;
}

/** Largest of the factors; undefined where one of them cannot be named. */
const largest = (factors: readonly (number | undefined)[]): number | undefined =>
  factors.some((factor) => factor === undefined) ? undefined : Math.max(...(factors as number[]));

/** Verdicts that cover all levels, in order. */
export function verdictsOf(input: VerdictInput): Verdict[] {
  const { scale, target, plain, refined, samplingBar } = input;
  const wanted = target * scale;
  const statuses = plain.bound.map((_, level) => statusAt(input, level));
  const least = Math.max(2, Math.round(statuses.length / 40));
  return runsOf(statuses, least).map(({ first, last, status }): Verdict => {
    const levels = Array.from({ length: last - first + 1 }, (_, i) => first + i);
    const most = (bound: readonly number[] | undefined): number =>
      bound === undefined ? Number.NaN : Math.max(...levels.map((level) => bound[level])) / scale;
    const factor = (bounds: Bounds | undefined): number | undefined =>
      bounds && largest(levels.map((level) => meshFactor(bounds.bound[level], wanted, bounds.rates[level].rate)));
    return {
      first,
      last,
      status,
      plainError: most(plain.bound),
      refinedError: most(refined?.bound),
      plainFactor: factor(plain),
      refinedFactor: factor(refined),
      samplesWanted: refined !== undefined && levels.some((level) => 2 * samplingBar[level] > wanted),
    };
  });
}
