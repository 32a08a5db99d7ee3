// sparkline.ts: how does a curve look in one line of block characters?

const blocks = "▁▂▃▄▅▆▇█";

/** The value of each of `width` stretches of equal length: the one farthest from the mean, so that a narrow peak is not lost. */
function thinned(values: readonly number[], width: number): number[] {
  const finite = values.filter(Number.isFinite);
  const mean = finite.reduce((sum, value) => sum + value, 0) / Math.max(1, finite.length);
  const columns = Math.min(width, values.length);
  return Array.from({ length: columns }, (_, column) => {
    const stretch = values.slice(
      Math.floor((column * values.length) / columns),
      Math.floor(((column + 1) * values.length) / columns),
    );
    return stretch
      .filter(Number.isFinite)
      .reduce((far, value) => (!(Math.abs(value - mean) <= Math.abs(far - mean)) ? value : far), Number.NaN);
  });
}

/**
 * At most `width` block characters, lowest block at the smallest value, highest at the largest; a blank where there is no
 * number; all lowest blocks when the curve is constant.
 */
export function sparkline(values: readonly number[], width: number): string {
  const shown = thinned(values, width);
  const finite = shown.filter(Number.isFinite);
  const least = Math.min(...finite);
  const span = Math.max(...finite) - least;
  return shown
    .map((value) => {
      if (!Number.isFinite(value)) return " ";
      const step = span > 0 ? Math.min(blocks.length - 1, Math.floor(((value - least) / span) * blocks.length)) : 0;
      return blocks[step];
    })
    .join("");
}
