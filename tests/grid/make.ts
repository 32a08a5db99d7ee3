// make.ts: small random band grids for the tests of this folder: a description, its k points, and a place to put them.
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll } from "vitest";
import type { MatrixBlock, MomentFacts } from "../../src/grid/grid.js";
import { viewOf } from "../../src/grid/reader.js";
import { createGridWriter, type GridDescription, type GridLayout, type PointData } from "../../src/grid/writer.js";

const made: string[] = [];

/** A directory of its own, removed after the file's tests. */
export function scratchDirectory(): string {
  const path = mkdtempSync(join(tmpdir(), "grid-test-"));
  made.push(path);
  return path;
}

afterAll(() => {
  for (const path of made) rmSync(path, { recursive: true, force: true });
});

/** Numbers in [-1, 1) that depend on the seed alone (a linear congruential generator, Numerical Recipes' constants). */
export function numbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 31 - 1;
  };
}

/** A random Hermitian matrix, bra major, complex interleaved; real symmetric where `real`. */
export function hermitian(bands: number, next: () => number, real = false): Float64Array {
  const matrix = new Float64Array(2 * bands * bands);
  for (let bra = 0; bra < bands; bra++) {
    for (let ket = bra; ket < bands; ket++) {
      const [re, im] = [3 * next(), real || bra === ket ? 0 : 3 * next()];
      matrix.set([re, im], 2 * (bra * bands + ket));
      matrix.set([re, bra === ket || real ? 0 : -im], 2 * (ket * bands + bra));
    }
  }
  return matrix;
}

export const spin: MomentFacts = { name: "spin", directions: 3, kind: "axial", underTimeReversal: "odd", unit: "hbar" };
export const layer: MomentFacts = {
  name: "layer",
  directions: 1,
  kind: "scalar",
  underTimeReversal: "even",
  unit: "1",
};

/** 3 x 2 x 2 points, 3 bands, two moments, a hessian. */
export const description: GridDescription = {
  title: "random",
  vectorsA: [
    [0, 1.5, 1.5],
    [1.5, 0, 1.5],
    [1.5, 1.5, 0],
  ],
  periodic: 3,
  divisions: [3, 2, 2],
  offset: [0, 0.5, 0.25],
  bands: 3,
  electronsPerBand: 1,
  fermiEv: 0.5,
  electrons: 2,
  moments: [spin, layer],
  hessian: "array",
  tags: { strain_percent: -0.5 },
  provenance: { made: "by a test" },
};

/** The k points of a description, random from a seed. */
export function pointsOf(grid: GridDescription, seed = 7, real = false): PointData[] {
  const next = numbers(seed);
  const several = (count: number) => Array.from({ length: count }, () => hermitian(grid.bands, next, real));
  const total = grid.divisions[0] * grid.divisions[1] * grid.divisions[2];
  return Array.from({ length: total }, () => ({
    energyEv: Float64Array.from({ length: grid.bands }, () => 5 * next()).sort(),
    velocity: several(3),
    moments: new Map(grid.moments.map((moment) => [moment.name, several(moment.directions)])),
    hessian: grid.hessian === "array" ? several(6) : undefined,
  }));
}

/** Writes a description's random points into a new directory; returns it and the points. */
export function writeRandom(layout: GridLayout = {}, grid: GridDescription = description, real = false) {
  const directory = join(scratchDirectory(), "grid");
  const points = pointsOf(grid, 7, real);
  const writer = createGridWriter(directory, grid, layout);
  for (const point of points) writer.add(point);
  return { directory, points, grid: writer.finish() };
}

/** The matrix of point `index` of a block as numbers, bra major. */
export function matrixAt(matrices: MatrixBlock | undefined, index: number, count: number, bands: number): Float64Array {
  if (matrices === undefined) throw new Error("the matrix was not read");
  const view = viewOf(matrices, count, bands);
  const out = new Float64Array(2 * bands * bands);
  for (let bra = 0; bra < bands; bra++) {
    for (let ket = 0; ket < bands; ket++) {
      for (let part = 0; part < 2; part++) out[2 * (bra * bands + ket) + part] = view.get(index, bra, ket, part);
    }
  }
  return out;
}
