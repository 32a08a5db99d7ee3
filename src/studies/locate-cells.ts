// locate-cells.ts: how do sums over cells, boxes and pairs become the ranked lists of one response?
import type { CurvesResult } from "../curves/result.js";
import { detailArray, detailNumbers } from "../engine/cell-detail.js";
import type { CellContributions } from "../engine/contributions.js";
import { signedSums, smallestPart } from "../engine/density-shares.js";
import type { Task } from "../engine/job.js";
import type { Triple } from "../grid/grid.js";
import type { Grid } from "../grid/open.js";
import { pointsPerCell } from "../grid/patches.js";
import type { Sections } from "../spectrum/sections.js";
import { reciprocalVectors } from "../zone/lattice.js";
import { cartesianK, fractionalK } from "../zone/mesh.js";
import { bandsOfSets, rankedPairs } from "./locate-parts.js";
import type { LocatedCell, LocatedResponse } from "./locate-result.js";

/** Parts of the sum of magnitudes for which the smallest part of the zone is told. */
const sharesTold = [0.5, 0.8, 0.9, 0.99];

/** Details of listed cells and the tasks, one a cell, that found them. */
export interface Found {
  readonly tasks: readonly Task[];
  readonly sections: Sections;
}

/** Contributions whose sizes add up to no more than this zone mean, angstrom^2, are round-off. */
const nothing = 1e-9;

/** Everything that is known of the zone at the level. */
export interface WholeZone {
  readonly grid: Grid;
  readonly sections: Sections;
  readonly contributions: CellContributions;
  readonly setOf: readonly number[];
  readonly found: Found;
  /** Cells to list. */
  readonly listed: number;
  readonly curves: CurvesResult;
}

/** All cells, largest magnitude of the response first; ties in the order of the mesh. */
export function listedCells({ main, correction }: CellContributions, response: number, responses: number): Uint32Array {
  const size = Float64Array.from({ length: main.length / responses }, (_, cell) =>
    Math.abs(main[cell * responses + response] + correction[cell * responses + response]),
  );
  return Uint32Array.from(size.keys()).sort((a, b) => size[b] - size[a] || a - b);
}

/** A task for every cell: its stored point, or the points of the patch that replace it. */
export function detailTasks(grid: Grid, cells: readonly number[]): Task[] {
  const places = new Map<number, Task>();
  for (const [patch, { facts }] of grid.patches.entries())
    for (const [at, cell] of (facts.patch?.cells ?? []).entries()) {
      const count = facts.patch === undefined ? 1 : pointsPerCell(facts.patch);
      places.set(cell, { first: at * count, count, patch });
    }
  return cells.map((cell) => places.get(cell) ?? { first: cell, count: 1 });
}

/** The cell that a detail task stands for. */
const cellOfTask = (grid: Grid, { first, count, patch }: Task): number =>
  patch === undefined ? first : (grid.patches[patch].facts.patch?.cells[first / count] ?? first);

type Detail = Pick<LocatedCell, "hottest" | "pair" | "closest">;

const tripleAt = (values: Float64Array, at: number): Triple => [values[at], values[at + 1], values[at + 2]];

/** `perCell`: from a sum over the mesh's cells to the response's unit. */
function detailOf(detail: Float64Array, response: number, factor: number, perCell: number): Detail {
  const at = detailNumbers.gap + response * detailNumbers.response;
  return {
    hottest: {
      k: tripleAt(detail, at + 1),
      density: factor * detail[at],
      gap_eV: detail[at + 4],
      lower: detail[at + 5],
      upper: detail[at + 6],
    },
    pair: { lower: detail[at + 7], upper: detail[at + 8], contribution: perCell * detail[at + 9] },
    closest: Number.isNaN(detail[0])
      ? null
      : { gap_eV: detail[0], k: tripleAt(detail, 1), lower: detail[4], upper: detail[5] },
  };
}

