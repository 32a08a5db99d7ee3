// request-result.ts: the result of `request`, as it is written to request.json, and read again by `sample --request`.
import { z } from "zod";
import type { Triple } from "../grid/grid.js";
import { meshIndices } from "../zone/mesh.js";

const number = z.number();
const triple = z.tuple([number, number, number]);
const counts = z.tuple([z.int().min(1), z.int().min(1), z.int().min(1)]);

/** Schema of request.json; what `sample` needs of it is checked, the rest is told. */
export const requestResult = z.object({
  format: z.literal("tidegauge.request/1"),
  version: z.string(),
  grid: z.object({
    title: z.string(),
    sha256: z.string(),
    bands: z.int(),
    divisions: counts,
    offset: triple,
    periodic: z.union([z.literal(2), z.literal(3)]),
    points: z.int(),
  }),
  job: z.record(z.string(), z.unknown()),
  /** Each cell is divided so along b1, b2, b3. */
  divide: counts,
  /** Best first. */
  cells: z
    .array(
      z.object({
        /** Flat index in the grid's mesh. */
        cell: z.int().min(0),
        index: triple,
        /** Its middle, in b1, b2, b3. */
        k: triple,
        /** Part of the models' error that this cell makes, over responses, levels and temperatures. */
        share: number,
        /** What remains of the models' error once this cell and all before it are computed, in parts of what it is now. */
        left: number,
      }),
    )
    .min(1),
  /** Where each response's error bar is largest: what it is, and what is expected once all cells are computed. */
  expected: z.array(
    z.object({
      name: z.string(),
      unit: z.string(),
      level_eV: number,
      temperature_K: number,
      value: number,
      error_now: number,
      error_sampling: number,
      error_expected: number,
    }),
  ),
  notes: z.array(z.string()),
});

export type RequestResult = z.infer<typeof requestResult>;

/** Fractional k of every point to compute, cell after cell in the order of the format, and what it weighs in the zone. */
export function requestedPoints(
  result: RequestResult,
): { readonly k: Triple; readonly cell: number; readonly weight: number }[] {
  const { divisions, offset, points } = result.grid;
  const [m1, m2, m3] = result.divide;
  const weight = 1 / (points * m1 * m2 * m3);
  return result.cells.flatMap(({ cell, index }) =>
    Array.from({ length: m1 * m2 * m3 }, (_, flat) => {
      const place = meshIndices(flat, result.divide);
      const k = [0, 1, 2].map(
        (j) => (index[j] + offset[j] + (place[j] + 0.5) / result.divide[j] - 0.5) / divisions[j],
      ) as unknown as Triple;
      return { k, cell, weight };
    }),
  );
}
