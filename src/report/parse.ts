// parse.ts: is this text a curves.json, and if so, what does it say?
import * as z from "zod";
import { dataFault } from "../base/errors.js";
import type { CurvesResult } from "../curves/result.js";
import { mostPackedNumbers, unpackWeights } from "../curves/spectrum-block.js";

/** `null` is what NaN was written as. */
const entry = z.union([z.number(), z.null().transform(() => Number.NaN)]);
const tableOf = z.array(z.array(entry));
const axis = z.array(z.number()).min(1);
const count = z.int().nonnegative();

const companion = z.looseObject({ unit: z.string(), value: tableOf, error: tableOf });

const response = z.looseObject({
  name: z.string().min(1),
  unit: z.string(),
  value: tableOf,
  error: tableOf,
  error_sampling: tableOf,
  error_model: tableOf,
  points: tableOf,
  thermal: companion.optional(),
});

const spectrum = z.object({
  start_eV: z.number(),
  step_eV: z.number().positive(),
  count: count.max(mostPackedNumbers),
  resolution_eV: z.number().nonnegative(),
  warm_eV: z.number().nonnegative(),
  columns: z.array(z.string()).min(2),
  factor: z.array(z.number()),
  weights: z.base64(),
  correction: z.base64().optional(),
  points: z.base64().optional(),
});

/** The border check of curves.json; fields that a later version adds pass through unchanged. */
const curvesSchema = z.looseObject({
  format: z.literal("tidegauge.curves/1"),
  version: z.string(),
  grid: z.looseObject({
    title: z.string(),
    sha256: z.string(),
    bands: count,
    divisions: z.array(count),
    periodic: z.union([z.literal(2), z.literal(3)]),
    points: count,
  }),
  job: z.record(z.string(), z.unknown()),
  reference_eV: z.number(),
  level_eV: axis,
  temperature_K: axis,
  electrons_per_cell: tableOf,
  doping_per_cell: tableOf,
  doping_density: tableOf,
  doping_density_unit: z.enum(["per_cm3", "per_cm2"]),
  states_per_eV: tableOf,
  responses: z.array(response),
  drude: z.array(companion.extend({ name: z.string().min(1) })).optional(),
  sampling: z
    .object({ method: z.enum(["refine", "cells", "points"]), stored: count, samples: count, deepest: count })
    .catchall(z.union([entry, z.string()])),
  notes: z.array(z.string()),
  spectrum: spectrum.optional(),
});

const cure = "Write the file again with `tidegauge sweep GRID --out DIR`; it must not be edited by hand.";

const named = (tables: Record<string, number[][]>, name: string): [string, number[][]][] =>
  Object.entries(tables).map(([key, rows]) => [`${key} of ${name}`, rows]);

/** Every table of a result, with the name to show when its shape is wrong. */
function tablesOf(result: CurvesResult): [string, number[][]][] {
  const { electrons_per_cell, doping_per_cell, doping_density, states_per_eV } = result;
  return [
    ...Object.entries({ electrons_per_cell, doping_per_cell, doping_density, states_per_eV }),
    ...result.responses.flatMap(({ name, value, error, error_sampling, error_model, points, thermal }) => [
      ...named({ value, error, error_sampling, error_model, points }, name),
      ...(thermal ? named({ value: thermal.value, error: thermal.error }, `${name} thermal`) : []),
    ]),
    ...(result.drude ?? []).flatMap(({ name, value, error }) => named({ value, error }, name)),
  ];
}

function checkShapes(result: CurvesResult, source: string): void {
  const temperatures = result.temperature_K.length;
  const levels = result.level_eV.length;
  for (const [name, rows] of tablesOf(result)) {
    const wrong = rows.findIndex((row) => row.length !== levels);
    if (rows.length !== temperatures)
      throw dataFault(
        `${source}: ${name} has ${rows.length} rows, expected one for each of ${temperatures} temperatures.`,
        cure,
      );
    if (wrong >= 0)
      throw dataFault(
        `${source}: ${name}, row ${wrong}, has ${rows[wrong].length} values, expected one for each of ${levels} levels.`,
        cure,
      );
  }
}

/** The spectra of a result must be of its responses and as long as they say. */
function checkSpectrum({ spectrum: block, responses }: CurvesResult, source: string): void {
  if (block === undefined) return;
  const expected = [...responses.map(({ name }) => name), "states"];
  const parts = [block.weights, block.correction, block.points].filter((part) => part !== undefined);
  const same = expected.length === block.columns.length && expected.every((name, at) => name === block.columns[at]);
  if (
    !same ||
    block.factor.length !== expected.length ||
    parts.some((part) => unpackWeights(part, block) === undefined)
  )
    throw dataFault(`${source}: spectrum does not fit the responses or is not as long as it says.`, cure);
}

function parsedJson(text: string, source: string): unknown {
  try {
    return JSON.parse(text.replace(/^\ufeff/, ""));
  } catch (cause) {
    const reason = cause instanceof Error ? cause.message.replace(/\s+/g, " ") : "unreadable";
    throw dataFault(`${source} is not JSON: ${reason}.`, "Check that the file is a complete curves.json.", cause);
  }
}

/**
 * Reads back what curvesJson wrote; `null` becomes NaN. `source` names the file in errors.
 * Throws a data Fault that names the field when the text is not JSON, not a curves.json, or a table has the wrong shape.
 */
export function parseCurves(text: string, source = "curves.json"): CurvesResult {
  const checked = curvesSchema.safeParse(parsedJson(text, source));
  if (!checked.success) {
    const [first] = checked.error.issues;
    const where = first.path.length === 0 ? "the document" : first.path.map(String).join(".");
    throw dataFault(`${source} is not a tidegauge result: ${where}: ${first.message}.`, cure);
  }
  checkShapes(checked.data, source);
  checkSpectrum(checked.data, source);
  return checked.data;
}
