// angle.ts: what Hall angle does the intrinsic response give against measured resistivity, and is a measured value intrinsic at all?
import { z } from "zod";
import { defaultResponses } from "../bands/responses.js";
import { responseUnit } from "../bands/units.js";
import { usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import type { CurvesResult } from "../curves/result.js";
import type { RunOptions } from "../engine/run.js";
import type { GridFacts } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { angleResponse, measuredRow, type Read, scatteringRow, toldTemperatures } from "./angle-reading.js";
import type { AngleResult } from "./angle-result.js";
import { readTable } from "./csv-table.js";
import {
  carrierOf,
  type Measurement,
  type ResistivitySource,
  readMeasurements,
  singleResistivity,
  tableResistivity,
} from "./measurements.js";
import { seriesOf } from "./resistivity-series.js";
import { sweep, sweepOptions } from "./sweep.js";

const shape = sweepOptions.shape;

/** Options of `angle`: a sweep's, with the window given by --shift and temperatures by the resistivity, and its own. */
export const angleOptions = sweepOptions.extend({
  from: shape.from.unwrap().optional(),
  to: shape.to.unwrap().optional(),
  points: shape.points.unwrap().min(3).default(81),
  temperature: shape.temperature.unwrap().optional(),
  resistivity: z.string().max(100).optional(),
  resistivityFile: z.string().optional(),
  measured: z.string().optional(),
  shift: z.number().min(0.001).max(10).default(0.2),
});

export type AngleOptions = z.infer<typeof angleOptions>;

/** Told with every angle. */
const angleNotes = [
  "theta = (2e/hbar) sigma / sigma_xx: twice the number in (hbar/e) S/cm over sigma_xx in S/cm, the number itself in (hbar/2e) S/cm; for charge sigma_xy / sigma_xx",
  "the angle is the intrinsic part alone, at the reference level; tau is one relaxation time for all states (Drude)",
  "measuring at high current densities is for local rules and trained people",
];

const roomK = 300;
/** Below this temperature the intrinsic curve is taken as it is here: no mesh follows less than a few meV. */
const coldestK = 20;
const mostTemperatures = 9;

/** Temperatures at which curves are computed: those typed, or a few spread over the file's. */
function sweptTemperatures(asked: readonly number[] | undefined, source: ResistivitySource): number[] {
  if (asked !== undefined) return [...asked];
  const kelvin = source.rows.flatMap((row) =>
    row.temperature_K === null ? [] : [Math.max(coldestK, row.temperature_K)],
  );
  if (kelvin.length === 0) return [roomK];
  const distinct = [...new Set(kelvin)];
  if (distinct.length <= mostTemperatures) return distinct;
  const [low, high] = [Math.min(...distinct), Math.max(...distinct)];
  return Array.from({ length: mostTemperatures }, (_, i) => low + ((high - low) * i) / (mostTemperatures - 1));
}

function resistivitySource(options: AngleOptions, facts: GridFacts): ResistivitySource {
  const { resistivity, resistivityFile } = options;
  if ((resistivity === undefined) === (resistivityFile === undefined))
    throw usageFault(
      resistivity === undefined ? "no resistivity is given" : "both --resistivity and --resistivity-file are given",
      'Add --resistivity "10.6 uohm cm" or --resistivity-file FILE.csv (temperature_K, resistivity [uohm cm], error), one of them.',
    );
  if (resistivity !== undefined) return singleResistivity(resistivity, facts);
  return tableResistivity(readTable("--resistivity-file", resistivityFile as string), facts);
}

function chosenResponses(options: AngleOptions, facts: GridFacts): string[] {
  const names = options.response ?? defaultResponses(facts).filter((name) => !name.startsWith("charge"));
  if (names.length === 0)
    throw usageFault("the grid holds no moment in hbar", "Name a response, e.g. --response charge:xy.");
  for (const name of names)
    if (facts.moments.find((moment) => moment.name === carrierOf(name))?.unit === "1")
      throw usageFault(
        `response "${name}": an angle needs charge or a moment in hbar`,
        "Name another with --response.",
      );
  return names;
}

function checkWindow(from: number, to: number, shift: number): void {
  if (from <= -shift + 1e-9 && to >= shift - 1e-9) return;
  throw usageFault(
    `--from ${from} --to ${to} does not hold level shifts of +-${shift} eV`,
    "Leave --from and --to away, or make --shift smaller.",
  );
}

/** Computes the curves about the reference level and reads angles, scattering time, measured values and series off them. */
export async function angle(
  directory: string,
  options: AngleOptions,
  run: RunOptions,
): Promise<{ result: AngleResult; curves: CurvesResult }> {
  const { facts } = openGrid(directory);
  const { resistivity: _value, resistivityFile: _file, measured, shift, ...forSweep } = options;
  const source = resistivitySource(options, facts);
  const { from = -shift, to = shift } = options;
  checkWindow(from, to, shift);
  const response = chosenResponses(options, facts);
  const temperature = sweptTemperatures(options.temperature, source);
  const carriers = response.map((name) => {
    const carrier = carrierOf(name);
    return { name, carrier, unit: responseUnit(carrier, facts, options.unit).unit };
  });
  const coldest = Math.min(...temperature);
  // Read before anything is computed: a wrong cell should not cost a run.
  const measurements =
    measured === undefined ? [] : readMeasurements(measured, { facts, responses: carriers, temperatureK: coldest });
  const curves = await sweep(directory, { ...forSweep, from, to, response, temperature }, run);
  const read: Read = { curves, facts, source };
  const responses = curves.responses.map((each) => angleResponse(read, each));
  const rows = measurements.map((each) => measuredRow(read, responses, each, shift));
  const told = toldTemperatures(read);
  return {
    curves,
    result: {
      format: "tidegauge.angle/1",
      version: productVersion,
      grid: curves.grid,
      job: { study: "angle", ...options },
      reference_eV: curves.reference_eV,
      resistivity_unit: facts.periodic === 3 ? "ohm m" : "ohm",
      resistivity: [...source.rows],
      shift_eV: shift,
      level_eV: curves.level_eV,
      scattering: told.map((kelvin) => scatteringRow(read, kelvin)),
      responses,
      measured: rows,
      series: seriesOf(rows, responses),
      sampling: curves.sampling,
      notes: [...curves.notes, ...angleNotes, ...ownNotes(told, options, measurements, coldest)],
    },
  };
}

function ownNotes(
  told: readonly number[],
  { temperature, measured }: AngleOptions,
  measurements: readonly Measurement[],
  coldest: number,
): string[] {
  const notes: string[] = [];
  if (told.some((kelvin) => kelvin < coldest))
    notes.push(`below ${coldest} K the intrinsic response is taken as at ${coldest} K`);
  if (temperature === undefined && told.length > mostTemperatures)
    notes.push(`the intrinsic response is computed at ${mostTemperatures} temperatures, straight lines between`);
  if (measured !== undefined && measurements.some(({ error }) => Number.isNaN(error)))
    notes.push("measured values without an error are judged as if it were 10%");
  return notes;
}
