// resistivity.ts: what resistivity does a text such as "10.6(2) uohm cm" mean, and in which unit is a column of them?
import { usageFault } from "../base/errors.js";

/** A unit of resistivity, or of sheet resistance. */
export interface ResistivityUnit {
  /** Multiplies a number in the unit to ohm m, or for a sheet to ohm. */
  readonly factor: number;
  readonly sheet: boolean;
}

const prefixes: Readonly<Record<string, number>> = { n: 1e-9, u: 1e-6, m: 1e-3, "": 1, k: 1e3, M: 1e6 };
const lengths: Readonly<Record<string, number>> = { m: 1, cm: 1e-2, mm: 1e-3 };

/** "uohm cm", "ohm m", "nohm m", "mohm cm", "ohm", "kohm/sq"; the Greek letters are known too. Undefined for anything else. */
export function resistivityUnit(text: string): ResistivityUnit | undefined {
  const plain = text
    .trim()
    .replace(/[\u00b5\u03bc]/g, "u")
    .replace(/^micro[- ]?/i, "u")
    .replace(/[\u03a9\u2126]/g, "ohm");
  const found = /^([numkM]?)ohms?(?:[\s*.\u00b7_-]*(cm|mm|m)|\s*\/\s*(?:sq|square))?$/i.exec(plain);
  if (found === null) return undefined;
  const prefix = found[1] === "K" ? "k" : found[1] === "U" ? "u" : found[1] === "N" ? "n" : found[1];
  const length = found[2]?.toLowerCase();
  return { factor: prefixes[prefix] * (length === undefined ? 1 : lengths[length]), sheet: length === undefined };
}

/** A value with its standard error (0 where none was given), ohm m, or for a sheet ohm. */
export interface Resistivity {
  readonly value: number;
  readonly error: number;
  readonly sheet: boolean;
}

const number = "[+-]?(?:\\d+\\.?\\d*|\\.\\d+)(?:[eE][+-]?\\d+)?";
const form = new RegExp(`^\\s*(${number})(?:\\((\\d+)\\))?\\s*(?:(?:\\+-|\\+/-|\\u00b1)\\s*(${number}))?\\s*(\\D.*)$`);

/** The error of "10.6(2)": digits in the place of the last one. */
function errorInBrackets(value: string, digits: string): number {
  const [mantissa, power = "0"] = value.split(/[eE]/);
  const decimals = mantissa.split(".")[1]?.length ?? 0;
  return Number(digits) * 10 ** (Number(power) - decimals);
}

/** Reads "10.6 uohm cm", "10.6(2) uohm cm" or "10.6 +- 0.2 uohm cm". Throws a usage Fault that shows how it is written. */
export function parseResistivity(text: string): Resistivity {
  const found = form.exec(text);
  const unit = found === null ? undefined : resistivityUnit(found[4]);
  const value = found === null ? Number.NaN : Number(found[1]);
  if (found === null || unit === undefined || !(value > 0))
    throw usageFault(
      `--resistivity "${text}" is no resistivity`,
      'Write a positive number and a unit, e.g. "10.6 uohm cm", "10.6(2) uohm cm", "1.06e-7 ohm m"; for a layer the sheet resistance, "120 ohm".',
    );
  const error =
    found[2] !== undefined
      ? errorInBrackets(found[1], found[2])
      : found[3] !== undefined
        ? Math.abs(Number(found[3]))
        : 0;
  return { value: value * unit.factor, error: error * unit.factor, sheet: unit.sheet };
}
