// sweep-curves.ts: what do the spectra of a sweep say, by whichever method it was: values and bars of every column in zone means?
import {
  type ColumnCurves,
  curvesRead,
  densityCurves,
  occupiedCurves,
  resolutionOf,
  type SpectraFacts,
  spreadCurves,
} from "../curves/assemble.js";
import { densityReading, occupiedReading, type Reading } from "../curves/occupation.js";
import { type RefinedErrors, type RefinedFacts, refinedCurves, refinedErrors } from "../curves/refined.js";
import { thermalReading } from "../curves/thermal.js";
import { columnCount } from "../engine/columns.js";
import { smallestSubMeshes, spreadSubMeshes } from "../zone/mesh.js";
import type { Computed, SweepPlan } from "./sweep-plan.js";

/** What is known of a sweep's spectra. */
export function spectraFacts({ job, facts }: SweepPlan): SpectraFacts {
  return {
    axis: job.axis,
    columns: columnCount(job.plan),
    points: facts.points,
    electronsPerBand: facts.electronsPerBand,
    dimension: facts.periodic,
    subMeshes: job.method === "refine" ? smallestSubMeshes(facts) : spreadSubMeshes(facts),
  };
}

const refinedFacts = (planned: SweepPlan, { modelShare }: Computed): RefinedFacts => {
  const { hessian, bands } = planned.facts;
  return { ...spectraFacts(planned), regularEv: planned.regularEv, hessian, bands, modelShare };
};

/** Curves of one kind: [temperature][level][column]. */
export interface ReadCurves extends RefinedErrors {
  readonly values: ColumnCurves;
}

/** The three kinds of curves of a sweep; each is computed when asked for. */
export interface SweptCurves {
  /** Occupied weight: the responses, and last the states. */
  occupied(): ReadCurves;
  /** Weight per eV: Drude weights, and last the density of states. */
  density(): ReadCurves;
  /** Mott integrals of the responses; see thermalWeight. */
  thermal(): ReadCurves;
}

/** Curves of a computed sweep. */
export function curvesOf(planned: SweepPlan, computed: Computed): SweptCurves {
  const { sections, refined } = computed;
  const { method } = planned.job;
  const known = spectraFacts(planned);
  const local = refined === undefined ? undefined : refinedFacts(planned, computed);
  const occupied = local ? refinedCurves(sections, local) : occupiedCurves(sections, method, known);
  const withErrors = (values: ColumnCurves, reading: Reading): ReadCurves => {
    if (local) return { values, ...refinedErrors(sections, local, occupied, reading) };
    const sampling = spreadCurves(sections, method, known, reading);
    return { values, sampling, model: sampling.map((rows) => rows.map((row) => new Float64Array(row.length))) };
  };
  const density = densityReading(resolutionOf(known.axis));
  return {
    occupied: () => withErrors(occupied, occupiedReading),
    density: () =>
      withErrors(local ? refinedCurves(sections, local, density) : densityCurves(sections, method, known), density),
    thermal: () =>
      withErrors(
        local ? refinedCurves(sections, local, thermalReading) : curvesRead(sections, method, known, thermalReading),
        thermalReading,
      ),
  };
}
