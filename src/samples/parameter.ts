// parameter.ts: what a sample's parameter is (default, unit, meaning, check) and how a sample is declared.
import { z } from "zod";
import type { Triple } from "../grid/grid.js";
import type { SampleModel } from "./model.js";

/** One parameter of a sample: its default, unit and meaning, and the check of the text that a person types. */
export interface Parameter<T> {
  readonly default: T;
  /** Unit in words; "" for a pure number or a choice. */
  readonly unit: string;
  readonly meaning: string;
  /** Turns the typed text into the value, or says what is expected. */
  readonly schema: z.ZodType<T, string>;
}

interface NumberRange {
  readonly min?: number;
  readonly max?: number;
  /** The limits themselves are excluded. */
  readonly open?: true;
}

const numberSchema = (range: NumberRange): z.ZodType<number, string> => {
  const { min = -Infinity, max = Infinity, open } = range;
  const inside = (x: number): boolean => (open ? x > min && x < max : x >= min && x <= max);
  const limits = [
    ...(min > -Infinity ? [`${open ? "above" : "at least"} ${min}`] : []),
    ...(max < Infinity ? [`${open ? "below" : "at most"} ${max}`] : []),
  ].join(" and ");
  const expected = limits === "" ? "a finite number" : `a number ${limits}`;
  return z
    .string()
    .transform((text) => (text.trim() === "" ? Number.NaN : Number(text)))
    .refine((x) => Number.isFinite(x) && inside(x), { error: expected });
};

/** A real parameter. */
export const real = (value: number, unit: string, meaning: string, range: NumberRange = {}): Parameter<number> => ({
  default: value,
  unit,
  meaning,
  schema: numberSchema(range),
});

/** A real parameter that may be left out; then the model decides by itself, as `meaning` must say. */
export const optionalReal = (
  unit: string,
  meaning: string,
  range: NumberRange = {},
): Parameter<number | undefined> => ({
  default: undefined,
  unit,
  meaning,
  schema: numberSchema(range),
});

/** A free text. */
export const text = (value: string, meaning: string): Parameter<string> => ({
  default: value,
  unit: "",
  meaning,
  schema: z.string().min(1, { error: "a text that is not empty" }),
});

/** A whole-number parameter between `min` and `max`. */
export const whole = (value: number, meaning: string, min: number, max: number): Parameter<number> => ({
  default: value,
  unit: "",
  meaning,
  schema: numberSchema({ min, max }).refine((x) => Number.isInteger(x), {
    error: `a whole number from ${min} to ${max}`,
  }),
});

/** The same parameter, even numbers only. */
export const even = (parameter: Parameter<number>): Parameter<number> => ({
  ...parameter,
  schema: parameter.schema.refine((x) => x % 2 === 0, { error: "an even number" }),
});

/** A parameter that is one of a few words. */
export const choice = <const W extends string>(
  value: NoInfer<W>,
  words: readonly W[],
  meaning: string,
): Parameter<W> => ({
  default: value,
  unit: "",
  meaning: `${meaning} (${words.join(", ")})`,
  schema: z.string().pipe(z.enum(words, { error: `one of ${words.join(", ")}` })) as z.ZodType<W, string>,
});

/** A checked value. */
export type ParameterValue = number | string | undefined;

/** The values of a set of parameters. */
export type ValuesOf<P extends ParameterSet> = { readonly [K in keyof P]: P[K] extends Parameter<infer T> ? T : never };

/** Parameters by name. */
export type ParameterSet = Readonly<
  Record<string, Parameter<number> | Parameter<number | undefined> | Parameter<string>>
>;

/** A mesh on which the sample is well sampled by default. */
export interface SampleMesh {
  readonly divisions: Triple;
  readonly offset: Triple;
}

/** A sample as a person sees it in the catalogue. */
export interface Sample {
  readonly name: string;
  /** One line. */
  readonly summary: string;
  readonly parameters: ParameterSet;
  /** A mesh that reaches the digits of the publication at modest size. */
  readonly mesh: SampleMesh;
  /** The model of already checked values (keys of `parameters`). */
  build(values: Readonly<Record<string, ParameterValue>>): SampleModel;
}

/** Declares a sample with typed parameters; the catalogue sees the untyped face. */
export function declareSample<P extends ParameterSet>(
  name: string,
  summary: string,
  parameters: P,
  mesh: SampleMesh,
  model: (values: ValuesOf<P>) => SampleModel,
): Sample {
  return { name, summary, parameters, mesh, build: (values) => model(values as ValuesOf<P>) };
}

/** The defaults of a set of parameters, with the given values in their place. */
export function withDefaults<P extends ParameterSet>(parameters: P, given: Partial<ValuesOf<P>> = {}): ValuesOf<P> {
  const defaults = Object.fromEntries(Object.entries(parameters).map(([key, parameter]) => [key, parameter.default]));
  return { ...defaults, ...given } as ValuesOf<P>;
}
