// closed-form.ts: test material: the density of E + sum_j t_j w_j, t_j uniform in [-1/2, 1/2], integrated in closed form.

const factorial = [1, 1, 2, 6];

/**
 * Part of the spread that lies below `offset` from its centre: (1 / (d! prod w)) sum over signs of prod(s) (offset + sum s_j w_j / 2)_+^d,
 * inclusion and exclusion over the corners of the box. Zero widths drop out; without any, a step.
 */
export function convolvedBoxesBelow(offset: number, widths: readonly number[]): number {
  const real = widths.filter((width) => width > 0);
  if (real.length === 0) return offset < 0 ? 0 : 1;
  const half = real.reduce((sum, width) => sum + width / 2, 0);
  if (offset <= -half) return 0;
  // The upper half by symmetry: fewer terms, less cancellation.
  if (offset > 0) return 1 - convolvedBoxesBelow(-offset, widths);
  let sum = 0;
  for (let corner = 0; corner < 1 << real.length; corner++) {
    let at = offset;
    let sign = 1;
    for (let j = 0; j < real.length; j++) {
      const minus = (corner >> j) & 1;
      at += minus ? -real[j] / 2 : real[j] / 2;
      if (minus) sign = -sign;
    }
    if (at > 0) sum += sign * at ** real.length;
  }
  return sum / (factorial[real.length] * real.reduce((product, width) => product * width, 1));
}

/** Variance of the spread: sum w_j^2 / 12. */
export const spreadVariance = (widths: readonly number[]): number =>
  widths.reduce((sum, width) => sum + width ** 2 / 12, 0);
