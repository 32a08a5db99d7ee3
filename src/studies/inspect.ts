// inspect.ts: what is on disk, and can it be trusted? Reads every number of a band grid once; options and computation.
import { z } from "zod";
import { isFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import type { ArrayPlan } from "../grid/arrays.js";
import { verifyDigests } from "../grid/fingerprint.js";
import type { GridFacts } from "../grid/grid.js";
import { type Grid, openGrid } from "../grid/open.js";
import { type ArraySurvey, type Survey, surveyGrid } from "../grid/survey.js";
import { energyUnits, hessianUnits, momentUnits, velocityUnits } from "../grid/units.js";
import { cellArea, cellVolume } from "../zone/lattice.js";
import { inspectHealth } from "./inspect-health.js";
import type {
  GridContents,
  InspectedArray,
  InspectedGrid,
  InspectedLevel,
  InspectFault,
  InspectResult,
} from "./inspect-result.js";
import { warningsOf } from "./inspect-warnings.js";
import { countBelow, referenceLevel } from "./reference.js";

/** Options of an inspection. */
export const inspectOptions = z.strictObject({
  /** Compare every file with the SHA-256 that the manifest gives. */
  digests: z.boolean().default(false),
});

export type InspectOptions = z.infer<typeof inspectOptions>;

/** Progress over the k points of all grids so far known. */
export type OnProgress = (directory: string, done: number, total: number) => void;

/** Inspects grids one after another; a broken one is part of the result, not an exception. */
export function inspect(
  directories: readonly string[],
  options: InspectOptions,
  onProgress?: OnProgress,
): InspectResult {
  return {
    format: "tidegauge.inspect/1",
    version: productVersion,
    job: { study: "inspect", ...options },
    grids: directories.map((directory) => inspectGrid(directory, options, onProgress)),
  };
}

function inspectGrid(directory: string, options: InspectOptions, onProgress?: OnProgress): InspectedGrid {
  try {
    const grid = openGrid(directory);
    const checked = options.digests ? [grid, ...grid.patches].reduce((sum, each) => sum + verifyDigests(each), 0) : 0;
    const survey = surveyGrid(grid, (done, total) => onProgress?.(directory, done, total));
    const surveys = [
      { name: "", survey },
      ...grid.patches.map((patch) => ({ name: `patch ${patchName(patch)}: `, survey: surveyGrid(patch) })),
    ];
    const faults = surveys.flatMap(faultsOf).slice(0, mostFaults);
    const sound = faults.length === 0;
    const contents = contentsOf(grid, survey, sound ? levelOf(grid.facts, survey) : null, checked);
    const total = surveys.reduce((sum, each) => sum + each.survey.findingsTotal + (each.survey.stopped ? 1 : 0), 0);
    const health = sound ? inspectHealth(grid) : null;
    return { directory, sound, contents, faults, faults_total: total, health, warnings: warningsOf(contents, grid) };
  } catch (error) {
    if (!isFault(error)) throw error;
    const { message, cure } = error;
    return {
      directory,
      sound: false,
      contents: null,
      faults: [{ message, cure }],
      faults_total: 1,
      health: null,
      warnings: [],
    };
  }
}

const mostFaults = 20;
const patchName = ({ facts }: Grid): string => facts.patch?.name ?? "";

/** What is wrong with the numbers of the grid or of one of its patches. */
function faultsOf({ name, survey }: { readonly name: string; readonly survey: Survey }): InspectFault[] {
  const found = survey.findings.map(({ message, cure }) => ({ message: `${name}${message}`, cure }));
  return survey.stopped === undefined
    ? found
    : [...found, { message: `${name}${survey.stopped}`, cure: "Make the file readable as a whole." }];
}

function contentsOf(grid: Grid, survey: Survey, level: InspectedLevel | null, digestsChecked: number): GridContents {
  const { facts } = grid;
  return {
    title: facts.title,
    sha256: facts.sha256,
    lattice_A: facts.vectorsA.map((row) => [...row]),
    periodic: facts.periodic,
    cell_size: facts.periodic === 3 ? cellVolume(facts.vectorsA) : cellArea(facts.vectorsA),
    divisions: [...facts.divisions],
    offset: [...facts.offset],
    points: facts.points,
    reduced: grid.unfolding ? { stored: grid.unfolding.stored, operations: grid.unfolding.operations.length } : null,
    bytes: facts.bytes,
    bands: facts.bands,
    electrons_per_band: facts.electronsPerBand,
    moments: [...facts.moments],
    hessian: facts.hessian,
    tags: { ...facts.tags },
    arrays: grid.arrays.map((plan, index) => arrayOf(plan, survey.arrays[index], facts)),
    band_range_eV: survey.bandRanges.map(({ lowestEv, highestEv }) => [lowestEv, highestEv]),
    level,
    digests_checked: digestsChecked,
    patches: grid.patches.map((patch) => ({
      name: patchName(patch),
      cells: patch.facts.patch?.cells.length ?? 0,
      divisions: [...(patch.facts.patch?.divisions ?? [])],
      points: patch.facts.points,
      bytes: patch.facts.bytes,
    })),
  };
}

function arrayOf(plan: ArrayPlan, found: ArraySurvey, facts: GridFacts): InspectedArray {
  return {
    name: plan.name,
    type: plan.type,
    axes: [...plan.axes],
    unit: unitOf(plan, facts),
    files: found.files,
    bytes: found.bytes,
    largest: found.largest,
    asymmetry: found.asymmetry.relative,
    asymmetry_allowed: found.tolerance,
  };
}

/** The unit's name from its factor; a moment without dimension is told from one in hbar by the moment's facts. */
function unitOf(plan: ArrayPlan, facts: GridFacts): string {
  if (facts.moments.some(({ name, unit }) => unit === "1" && plan.name === `moments.${name}`)) return "1";
  const units = { energy: energyUnits, velocity: velocityUnits, moment: momentUnits, hessian: hessianUnits }[plan.role];
  return Object.entries(units).find(([name, factor]) => name !== "1" && factor === plan.factor)?.[0] ?? "";
}

function levelOf(facts: GridFacts, { bandRanges }: Survey): InspectedLevel {
  const { levelEv, origin } = referenceLevel(facts);
  const below = bandRanges.filter((range) => range.highestEv <= levelEv).length;
  const above = bandRanges.filter((range) => range.lowestEv > levelEv).length;
  const crossing = Array.from({ length: facts.bands - below - above }, (_, index) => below + index);
  const insulating = crossing.length === 0 && below > 0 && above > 0;
  return {
    reference_eV: levelEv,
    origin,
    fermi_eV: facts.fermiEv ?? null,
    electrons: facts.electrons ?? null,
    electrons_counted: countBelow(facts, levelEv),
    crossing_bands: crossing,
    gap_eV: insulating ? bandRanges[below].lowestEv - bandRanges[below - 1].highestEv : null,
  };
}
