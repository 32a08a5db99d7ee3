// locate-parts.ts: what do contributions say once they are told by sets of bands, and how much have two responses in common?
import type { LocatedPair, Overlap } from "./locate-result.js";

/** [band]: number of its set; neighbouring bands that were never seen apart are one set. `apart` [band]: times seen apart from the next. */
export function setsOfBands(apart: Float64Array): number[] {
  let set = 0;
  return Array.from(apart, (_, band) => (band > 0 && apart[band - 1] > 0 ? ++set : set));
}

/** Bands of every set. */
export function bandsOfSets(setOf: readonly number[]): number[][] {
  const sets: number[][] = [];
  for (const [band, set] of setOf.entries()) {
    sets[set] ??= [];
    sets[set].push(band);
  }
  return sets;
}

/** Pairs of sets of one response, largest magnitude first; `main` and `correction` are [pair n < m], in what `factor` makes the response's unit. */
export function rankedPairs(
  main: Float64Array,
  correction: Float64Array,
  setOf: readonly number[],
  factor: number,
): LocatedPair[] {
  const sums = new Map<number, LocatedPair>();
  const sets = setOf[setOf.length - 1] + 1;
  for (let n = 0, at = 0; n < setOf.length; n++)
    for (let m = n + 1; m < setOf.length; m++, at++) {
      const [lower, upper] = [setOf[n], setOf[m]];
      const key = lower * sets + upper;
      const pair = sums.get(key) ?? { lower, upper, contribution: 0, correction: 0, cumulated: 0 };
      pair.contribution += factor * (main[at] + correction[at]);
      pair.correction += factor * correction[at];
      sums.set(key, pair);
    }
  const pairs = [...sums.values()].filter(({ lower, upper, contribution }) => lower !== upper || contribution !== 0);
  pairs.sort((a, b) => Math.abs(b.contribution) - Math.abs(a.contribution));
  let cumulated = 0;
  for (const pair of pairs) {
    cumulated += pair.contribution;
    pair.cumulated = cumulated;
  }
  return pairs;
}

function magnitude(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += Math.abs(values[i]);
  return sum;
}

/** Sum of the smaller shares of two vectors of magnitudes. */
function common(a: ArrayLike<number>, b: ArrayLike<number>): number {
  const [all, other] = [magnitude(a), magnitude(b)];
  if (all === 0 || other === 0) return 0;
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += Math.min(Math.abs(a[i]) / all, Math.abs(b[i]) / other);
  return sum;
}

function cosine(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let [product, ofA, ofB] = [0, 0, 0];
  for (let i = 0; i < a.length; i++) {
    product += a[i] * b[i];
    ofA += a[i] * a[i];
    ofB += b[i] * b[i];
  }
  return ofA > 0 && ofB > 0 ? product / Math.sqrt(ofA * ofB) : 0;
}

/** What each response is made of: [cell] and [pair of sets], in equal order for all. */
export interface Parts {
  readonly name: string;
  readonly cells: ArrayLike<number>;
  readonly pairs: ArrayLike<number>;
}

/** How far each two responses come from the same cells and pairs. */
export function overlaps(all: readonly Parts[]): Overlap[] {
  return all.flatMap((a, i) =>
    all.slice(i + 1).map((b) => ({
      a: a.name,
      b: b.name,
      cells_common: common(a.cells, b.cells),
      pairs_common: common(a.pairs, b.pairs),
      cells_cosine: cosine(a.cells, b.cells),
      pairs_cosine: cosine(a.pairs, b.pairs),
    })),
  );
}
