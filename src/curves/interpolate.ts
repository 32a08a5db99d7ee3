// interpolate.ts: what does a sampled curve say between its samples, and where does it take a value?

/** Ascending places and the samples there. */
export interface Samples {
  readonly x: readonly number[];
  readonly y: readonly number[];
}

/** The interval of `x` that holds `at`: index of its left end, and the place within it from 0 to 1; clamped to the ends. */
function intervalOf(x: readonly number[], at: number): { left: number; part: number; width: number } {
  let [left, right] = [0, Math.max(0, x.length - 1)];
  while (right - left > 1) {
    const middle = (left + right) >> 1;
    if (x[middle] <= at) left = middle;
    else right = middle;
  }
  const width = x[right] - x[left];
  const part = width > 0 ? (at - x[left]) / width : 0;
  return { left, part: Math.min(1, Math.max(0, part)), width };
}

/** The straight line between the neighbouring samples; the end values outside. */
export function linearAt({ x, y }: Samples, at: number): number {
  const { left, part } = intervalOf(x, at);
  return part === 0 ? y[left] : y[left] * (1 - part) + y[left + 1] * part;
}

/** The cubic through two samples with given slopes there (Hermite); the end values outside. */
export function cubicAt({ x, y }: Samples, slopes: readonly number[], at: number): number {
  const { left, part: t, width } = intervalOf(x, at);
  if (t === 0) return y[left];
  const [p, q] = [t * t * (3 - 2 * t), t * (1 - t)];
  return y[left] * (1 - p) + y[left + 1] * p + width * q * ((1 - t) * slopes[left] - t * slopes[left + 1]);
}

/** Slope of the parabola through each sample and its two neighbours; one-sided at the ends. */
export function parabolicSlopes({ x, y }: Samples): number[] {
  const last = x.length - 1;
  const secant = (i: number): number => (y[i + 1] - y[i]) / (x[i + 1] - x[i]);
  if (last < 1) return x.map(() => 0);
  return x.map((_, i) => {
    if (i === 0) return secant(0);
    if (i === last) return secant(last - 1);
    const [before, after] = [x[i] - x[i - 1], x[i + 1] - x[i]];
    return (secant(i - 1) * after + secant(i) * before) / (before + after);
  });
}

/**
 * Slopes with which the cubic of ascending samples ascends too: `wanted`, held within three times the smaller neighbouring secant
 * (F. N. Fritsch, R. E. Carlson, SIAM J. Numer. Anal. 17, 238 (1980)).
 */
export function ascendingSlopes({ x, y }: Samples, wanted: readonly number[]): number[] {
  const secants = x.slice(1).map((right, i) => (y[i + 1] - y[i]) / (right - x[i]));
  return wanted.map((slope, i) => {
    const most = 3 * Math.min(secants[i - 1] ?? secants[i] ?? 0, secants[i] ?? secants[i - 1] ?? 0);
    return Math.min(Math.max(0, slope), Math.max(0, most));
  });
}

/** The nearest curve that nowhere descends, in least squares: neighbours that descend are pooled into their mean. */
export function ascending(y: readonly number[]): number[] {
  const pools: { sum: number; count: number }[] = [];
  for (const value of y) {
    let pool = { sum: value, count: 1 };
    for (
      let before = pools.at(-1);
      before && before.sum / before.count > pool.sum / pool.count;
      before = pools.at(-1)
    ) {
      pool = { sum: before.sum + pool.sum, count: before.count + pool.count };
      pools.pop();
    }
    pools.push(pool);
  }
  return pools.flatMap(({ sum, count }) => new Array<number>(count).fill(sum / count));
}
