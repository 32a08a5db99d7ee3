// validated.ts: how do the words of a command line become one checked options object, and how is a wrong one named?
import { z } from "zod";
import { usageFault } from "../base/errors.js";

/**
 * `raw` checked by a schema. Throws a usage Fault that names the option (`meshDivisions` -> `--mesh-divisions`), what
 * was given and what is expected.
 */
export function validated<T>(schema: z.ZodType<T, unknown>, raw: unknown, command: string): T {
  const checked = schema.safeParse(raw);
  if (checked.success) return checked.data;
  const issue = checked.error.issues[0];
  const given = issue === undefined ? undefined : valueAt(raw, issue.path);
  const shown = given === undefined ? "" : ` ${typeof given === "string" ? given : JSON.stringify(given)}`;
  throw usageFault(
    `${optionName(issue?.path[0])}${shown}: ${issue?.message ?? "not valid"}`,
    `see tidegauge ${command} --help`,
  );
}

function optionName(key: PropertyKey | undefined): string {
  if (key === undefined) return "options";
  return `--${String(key).replace(/[A-Z]/g, (letter) => `-${letter.toLowerCase()}`)}`;
}

function valueAt(raw: unknown, path: readonly PropertyKey[]): unknown {
  let value = raw;
  for (const key of path) {
    if (typeof value !== "object" || value === null) return undefined;
    value = (value as Record<PropertyKey, unknown>)[key];
  }
  return value;
}

/** A number as typed: decimal or with an exponent; NaN-producing text is refused with `expected`. */
export const typedNumber = (expected = "expected a number"): z.ZodType<number, unknown> =>
  z
    .string()
    .transform((text) => (text.trim() === "" ? Number.NaN : Number(text)))
    .refine(Number.isFinite, { error: expected });

/** A whole number of at least `least`, as typed. */
export const typedWhole = (least: number): z.ZodType<number, unknown> => {
  const expected = `expected a whole number of at least ${least}`;
  return typedNumber(expected).refine((value) => Number.isInteger(value) && value >= least, { error: expected });
};

/** A part of a whole, as typed: "1%" or "0.01". */
export const typedShare: z.ZodType<number, unknown> = z
  .string()
  .transform((text) => (/%\s*$/.test(text) ? Number(text.replace(/%\s*$/, "")) / 100 : Number(text)))
  .refine((value) => Number.isFinite(value) && value > 0 && value <= 1, {
    error: "expected a share such as 1% or 0.01",
  });
