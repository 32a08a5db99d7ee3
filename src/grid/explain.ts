// explain.ts: turns what zod found wrong in a manifest into one sentence with path, finding, and what is allowed.
import { distance } from "fastest-levenshtein";
import { z } from "zod";
import { dataFault, type Fault } from "../base/errors.js";
import { quoted } from "./jsontext.js";

type Issue = z.core.$ZodIssue;
type Path = readonly PropertyKey[];

/** A data Fault for the gravest of `issues` (an unknown name first: it is often why another is missing). */
export function manifestFault(schema: z.ZodType, value: unknown, issues: readonly Issue[], where: string): Fault {
  const all = issues.flatMap((issue) => flattened(issue, value, []));
  const first = all.find((issue) => issue.code === "unrecognized_keys") ?? all[0];
  const more = all.length > 1 ? ` (and ${all.length - 1} more)` : "";
  const [message, cure] = explain(schema, value, first);
  return dataFault(`${where}: ${message}${more}`, cure);
}

/** The issues of a union are those of the branch whose kind of value was given: the one that got furthest. */
function flattened(issue: Issue, value: unknown, prefix: Path): Issue[] {
  const path = [...prefix, ...issue.path];
  if (issue.code === "invalid_union" && issue.errors.length > 0) {
    const literals = issue.errors.flat().filter((inner) => inner.code === "invalid_value" && inner.path.length === 0);
    const isObject = typeof valueAt(value, path) === "object";
    const deep = issue.errors.find((branch) => branch.some((inner) => !isTypeMismatch(inner)));
    if (deep !== undefined && (isObject || literals.length === 0)) {
      return deep.flatMap((inner) => flattened(inner, value, path));
    }
    const values = literals.flatMap((inner) => (inner.code === "invalid_value" ? inner.values : []));
    if (values.length > 0) return [{ code: "invalid_value", values, path: [...path], message: "", input: undefined }];
  }
  return [{ ...issue, path: [...path] } as Issue];
}

function isTypeMismatch(issue: Issue): boolean {
  return issue.path.length === 0 && (issue.code === "invalid_type" || issue.code === "invalid_value");
}

function explain(schema: z.ZodType, value: unknown, issue: Issue): [string, string] {
  const name = pathName(issue.path);
  const found = valueAt(value, issue.path);
  if (issue.code === "unrecognized_keys") return unknownName(schema, issue.path, String(issue.keys[0]));
  if (issue.code === "invalid_key") {
    const rule = issue.issues[0]?.message ?? "a shorter name";
    return [`${name} is not a name that can be used here`, `Use ${rule}.`];
  }
  const allowed = allowedOf(issue);
  if (found === undefined) return [`${name} is missing: it must be ${allowed}`, `Add ${name}.`];
  const cure = issue.code === "invalid_value" ? suggestion(found, issue.values) : `Correct ${name}.`;
  return [`${name} is ${quoted(found)}: it must be ${allowed}`, cure];
}

function allowedOf(issue: Issue): string {
  switch (issue.code) {
    case "invalid_value":
      return issue.values.map((value) => quoted(value)).join(" or ");
    case "invalid_type":
      return kinds[issue.expected] ?? `of type ${issue.expected}`;
    case "too_small":
      return `${sizeOf(issue.origin)}at least ${issue.minimum}`;
    case "too_big":
      return `${sizeOf(issue.origin)}at most ${issue.maximum}`;
    case "invalid_union":
      return "one of the kinds of value that the format allows";
    default:
      return issue.message;
  }
}

const kinds: Record<string, string> = {
  number: "a finite number",
  int: "a whole number",
  string: "a text",
  boolean: "true or false",
  object: "an object {...}",
  record: "an object {...}",
  array: "a list [...]",
  tuple: "a list [...]",
};

function sizeOf(origin: string): string {
  if (origin === "array") return "a list whose length is ";
  return origin === "string" ? "a text whose length is " : "";
}

function unknownName(schema: z.ZodType, path: Path, key: string): [string, string] {
  const known = knownNames(schema, path);
  const name = pathName([...path, key]);
  const near = nearest(key, known);
  const close = near !== undefined && distance(key.toLowerCase(), near.toLowerCase()) <= Math.max(2, key.length / 2);
  return [
    `${name} is not a field of the format; known here are ${known.join(", ")}`,
    close ? `Did you mean ${quoted(near)}?` : "Remove it, or put it under provenance.",
  ];
}

function suggestion(found: unknown, values: readonly unknown[]): string {
  const texts = values.filter((value) => typeof value === "string");
  if (typeof found !== "string" || texts.length < 2) return "Write the value that the format asks for.";
  return `Did you mean ${quoted(nearest(found, texts))}?`;
}

/** The name with the least part of its letters changed, case aside: a short name is not nearer for being short. */
function nearest(text: string, names: readonly string[]): string | undefined {
  const lower = text.toLowerCase();
  const unlike = (name: string): number => distance(lower, name.toLowerCase()) / Math.max(lower.length, name.length);
  return names.reduce<string | undefined>(
    (best, name) => (best === undefined || unlike(name) < unlike(best) ? name : best),
    undefined,
  );
}

/** Names of the fields that the schema has at `path`. */
function knownNames(schema: z.ZodType, path: Path): string[] {
  let here = openedUp(schema);
  for (const step of path) {
    if (here instanceof z.ZodObject) here = openedUp(here.shape[String(step)] as z.ZodType);
    else if (here instanceof z.ZodRecord) here = openedUp(here.valueType as z.ZodType);
    else if (here instanceof z.ZodArray) here = openedUp(here.element as z.ZodType);
    else return [];
  }
  return here instanceof z.ZodObject ? Object.keys(here.shape) : [];
}

function openedUp(schema: z.ZodType): z.ZodType {
  if (schema instanceof z.ZodOptional || schema instanceof z.ZodDefault) return openedUp(schema.unwrap() as z.ZodType);
  if (schema instanceof z.ZodUnion) {
    const branch = schema.options.find((option) => option instanceof z.ZodObject);
    return (branch as z.ZodType | undefined) ?? schema;
  }
  return schema;
}

/** A path as people write it: `arrays.moments.spin.axes[2]`. */
function pathName(path: Path): string {
  let name = "";
  for (const step of path) {
    if (typeof step === "number") name += `[${step}]`;
    else {
      const text = String(step);
      const plain = /^[\p{L}\p{N}_.-]{1,60}$/u.test(text) ? text : quoted(text);
      name += name === "" ? plain : `.${plain}`;
    }
  }
  return name === "" ? "the manifest" : name;
}

function valueAt(value: unknown, path: Path): unknown {
  let here = value;
  for (const step of path) {
    if (typeof here !== "object" || here === null || !Object.hasOwn(here, step)) return undefined;
    here = (here as Record<PropertyKey, unknown>)[step];
  }
  return here;
}
