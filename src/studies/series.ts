// series.ts: how do responses change along a family of grids, at fixed doping and at their peaks? Options, computation, result.
import { z } from "zod";
import { dataFault, usageFault } from "../base/errors.js";
import { productVersion } from "../base/version.js";
import type { CurvesResult, ResponseCurve } from "../curves/result.js";
import { resolvedEnergy } from "../engine/mesh-step.js";
import type { RunOptions } from "../engine/run.js";
import type { GridFacts } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { dopantCaution, dopeOptions } from "./dope.js";
import type { DopePeak } from "./dope-result.js";
import {
  askedDopings,
  checkDopingUnit,
  type Doped,
  type DopingUnit,
  dopedValue,
  heldByAll,
  indicesOf,
  peaksOf,
  preparedDoping,
  roundDopings,
} from "./doped-curves.js";
import { followPeaks } from "./series-peaks.js";
import type { SeriesMember, SeriesPeak, SeriesPoint, SeriesResponse, SeriesResult } from "./series-result.js";
import { orderedByTag, seriesTag } from "./series-tag.js";
import { intrinsicOnly, sweep } from "./sweep.js";

/** Options of `series`: those of `dope` without substitutes, and the tag. */
export const seriesOptions = dopeOptions
  .omit({ substitute: true, sites: true })
  .extend({ tag: z.string().min(1).max(200).optional() });

export type SeriesOptions = z.infer<typeof seriesOptions>;

/** A grid with its curves, read for dopings. */
interface Member {
  readonly name: string;
  readonly facts: GridFacts;
  readonly value: number;
  readonly doped: Doped;
  readonly meshEv: number;
}

/** Opens, orders and checks the grids before anything is computed. */
function planSeries(directories: readonly string[], options: SeriesOptions) {
  if (directories.length < 2)
    throw usageFault("a series needs two grids or more", "Name them all, or give a pattern such as 'strain-*'.");
  const grids = directories.map((name) => ({ name, facts: openGrid(name).facts }));
  const tag = seriesTag(grids, options.tag);
  const members = orderedByTag(grids, tag);
  const other = grids.find(({ facts }) => facts.periodic !== grids[0].facts.periodic);
  if (other !== undefined)
    throw dataFault(
      `${grids[0].name} is a ${kindOf(grids[0].facts)}, ${other.name} a ${kindOf(other.facts)}: their responses cannot be compared`,
      "Give crystals alone or layers alone.",
    );
  checkDopingUnit(options.dopingUnit, grids[0].facts.periodic);
  return { tag, members };
}

const kindOf = ({ periodic }: GridFacts): string => (periodic === 3 ? "crystal" : "layer");

/** Computes one sweep a grid, all by the same job, and compares them. */
export async function series(
  directories: readonly string[],
  options: SeriesOptions,
  run: RunOptions,
): Promise<SeriesResult> {
  const { tag, members } = planSeries(directories, options);
  const { doping: _, dopingUnit: __, prominence: ___, tag: ____, ...forSweep } = options;
  const temperature = [...new Set([0, ...options.temperature])].sort((a, b) => a - b);
  const read: Member[] = [];
  for (const [at, { grid, value }] of members.entries()) {
    const onProgress = (done: number, total: number): void =>
      run.onProgress?.(at * total + done, members.length * total);
    const curves = await sweep(grid.facts.directory, { ...forSweep, temperature }, { ...run, onProgress });
    const [low, high] = [curves.reference_eV + options.from, curves.reference_eV + options.to];
    const meshEv = options.method === "refine" ? 0 : resolvedEnergy(grid.facts, low, high);
    read.push({ name: grid.name, facts: grid.facts, value, doped: preparedDoping(curves, [], 1), meshEv });
  }
  return assembled(read, tag, options);
}

/** The dopings of the series, the same for all, and their unit. */
function commonDopings(members: readonly Member[], asked: readonly number[], options: SeriesOptions) {
  const [{ doped }] = members;
  if (options.doping !== undefined) {
    for (const { name, doped: each } of members) askedDopings(each, options, heldByAll(each, asked), `${name}: `);
    return { dopings: options.doping, unit: options.dopingUnit };
  }
  if (!members.every(({ doped: each }) => each.few)) return { dopings: [0], unit: "per_cell" as DopingUnit };
  const unit = doped.curves.doping_density_unit;
  const held = members.map(({ doped: each }) => heldByAll(each, asked).map((limit) => limit * each.scale.densityOfOne));
  const all = [Math.max(...held.map(([least]) => least)), Math.min(...held.map(([, most]) => most))] as const;
  return { dopings: roundDopings(1, unit, all), unit: unit as DopingUnit };
}