function cellRows(zone: WholeZone, response: number, order: Uint32Array, factor: number): LocatedCell[] {
  const { grid, contributions, found, curves } = zone;
  const { main, correction } = contributions;
  const responses = curves.responses.length;
  const perCell = factor / grid.facts.points;
  const reciprocal = reciprocalVectors(grid.facts.vectorsA);
  const details = new Map(found.tasks.map((task) => [cellOfTask(grid, task), found.sections[detailArray(task)]]));
  let magnitudes = 0;
  for (const cell of order)
    magnitudes += Math.abs(main[cell * responses + response] + correction[cell * responses + response]);
  let [cumulated, reached] = [0, 0];
  return Array.from(order.subarray(0, zone.listed), (cell, i): LocatedCell => {
    const at = cell * responses + response;
    const whole = main[at] + correction[at];
    cumulated += whole;
    reached += Math.abs(whole);
    const k = fractionalK(cell, grid.facts);
    return {
      rank: i + 1,
      cell,
      k,
      k_cartesian: cartesianK(k, reciprocal),
      contribution: perCell * whole,
      correction: perCell * correction[at],
      zone: (i + 1) / grid.facts.points,
      cumulated: perCell * cumulated,
      share: magnitudes > 0 ? reached / magnitudes : 0,
      ...detailOf(details.get(cell) as Float64Array, response, factor, perCell),
    };
  });
}

/** Sums along b3: [i1][i2], in zone means. */
function projectionOf({ grid, contributions, curves }: WholeZone, response: number, factor: number): number[][] {
  const { main, correction } = contributions;
  const [n1, n2, n3] = grid.facts.divisions;
  const responses = curves.responses.length;
  return Array.from({ length: n1 }, (_, i1) =>
    Array.from({ length: n2 }, (_unused, i2) => {
      let sum = 0;
      for (let i3 = 0; i3 < n3; i3++) {
        const at = ((i1 * n2 + i2) * n3 + i3) * responses + response;
        sum += main[at] + correction[at];
      }
      return (factor * sum) / n3;
    }),
  );
}

/** Contributions of every set of bands. */
function bySet({ sections, setOf, grid }: WholeZone, response: number, perCell: number): number[] {
  const { bands } = grid.facts;
  const [main, correction] = [sections["locate.bands"], sections["locate.bands.correction"]];
  return bandsOfSets(setOf).map((own) =>
    own.reduce((sum, band) => sum + perCell * (main[response * bands + band] + correction[response * bands + band]), 0),
  );
}

/** One response; `order`: all cells, ranked; `factor`: from zone means to its unit. */
export function locatedResponse(
  zone: WholeZone,
  response: number,
  order: Uint32Array,
  factor: number,
): Omit<LocatedResponse, "map" | "path"> {
  const { grid, sections, contributions, setOf, curves } = zone;
  const { points, bands } = grid.facts;
  const responses = curves.responses.length;
  const perCell = factor / points;
  const pairCount = (bands * (bands - 1)) / 2;
  const ofResponse = (name: string): Float64Array =>
    sections[name].subarray(response * pairCount, (response + 1) * pairCount);
  const pairs = rankedPairs(ofResponse("locate.pairs"), ofResponse("locate.pairs.correction"), setOf, perCell);
  const cells = cellRows(zone, response, order, factor);
  let [all, corrected] = [0, 0];
  for (const cell of order) {
    corrected += contributions.correction[cell * responses + response];
    all += contributions.main[cell * responses + response] + contributions.correction[cell * responses + response];
  }
  const { positive, negative } = signedSums(sections["locate.shares"], response);
  const [plus, minus] = factor < 0 ? [negative, positive] : [positive, negative];
  const { name, unit, value, error } = curves.responses[response];
  return {
    name,
    unit,
    value: value[0][0],
    error: error[0][0],
    cells_sum: perCell * all,
    pairs_sum: pairs.reduce((sum, { contribution }) => sum + contribution, 0),
    correction: perCell * corrected,
    positive: perCell * plus,
    negative: perCell * minus,
    vanishes: positive - negative < nothing * points,
    concentration: sharesTold.map((share) => {
      const { volume, net } = smallestPart(sections["locate.shares"], response, share);
      return { share, zone: volume / points, net: perCell * net };
    }),
    cells,
    cells_left: {
      count: order.length - cells.length,
      contribution: perCell * all - (cells.at(-1)?.cumulated ?? 0),
    },
    pairs,
    by_set: bySet(zone, response, perCell),
    projection: projectionOf(zone, response, factor),
  };
}
