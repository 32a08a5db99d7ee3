// convergence.ts: how far off are the values of a mesh, judged by coarser meshes? Rates, extrapolated errors, bounds. No k points.

/** Curves of one response at one temperature on the meshes of one density. */
export interface MeshCurves {
  /** Mesh step over that of the finest mesh; 1 for the finest. */
  readonly step: number;
  /** The spread of its plain sums tells nothing, by symmetry. */
  readonly blind?: boolean;
  /** Plain sums, [shift][level]. */
  readonly plain: readonly (readonly number[])[];
  /** Refined values, [shift][level]; may be empty. */
  readonly refined: readonly (readonly number[])[];
}

/** What is known of one response at one temperature. */
export interface Evidence {
  /** Ascending in the step; the first is the finest, with a single shift. */
  readonly meshes: readonly MeshCurves[];
  /** Standard bar of the finest mesh's refined value, by level, and the part of it that comes from sampling; empty without one. */
  readonly bar: readonly number[];
  readonly samplingBar: readonly number[];
  /** How errors fall with the step where the meshes do not tell: error ~ step^order. */
  readonly plainOrder: number;
  readonly refinedOrder: number;
  /** Levels to either side over which an error is averaged: one that passes through zero does not mean certainty. */
  readonly reach: number;
}

/** error ~ step^rate. */
export interface Rate {
  readonly rate: number;
  /** Strides that showed it; with fewer than two it is an assumption. */
  readonly from: number;
}

/** What is said of one kind of value (plain or refined) on the finest mesh. */
export interface Bounds {
  /** By level: the truth is expected within this distance about 95 times in 100; NaN where nothing tells. */
  readonly bound: number[];
  /** By level. */
  readonly rates: Rate[];
}

/** Root mean square of rows over the levels within `reach` of each. */
export function smoothed(values: readonly number[], reach: number): number[] {
  return values.map((_, at) => {
    const [first, end] = [Math.max(0, at - reach), Math.min(values.length, at + reach + 1)];
    let square = 0;
    for (let i = first; i < end; i++) square += values[i] ** 2;
    return Math.sqrt(square / (end - first));
  });
}

/** Root mean square distance of some curves from one, by level, averaged over neighbouring levels. */
export function distance(curves: readonly (readonly number[])[], from: readonly number[], reach: number): number[] {
  const raw = from.map((value, level) =>
    Math.sqrt(curves.reduce((sum, curve) => sum + (curve[level] - value) ** 2, 0) / curves.length),
  );
  return smoothed(raw, reach);
}

/** Rates that are tried; beyond 12 a fall is as good as exponential. */
const rateTried = { least: 0.25, most: 12, step: 0.05 };
/** Coarser meshes than these are too far from the asymptotic fall to tell a rate. */
const stridesUsed = 3;

/**
 * Fits differences to the finest mesh, `size`[i] at `step`[i] > 1, by error * growth(step, rate). Returns the rate and the error on the
 * finest mesh; the rate is `assumed` where fewer than two steps show a difference.
 */
export function fitFall(
  steps: readonly number[],
  sizes: readonly number[],
  growth: (step: number, rate: number) => number,
  assumed: number,
): Rate & { error: number } {
  const seen = steps
    .map((step, i) => ({ step, size: sizes[i] }))
    .filter(({ size }) => size > 0 && Number.isFinite(size));
  if (seen.length === 0) return { rate: assumed, from: 0, error: sizes.length > 0 ? 0 : Number.NaN };
  const used = seen.slice(0, stridesUsed);
  const errorAt = (rate: number): { error: number; misfit: number } => {
    const logs = used.map(({ step, size }) => Math.log(size / growth(step, rate)));
    const mean = logs.reduce((sum, x) => sum + x, 0) / logs.length;
    return { error: Math.exp(mean), misfit: logs.reduce((sum, x) => sum + (x - mean) ** 2, 0) };
  };
  if (used.length === 1) return { rate: assumed, from: 1, error: errorAt(assumed).error };
  let [best, least] = [assumed, Number.POSITIVE_INFINITY];
  for (let rate = rateTried.least; rate <= rateTried.most + 1e-9; rate += rateTried.step) {
    const { misfit } = errorAt(rate);
    if (misfit < least) [best, least] = [rate, misfit];
  }
  return { rate: best, from: used.length, error: errorAt(best).error };
}

/**
 * Aliases: the error of a plain sum is the sum of the Fourier coefficients of the summand at the reciprocal vectors of the mesh. Over the shifts
 * of a sub-mesh, those it shares with the finest mesh are alike: the mean square about the finest mesh's sum is
 * E_s^2 - E_1^2 = E_1^2 (s^2p - 1).
 */
export const aliasGrowth = (step: number, rate: number): number => Math.sqrt(step ** (2 * rate) - 1);

/** A bias that falls as a power: the difference to the finest mesh is E_1 (s^p - 1). */
export const biasGrowth = (step: number, rate: number): number => step ** rate - 1;

/** Levels to either side over which a rate is taken: a part of the window. */
const rateReach = (levels: number, reach: number): number => Math.max(reach, Math.round(0.06 * levels));