const inCell = (doping: number, unit: DopingUnit, { doped }: Member): number =>
  unit === "per_cell" ? doping : doping / doped.scale.densityOfOne;

function pointAt(member: Member, name: string, t: number, perCell: number): SeriesPoint {
  const { level_eV, value, error } = dopedValue(member.doped, responseOf(member, name), t, perCell);
  const density = perCell * member.doped.scale.densityOfOne;
  return { tag: member.value, doping_per_cell: perCell, doping_density: density, level_eV, value, error };
}

const responseOf = ({ doped }: Member, name: string): ResponseCurve =>
  doped.curves.responses.find((response) => response.name === name) as ResponseCurve;

const peakPoint = (member: Member, peak: DopePeak): SeriesPeak => ({
  tag: member.value,
  doping_per_cell: peak.doping.per_cell,
  doping_density: peak.doping.density,
  level_eV: peak.level_eV,
  value: peak.value,
  error: peak.error,
  width_eV: peak.width_eV,
  resolved: peak.resolved,
});

function assembled(members: readonly Member[], tag: string, options: SeriesOptions): SeriesResult {
  const [{ doped }] = members;
  const { curves } = doped;
  const asked = indicesOf(
    curves,
    [...new Set(options.temperature)].sort((a, b) => a - b),
  );
  const { dopings, unit } = commonDopings(members, asked, options);
  const { tag: _, ...rest } = options;
  return {
    format: "tidegauge.series/1",
    version: productVersion,
    job: { study: "series", ...rest, tag },
    tag,
    members: members.map(memberOf),
    temperature_K: asked.map((t) => curves.temperature_K[t]),
    dopings: [...dopings],
    doping_unit: unit,
    density_unit: curves.doping_density_unit,
    responses: curves.responses.map(({ name, unit: told }) => ({
      name,
      unit: told,
      at_dopings: dopings.flatMap((doping) =>
        asked.map((t) => ({
          doping,
          temperature_K: curves.temperature_K[t],
          points: members.map((member) => pointAt(member, name, t, inCell(doping, unit, member))),
        })),
      ),
      peaks: asked.flatMap((t) => peaksAlong(members, name, t, options)),
    })),
    notes: notesOf(members),
  };
}

function peaksAlong(
  members: readonly Member[],
  name: string,
  t: number,
  options: SeriesOptions,
): SeriesResponse["peaks"] {
  const each = members.map((member) => {
    const resolution = { meshEv: member.meshEv, prominence: options.prominence };
    return peaksOf(member.doped, responseOf(member, name), t, resolution).map((peak) => peakPoint(member, peak));
  });
  const temperature_K = members[0].doped.curves.temperature_K[t];
  return followPeaks(each).map((points) => ({ temperature_K, points }));
}

function memberOf({ name, value, doped }: Member): SeriesMember {
  const { grid, reference_eV, sampling } = doped.curves;
  const { title, sha256, divisions, bands } = grid;
  const { electrons, densityOfOne } = doped.scale;
  return {
    grid: name,
    title,
    sha256,
    divisions,
    bands,
    tag: value,
    reference_eV,
    electrons_per_cell: electrons,
    density_of_one: densityOfOne,
    sampling,
  };
}

/** What is not alike from member to member, and the notes that all of them have. */
function notesOf(members: readonly Member[]): string[] {
  const all: CurvesResult[] = members.map(({ doped }) => doped.curves);
  const shared = all[0].notes.filter((note) => all.every(({ notes }) => notes.includes(note)));
  const differ = (what: string, of: (member: Member) => unknown): string[] =>
    new Set(members.map((member) => JSON.stringify(of(member)))).size > 1
      ? [`not alike in all grids: ${what}; a change along the series may come from it`]
      : [];
  return [
    intrinsicOnly,
    ...shared.filter((note) => note !== intrinsicOnly),
    "each grid is doped from its own neutral crystal, and levels are relative to its own reference",
    ...differ("the mesh", ({ facts }) => facts.divisions),
    ...differ("the number of bands", ({ facts }) => facts.bands),
    ...differ("the second derivatives", ({ facts }) => facts.hessian),
    ...differ("the number of electrons", ({ facts }) => facts.electrons),
    dopantCaution,
  ];
}
