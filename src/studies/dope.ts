// dope.ts: which doping puts the level at a peak, how high, how wide, how robust? And the inverse. Options, computation, result.
import { z } from "zod";
import { usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import { levelAt } from "../curves/doping.js";
import { growsBeyond } from "../curves/peaks.js";
import type { CurvesResult, ResponseCurve } from "../curves/result.js";
import { resolvedEnergy } from "../engine/mesh-step.js";
import type { RunOptions } from "../engine/run.js";
import { openGrid } from "../grid/open.js";
import type { DopedPoint, DopeResponse, DopeResult } from "./dope-result.js";
import {
  askedDopings,
  checkDopingUnit,
  type Doped,
  dopedValue,
  dopingUnits,
  heldByAll,
  indicesOf,
  peakCurve,
  peaksOf,
  preparedDoping,
  robustnessK,
  stretchOf,
} from "./doped-curves.js";
import { dopingAmount } from "./doping-amount.js";
import { sweep, sweepOptions } from "./sweep.js";

/** Options that `dope` has beside those of a sweep. */
export const dopingOptions = {
  doping: z.array(z.number().min(-1e30).max(1e30)).min(1).max(200).optional(),
  dopingUnit: z.enum(dopingUnits).default("per_cell"),
  substitute: z
    .array(z.number().refine((added) => added !== 0, { error: "expected a valence difference, not 0" }))
    .max(8)
    .default([]),
  sites: z.number().positive().max(10000).default(1),
  prominence: z.number().min(0).max(1).default(0.02),
};

/** Options of `dope`: a sweep's, room temperature alone and finer levels by default, and its own. */
export const dopeOptions = sweepOptions.extend({
  points: sweepOptions.shape.points.unwrap().default(401),
  temperature: sweepOptions.shape.temperature.unwrap().default([300]),
  ...dopingOptions,
});

export type DopeOptions = z.infer<typeof dopeOptions>;

/** Told with every doping that comes out. */
export const dopantCaution =
  "a number of electrons is no recipe: whether a dopant may be used (some are toxic or otherwise hazardous) is for local rules and licensed practice";

/** Dopings are counted from the reference at 0 K, so that the reference is neutral also where heat makes carriers. */
export const sweepTemperatures = (asked: readonly number[]): number[] =>
  [...new Set([0, ...robustnessK, ...asked])].sort((a, b) => a - b);

/** Computes one sweep at all temperatures needed and reads it. */
export async function dope(
  directory: string,
  options: DopeOptions,
  run: RunOptions,
): Promise<{ result: DopeResult; curves: CurvesResult }> {
  const { facts } = openGrid(directory);
  checkDopingUnit(options.dopingUnit, facts.periodic);
  const { doping, dopingUnit, substitute, sites, prominence, ...forSweep } = options;
  const curves = await sweep(directory, { ...forSweep, temperature: sweepTemperatures(options.temperature) }, run);
  const meshEv =
    options.method === "refine"
      ? 0
      : resolvedEnergy(facts, curves.reference_eV + options.from, curves.reference_eV + options.to);
  return {
    result: readDope(curves, { ...options, doping, dopingUnit, substitute, sites, prominence }, meshEv),
    curves,
  };
}

/** Options of which a computed sweep is read; the rest of `dope`'s are the sweep's. */
export type ReadingOptions = Pick<
  DopeOptions,
  "temperature" | "doping" | "dopingUnit" | "substitute" | "sites" | "prominence"
>;

function responseResult(
  doped: Doped,
  response: ResponseCurve,
  temperatures: readonly number[],
  resolution: { meshEv: number; prominence: number },
): DopeResponse {
  const { curves } = doped;
  const readAt = (t: number, at: number) => ({
    temperature_K: curves.temperature_K[t],
    level_eV: curves.level_eV[at],
    value: response.value[t][at],
    error: response.error[t][at],
    doping_per_cell: curves.doping_per_cell[t][at],
  });
  const ends = temperatures.flatMap((t) =>
    growsBeyond(peakCurve(curves, response, t)).map((end) => ({
      end,
      ...readAt(t, end === "low" ? 0 : curves.level_eV.length - 1),
    })),
  );
  const largest = temperatures.map((t) => {
    const { value } = peakCurve(curves, response, t);
    const size = (at: number): number => Math.abs(value[at]) || 0;
    return readAt(
      t,
      value.reduce((best, _, at) => (size(at) > size(best) ? at : best), 0),
    );
  });
  return {
    name: response.name,
    unit: response.unit,
    peaks: temperatures.flatMap((t) => peaksOf(doped, response, t, resolution)),
    largest,
    grows_beyond: ends,
  };
}

function dopedPoint(doped: Doped, perCell: number, temperatures: readonly number[]): DopedPoint {
  const { curves, dopings, scale } = doped;
  return {
    doping: dopingAmount(perCell, scale),
    rigid_band: stretchOf(doped, levelAt(dopings[0], perCell) ?? Number.NaN, perCell),
    responses: curves.responses.map((response) => ({
      name: response.name,
      unit: response.unit,
      at_temperatures: temperatures.map((t) => dopedValue(doped, response, t, perCell)),
    })),
  };
}

/**
 * Reads peaks, dopings and responses off a computed sweep. `meshEv`: energy that the mesh resolves where the method does not look
 * inside the cells. Throws usage Faults for a temperature that the sweep has not, and for a doping outside its window.
 */
export function readDope(curves: CurvesResult, options: ReadingOptions, meshEv: number): DopeResult {
  const { temperature, doping, dopingUnit, substitute, sites, prominence } = options;
  const read = { temperature, ...(doping === undefined ? {} : { doping }), dopingUnit, substitute, sites, prominence };
  const missing = temperature.find((kelvin) => !curves.temperature_K.includes(kelvin));
  if (missing !== undefined)
    throw usageFault(
      `--temperature ${missing}: these curves were computed at ${curves.temperature_K.join(", ")} K`,
      "Name one of these, or give the grid in place of the curves.",
    );
  const doped = preparedDoping(curves, substitute, sites);
  const asked = indicesOf(
    curves,
    [...new Set(temperature)].sort((a, b) => a - b),
  );
  const robust = indicesOf(curves, robustnessK);
  const all = [...new Set([...asked, ...robust])].sort((a, b) => a - b);
  const held = heldByAll(doped, asked);
  return {
    format: "tidegauge.dope/1",
    version: productVersion,
    grid: curves.grid,
    job: { ...curves.job, study: "dope", ...read },
    reference_eV: curves.reference_eV,
    window_eV: [curves.level_eV[0], curves.level_eV[curves.level_eV.length - 1]],
    temperature_K: asked.map((t) => curves.temperature_K[t]),
    robustness_K: robust.map((t) => curves.temperature_K[t]),
    carriers: doped.few ? "few" : "many",
    electrons_per_cell: doped.scale.electrons,
    density_unit: curves.doping_density_unit,
    density_of_one: doped.scale.densityOfOne,
    doping_window_per_cell: held,
    substitute: [...substitute],
    sites_per_cell: sites,
    responses: curves.responses.map((response) => responseResult(doped, response, asked, { meshEv, prominence })),
    dopings: askedDopings(doped, options, held).map((perCell) =>
      dopedPoint(doped, perCell, doping === undefined ? asked : all),
    ),
    sampling: curves.sampling,
    notes: notesOf(curves, robust),
  };
}

function notesOf(curves: CurvesResult, robust: readonly number[]): string[] {
  const notes = [...curves.notes, dopantCaution];
  const lacking = robustnessK.filter((kelvin) => !robust.some((t) => curves.temperature_K[t] === kelvin));
  if (lacking.length > 0)
    notes.push(
      `these curves hold no ${lacking.join(", ")} K: heights are not compared there; give the grid to have them`,
    );
  if (curves.temperature_K[0] > 0)
    notes.push(`dopings are counted from the electrons at the reference level and ${curves.temperature_K[0]} K`);
  return notes;
}
