// sweep-result.ts: how do the spectra of a sweep become its result: curves with bars, companions, notes?

import { drudeUnit, type ResponseUnit, thermalUnit } from "../bands/units.js";
import { productVersion } from "../base/version.js";
import { columnTable, occupiedCurves } from "../curves/assemble.js";
import type { CompanionCurve, CurvesResult, DrudeCurve, ResponseCurve, Table } from "../curves/result.js";
import { columnCount } from "../engine/columns.js";
import { counters } from "../engine/refiner.js";
import type { GridFacts } from "../grid/grid.js";
import { cellArea, cellVolume } from "../zone/lattice.js";
import { smallestSubMeshes, spreadSubMeshes } from "../zone/mesh.js";
import { healthNotes, quickHealth } from "./quick-health.js";
import { countBelow } from "./reference.js";
import { curvesOf, type ReadCurves, spectraFacts } from "./sweep-curves.js";
import { type Computed, type SweepPlan, unitOf } from "./sweep-plan.js";
import { spectrumBlock } from "./sweep-spectrum.js";

/** Told to every reader of a result. */
export const intrinsicOnly = "intrinsic only, rigid band";

/** The root of the sum of the squares of both causes, of one column. */
function errorTable({ sampling, model }: ReadCurves, column: number, factor: number): Table {
  const [a, b] = [sampling, model].map((errors) => columnTable(errors, column, Math.abs(factor)));
  return a.map((row, t) => row.map((value, level) => Math.hypot(value, b[t][level])));
}

function responseCurves(
  planned: SweepPlan,
  computed: Computed,
  read: ReadCurves,
  thermal: ReadCurves | undefined,
): ResponseCurve[] {
  const { job, facts, options } = planned;
  const known = spectraFacts(planned);
  const points = job.method === "points" ? read.values : occupiedCurves(computed.sections, "points", known);
  return job.plan.columns.map(({ name, carrier }, column): ResponseCurve => {
    const { unit, factor } = unitOf(carrier, facts, options);
    const curve: ResponseCurve = {
      name,
      unit,
      value: columnTable(read.values, column, factor),
      error: errorTable(read, column, factor),
      error_sampling: columnTable(read.sampling, column, Math.abs(factor)),
      error_model: columnTable(read.model, column, Math.abs(factor)),
      points: columnTable(points, column, factor),
    };
    if (thermal !== undefined) curve.thermal = companion(thermal, column, thermalUnit(carrier, facts, options.unit));
    return curve;
  });
}

/** One column of the curves as a companion of the responses. */
const companion = (read: ReadCurves, column: number, { unit, factor }: ResponseUnit): CompanionCurve => ({
  unit,
  value: columnTable(read.values, column, factor),
  error: errorTable(read, column, factor),
});

function drudeCurves({ job, facts }: SweepPlan, density: ReadCurves): DrudeCurve[] {
  const first = job.plan.columns.length;
  return job.plan.drude.map((direction, i) => {
    const axis = "xyz"[direction];
    return { name: `drude:${axis}${axis}`, ...companion(density, first + i, drudeUnit(facts)) };
  });
}

/** Value of a row at level 0 (the reference), linear between two levels; undefined when the window does not hold it. */
function atReference(row: readonly number[], levelEv: readonly number[]): number | undefined {
  const upper = levelEv.findIndex((level) => level >= 0);
  if (upper < 0 || levelEv[0] > 0) return undefined;
  if (upper === 0) return row[0];
  const part = levelEv[upper] / (levelEv[upper] - levelEv[upper - 1]);
  return row[upper] * (1 - part) + row[upper - 1] * part;
}

/** Electrons counted from those that the reference level holds at the lowest temperature asked, by the same method. */
function dopingTable(electrons: Table, levelEv: readonly number[], { facts, reference }: SweepPlan): Table {
  const neutral = atReference(electrons[0], levelEv) ?? facts.electrons ?? countBelow(facts, reference.levelEv);
  return electrons.map((row) => row.map((value) => value - neutral));
}

/** One carrier per cell as a density: per cm^3, or per cm^2 for a layer. */
function densityPerCell({ periodic, vectorsA }: GridFacts): number {
  return periodic === 3 ? 1e24 / cellVolume(vectorsA) : 1e16 / cellArea(vectorsA);
}

