// view.test.ts: is a contained sub-mesh, read through a view, the grid that would have been written on that sub-mesh?

import { join } from "node:path";
import { describe, expect, it } from "vitest";
import type { View } from "../../src/grid/grid.js";
import { openGrid } from "../../src/grid/open.js";
import { openReader, wantAll } from "../../src/grid/reader.js";
import { containedStrides, storedFacts, viewsOf } from "../../src/grid/view.js";
import { createGridWriter } from "../../src/grid/writer.js";
import { sweep, sweepOptions } from "../../src/studies/sweep.js";
import { fractionalK } from "../../src/zone/mesh.js";
import { description, matrixAt, scratchDirectory, writeRandom } from "./make.js";

const divisions = [6, 4, 2] as const;
const big = { ...description, divisions, offset: [0, 0.5, 0.25] as const };
const { directory, points } = writeRandom({}, big);
const view: View = { stride: 2, shift: [1, 0, 1] };
const flatOf = (i: number, j: number, k: number): number => (i * 4 + j) * 2 + k;
const chosen = [0, 1, 2].flatMap((i) => [0, 1].map((j) => flatOf(2 * i + 1, 2 * j, 1)));

describe("a view", () => {
  const grid = openGrid(directory, view);

  it("has the divisions, offset and k points of the sub-mesh", () => {
    const { facts } = grid;
    expect(facts.divisions).toEqual([3, 2, 1]);
    expect(facts.offset).toEqual([0.5, 0.25, 0.625]);
    expect(facts.points).toBe(6);
    const stored = openGrid(directory).facts;
    for (const [at, flat] of chosen.entries())
      for (const [j, x] of fractionalK(at, facts).entries()) expect(x).toBeCloseTo(fractionalK(flat, stored)[j], 14);
    expect(storedFacts(facts)).toEqual(stored);
  });

  it("reads the stored points it names, every number of them, in blocks of any size", () => {
    const reader = openReader(grid, wantAll(grid));
    for (const size of [1, 4, 6])
      for (let first = 0; first < 6; first += size) {
        const count = Math.min(size, 6 - first);
        const block = reader.read(first, count);
        for (let i = 0; i < count; i++) {
          const point = points[chosen[first + i]];
          expect(block.energyEv.subarray(3 * i, 3 * i + 3)).toEqual(point.energyEv);
          for (const a of [0, 1, 2]) expect(matrixAt(block.velocity[a], i, count, 3)).toEqual(point.velocity[a]);
          for (const [name, matrices] of point.moments)
            for (const [a, matrix] of matrices.entries())
              expect(matrixAt(block.moments.get(name)?.[a], i, count, 3)).toEqual(matrix);
          for (const [a, matrix] of (point.hessian ?? []).entries())
            expect(matrixAt(block.hessian?.[a], i, count, 3)).toEqual(matrix);
        }
      }
    reader.close();
  });

  it("sweeps to the bit like the grid that is written on the sub-mesh alone", async () => {
    const own = join(scratchDirectory(), "grid");
    const writer = createGridWriter(own, { ...big, divisions: [3, 2, 1], offset: grid.facts.offset });
    for (const flat of chosen) writer.add(points[flat]);
    writer.finish();
    for (const method of ["points", "cells", "refine"] as const) {
      // Random matrices at every point: no refinement of them ends, so that samples are limited.
      const limits = { accuracy: 1, samples: 1000, temperature: [1000] };
      const response = ["charge:xy", "spin:yz:x"];
      const options = sweepOptions.parse({ method, from: -3, to: 3, points: 7, response, ...limits });
      const [a, b] = [
        await sweep(directory, options, { workers: 1 }, { view }),
        await sweep(own, options, { workers: 1 }),
      ];
      expect(a.responses).toEqual(b.responses);
      expect(a.electrons_per_cell).toEqual(b.electrons_per_cell);
    }
  });

  it("is refused where the stride does not divide the mesh", () => {
    expect(() => openGrid(directory, { stride: 3, shift: [0, 0, 0] })).toThrow("no sub-mesh of stride 3");
    expect(() => openGrid(directory, { stride: 2, shift: [2, 0, 0] })).toThrow("no sub-mesh");
  });
});

describe("the views of a mesh", () => {
  const facts = { ...openGrid(directory).facts, divisions: [24, 12, 36] as const };

  it("have strides that divide every direction and leave enough points", () => {
    expect(containedStrides(facts, 3)).toEqual([2, 3, 4]);
    expect(containedStrides(facts, 4)).toEqual([2, 3]);
    expect(containedStrides({ ...facts, periodic: 2, divisions: [24, 12, 1] }, 3)).toEqual([2, 3, 4]);
  });

  it("are all shifts, each once, the unshifted first; or some of them that favour no direction", () => {
    for (const stride of [2, 3, 4]) {
      const all = viewsOf(facts, stride, 1000);
      expect(new Set(all.map(({ shift }) => shift.join())).size).toBe(stride ** 3);
      expect(all[0].shift).toEqual([0, 0, 0]);
    }
    const some = viewsOf(facts, 8, 64);
    for (const j of [0, 1, 2]) expect(new Set(some.map(({ shift }) => shift[j])).size).toBe(8);
  });
});
