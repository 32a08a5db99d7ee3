// numbers.ts: how is a number written for people: with its error in brackets, and without false digits?

/** Decimal exponent of the first significant digit; exact at powers of ten, where log10 may be off by one ulp. */
function exponentOf(size: number): number {
  return Number(size.toExponential().split("e")[1]);
}

/** The decimal place (power of ten) to which an error is quoted: two digits where it starts below 1.95, else one. */
function placeOfError(error: number): number {
  const exponent = exponentOf(error);
  return error / 10 ** exponent < 1.95 ? exponent - 1 : exponent;
}

/** Rounds half away from zero at the power of ten `place`; never gives negative zero. */
function roundedAt(value: number, place: number): string {
  const decimals = Math.max(0, -place);
  if (decimals > 100) return "0";
  const kept = place > 0 ? Math.round(value / 10 ** place) * 10 ** place : value;
  const text = kept.toFixed(decimals);
  return Number(text) === 0 ? text.replace("-", "") : text;
}

function bracketed(value: number, error: number, place: number): string {
  const shown = roundedAt(value, place);
  if (place >= 0) return `${shown}(${roundedAt(error, place)})`;
  const digits = roundedAt(error, place);
  // An error of one or more beside decimals would read as its last digits: 10.3(12) is written 10.3(1.2).
  return `${shown}(${Number(digits) >= 1 ? digits : String(Math.round(error / 10 ** place))})`;
}

/**
 * `value` with `digits` significant digits and no needless zeros: `257.4`, `2.1e-7`, `-0.5`; "n/a" where it is not finite.
 * Plain decimals from 1e-4 up to 1e7, powers of ten outside.
 */
export function plain(value: number, digits = 6): string {
  if (!Number.isFinite(value)) return "n/a";
  if (value === 0) return "0";
  const exponent = exponentOf(Number(value.toPrecision(digits)));
  if (exponent < -4 || exponent >= 7) {
    const [mantissa, power] = value.toExponential(digits - 1).split("e");
    return `${Number(mantissa)}e${Number(power)}`;
  }
  return String(Number(value.toPrecision(digits)));
}

/**
 * A value with one standard bar in the usual short form: `257.4(5)` is 257.4 with a bar of 0.5, the digits in brackets
 * counting in the last place shown. The bar keeps one digit, or two where it starts with 1 (`257.40(12)`); bars of one and
 * more beside decimals keep their point (`10.3(1.2)`). Powers of ten outside 1e-4 to 1e7: `2.574(5)e-7`.
 * `257.4(?)`: no bar could be estimated; `257.4(0)`: the bar is zero; "n/a": there is no value.
 */
export function withError(value: number, error: number): string {
  if (!Number.isFinite(value)) return "n/a";
  if (!Number.isFinite(error) || error < 0) return `${plain(value, 4)}(?)`;
  if (error === 0) return `${plain(value)}(0)`;
  const size = Math.max(Math.abs(value), error);
  const exponent = exponentOf(size);
  const place = placeOfError(error);
  if (exponent >= -4 && exponent < 7) return bracketed(value, error, place);
  // Scaling through text keeps the digits: dividing by 10^exponent would overflow or round for extreme exponents.
  return `${bracketed(shifted(value, -exponent), shifted(error, -exponent), place - exponent)}e${exponent}`;
}

/** value * 10^power, exact in its decimal digits. */
function shifted(value: number, power: number): number {
  const [mantissa, exponent] = value.toExponential().split("e");
  return Number(`${mantissa}e${Number(exponent) + power}`);
}

/** Digits in groups of three: 412345 -> "412,345". */
export function grouped(count: number): string {
  return String(count).replace(/\B(?=(\d{3})+$)/g, ",");
}