/** What limits a refinement on this grid, and how that shows. */
function refinementNotes(facts: GridFacts): string[] {
  const notes: string[] = [];
  if (facts.hessian === "none")
    notes.push("no second derivatives are stored: local models are of lower order, and the error bar is wider");
  if (smallestSubMeshes(facts) === undefined)
    notes.push(
      "the mesh contains no regular sub-mesh (its divisions share no factor 2, 3 or 5): the model error is a part of the neighbour defect",
    );
  if (facts.hessian === "free-electron")
    notes.push(
      "bands cut from plane waves: where the level comes near the highest stored band, the error bar is doubled",
    );
  return notes;
}

function notesOf(planned: SweepPlan): string[] {
  const { job, facts, reference, options } = planned;
  const notes = [
    intrinsicOnly,
    `levels are relative to ${reference.levelEv.toFixed(6)} eV, ${reference.origin}`,
    `pairs of bands closer than ${options.degenerate} eV are taken as degenerate`,
  ];
  notes.push(...healthNotes(quickHealth(job.directory, facts), reference.levelEv + options.to, options.degenerate));
  if (options.broaden > 0) notes.push(`denominators are broadened by ${options.broaden} eV`);
  if (job.method === "cells")
    notes.push(`energy resolution at 0 K: ${(job.axis.nodes.stepEv * 1000).toPrecision(3)} meV`);
  if (planned.patchedCells > 0)
    notes.push(
      `patches hold finer data for ${planned.patchedCells} of the mesh's ${facts.points} cells; coarser meshes inside it, from which rates and the bars' model part come, are without them`,
    );
  if (job.method === "refine") notes.push(...refinementNotes(facts));
  else if (spreadSubMeshes(facts) === undefined)
    notes.push("no error bar: the mesh contains no regular sub-mesh (its divisions share no factor 2, 3 or 5)");
  return notes;
}

/** Samples, cells and depths of a refinement. */
function samplingOf({ job, facts }: SweepPlan, { sections, refined }: Computed): CurvesResult["sampling"] {
  const { points } = facts;
  if (refined === undefined) return { method: job.method, stored: points, samples: points, deepest: 0 };
  const tally = sections["refine.counters"];
  const coarse = sections["coarse.counters"];
  const spent = tally[counters.samples] + tally[counters.defectSamples];
  const forError = coarse === undefined ? 0 : coarse[counters.samples] + coarse[counters.defectSamples];
  return {
    method: "refine",
    stored: points,
    samples: spent + forError,
    deepest: tally.subarray(counters.depths).findLastIndex((cells) => cells > 0),
    samples_for_error: forError,
    cells_split: tally[counters.splitCells],
    zone_refined: tally[counters.splitVolume] / points,
    unresolved: tally[counters.unresolved],
    regular_eV: refined.regularEv,
  };
}

/** The result of a computed sweep. */
export function assembleResult(planned: SweepPlan, computed: Computed): CurvesResult {
  const { job, facts, reference, options } = planned;
  const curves = curvesOf(planned, computed);
  const occupied = curves.occupied();
  const slopes = curves.density();
  const last = columnCount(job.plan) - 1;
  const levels = Array.from(job.axis.levelsEv, (_, i) =>
    options.points === 1 ? options.from : options.from + (i * (options.to - options.from)) / (options.points - 1),
  );
  const electrons = columnTable(occupied.values, last, facts.electronsPerBand);
  const doping = dopingTable(electrons, levels, planned);
  const density = densityPerCell(facts);
  const { title, sha256, bands, divisions, periodic, points } = facts;
  const spectrum = spectrumBlock(planned, computed);
  return {
    format: "tidegauge.curves/1",
    version: productVersion,
    grid: { title, sha256, bands, divisions: [...divisions], periodic, points },
    job: { study: "sweep", ...options },
    reference_eV: reference.levelEv,
    level_eV: levels,
    temperature_K: [...job.axis.temperaturesK],
    electrons_per_cell: electrons,
    doping_per_cell: doping,
    doping_density: doping.map((row) => row.map((value) => value * density)),
    doping_density_unit: periodic === 3 ? "per_cm3" : "per_cm2",
    states_per_eV: columnTable(slopes.values, last, facts.electronsPerBand),
    responses: responseCurves(planned, computed, occupied, options.thermal ? curves.thermal() : undefined),
    drude: drudeCurves(planned, slopes),
    sampling: samplingOf(planned, computed),
    notes: notesOf(planned),
    ...(spectrum === undefined ? {} : { spectrum }),
  };
}