/** By level: fits of the spreads of coarser meshes about the finest. */
function localFits(
  finest: readonly number[],
  coarser: readonly { readonly step: number; readonly curves: readonly (readonly number[])[] }[],
  growth: (step: number, rate: number) => number,
  assumed: number,
  reach: number,
) {
  const wide = rateReach(finest.length, reach);
  const steps = coarser.map(({ step }) => step);
  const sizes = coarser.map(({ curves }) => distance(curves, finest, reach));
  const broad = sizes.map((row) => smoothed(row, wide));
  return finest.map((_, level) => {
    const rate = fitFall(
      steps,
      broad.map((row) => row[level]),
      growth,
      assumed,
    );
    // The rate is that of the neighbourhood, the size the level's own.
    const own = steps.map((step, i) => sizes[i][level] / growth(step, rate.rate)).slice(0, stridesUsed);
    const error =
      own.length === 0 ? Number.NaN : Math.max(own[0], rate.error * (sizes[0][level] / (broad[0][level] || 1)));
    return { rate: rate.rate, from: rate.from, error };
  });
}

/**
 * How much further than the root mean square over all shifts the mesh's own kind of shift is off: a mesh that holds the zone's centre, or any
 * other point of high symmetry, adds all its aliases in phase. `own` is the index of the finest mesh's kind among the shifts: 0.
 */
function coherence(finest: readonly number[], meshes: readonly MeshCurves[]): number {
  let most = 1;
  for (const { plain } of meshes.slice(0, stridesUsed)) {
    if (plain.length < 2) continue;
    const [own, all] = [distance([plain[0]], finest, finest.length), distance(plain, finest, finest.length)];
    if (all[0] > 0) most = Math.max(most, own[0] / all[0]);
  }
  return most;
}

/**
 * Bounds of the finest mesh's plain sum. With a refined value the difference to it tells, as surely as its bar allows; where the two agree
 * within two bars, and without a refined value, the spread of coarser meshes does.
 */
export function plainBounds(evidence: Evidence): Bounds {
  const [finest, ...coarser] = evidence.meshes;
  const own = finest.plain[0];
  const telling = coarser.filter(({ blind }) => !blind);
  const fits = localFits(
    own,
    telling.map(({ step, plain }) => ({ step, curves: plain })),
    aliasGrowth,
    evidence.plainOrder,
    evidence.reach,
  );
  const inPhase = coherence(own, telling);
  const alone = telling.filter(({ plain }) => plain.length > 0).slice(0, 1);
  const spread = fits.map(({ error, rate }, level) => {
    // A fall seen on coarse meshes is not trusted to go on faster than a metal's: near-degeneracies end it.
    const careful = Math.min(rate, evidence.plainOrder);
    const slower = alone.map(({ step }) => aliasGrowth(step, rate) / aliasGrowth(step, careful));
    const sameKind = alone.map(({ step, plain }) => Math.abs(plain[0][level] - own[level]) / biasGrowth(step, careful));
    return 2 * Math.max(inPhase * error * (slower[0] ?? 1), ...sameKind);
  });
  const rates = fits.map(({ rate, from }) => ({ rate, from }));
  const refined = finest.refined[0];
  if (refined === undefined) return { bound: spread, rates };
  // Neighbours may only raise what is seen at a level itself.
  const measured = distance([own], refined, evidence.reach).map((off, level) =>
    Math.max(off, Math.abs(own[level] - refined[level])),
  );
  const bound = measured.map((off, level) => {
    const surely = off + 2 * evidence.bar[level];
    const agrees = off <= 2 * evidence.bar[level];
    return agrees && fits[level].from >= 2 ? Math.min(surely, spread[level]) : surely;
  });
  return { bound, rates };
}

/** Local models err by the square of the step at most; meshes too coarse for them to hold show less. */
const leastModelOrder = 2;

/**
 * Bounds of the finest mesh's refined value: two of its calibrated bars; wider where all shifts of the densest contained mesh differ
 * from it by more than the one shift that the bar was made from.
 */
export function refinedBounds(evidence: Evidence): Bounds | undefined {
  const [finest, ...coarser] = evidence.meshes;
  const own = finest.refined[0];
  if (own === undefined) return undefined;
  const compared = coarser.filter(({ refined }) => refined.length > 0);
  const fits = localFits(
    own,
    compared.map(({ step, refined }) => ({ step, curves: refined })),
    biasGrowth,
    evidence.refinedOrder,
    evidence.reach,
  );
  const [dense] = compared;
  const differ = dense === undefined ? own.map(() => 0) : distance(dense.refined, own, evidence.reach);
  const bound = evidence.bar.map((bar, level) => {
    const model = dense === undefined ? 0 : differ[level] / biasGrowth(dense.step, evidence.refinedOrder);
    return 2 * Math.max(bar, Math.hypot(evidence.samplingBar[level], model));
  });
  const told = (rate: number): number => Math.min(Math.max(rate, leastModelOrder), evidence.refinedOrder);
  return { bound, rates: fits.map(({ rate, from }) => ({ rate: told(rate), from })) };
}
