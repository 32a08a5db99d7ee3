// roundtrip.test.ts: what is written comes back, in every layout that the format allows.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { Grid } from "../../src/grid/reader.js";
import { openGrid, openReader, wantAll } from "../../src/grid/reader.js";
import type { ArrayLayout, GridDescription, PointData } from "../../src/grid/writer.js";
import { description, matrixAt, writeRandom } from "./make.js";

/** Compares every number of a grid with the points, read in blocks of `count`. `relative` is the width of the type. */
function expectSame(grid: Grid, points: readonly PointData[], count: number, relative: number): void {
  const reader = openReader(grid, wantAll(grid));
  const { bands } = grid.facts;
  const near = (got: ArrayLike<number>, expected: Float64Array): void => {
    for (let index = 0; index < expected.length; index++) {
      const difference = Math.abs(got[index] - expected[index]);
      if (!(difference <= relative * Math.abs(expected[index]))) {
        throw new Error(`number ${index} is ${got[index]}, expected ${expected[index]}`);
      }
    }
  };
  for (let first = 0; first < points.length; first += count) {
    const block = reader.read(first, Math.min(count, points.length - first));
    for (let index = 0; index < block.count; index++) {
      const point = points[first + index];
      near(block.energyEv.subarray(index * bands, (index + 1) * bands), point.energyEv);
      point.velocity.forEach((matrix, axis) => {
        near(matrixAt(block.velocity[axis], index, block.count, bands), matrix);
      });
      for (const [name, matrices] of point.moments) {
        matrices.forEach((matrix, axis) => {
          near(matrixAt(block.moments.get(name)?.[axis], index, block.count, bands), matrix);
        });
      }
      point.hessian?.forEach((matrix, pair) => {
        near(matrixAt(block.hessian?.[pair], index, block.count, bands), matrix);
      });
    }
  }
  reader.close();
}

const names = ["energy", "velocity", "moments.spin", "moments.layer", "hessian"];
const width = (type: string | undefined): number => (type === "float32" || type === "complex64" ? 2 ** -23 : 2 ** -51);

describe("a canonical band grid", () => {
  it("comes back bit by bit, with its facts", () => {
    const { directory, points, grid } = writeRandom();
    expectSame(grid, points, 5, 0);
    const { facts } = openGrid(directory);
    const { title, vectorsA, divisions, offset, bands, electrons, fermiEv, moments, hessian, tags } = description;
    expect(facts).toMatchObject({
      title,
      vectorsA,
      divisions,
      offset,
      bands,
      electrons,
      fermiEv,
      moments,
      hessian,
      tags,
    });
    expect(facts.points).toBe(12);
    expect(facts.bytes).toBe(12 * (3 * 8 + 13 * 9 * 16));
    expect(facts.sha256).toMatch(/^[0-9a-f]{64}$/);
    expect(grid.slowArrays).toEqual([]);
    expect(grid.provenance).toEqual({ made: "by a test", writer: "tidegauge" });
  });
});

describe("layouts", () => {
  const axesOf = (name: string): string[] => {
    if (name === "energy") return ["k", "band"];
    return ["k", name === "hessian" ? "pair" : "direction", "bra", "ket"];
  };
  const layoutOf = (name: string): fc.Arbitrary<ArrayLayout> =>
    fc.record({
      type: name === "energy" ? fc.constantFrom("float32", "float64") : fc.constantFrom("complex64", "complex128"),
      axes: fc.shuffledSubarray(axesOf(name), { minLength: axesOf(name).length }),
      unit: fc.constantFrom(...unitsOf(name)),
      byteOrder: fc.constantFrom("little", "big"),
      container: fc.constantFrom("raw", "npy"),
      pieces: fc.constantFrom(1, 2, 12),
    }) as fc.Arbitrary<ArrayLayout>;
  const unitsOf = (name: string): string[] => {
    if (name === "energy") return ["eV", "meV", "hartree", "rydberg"];
    if (name === "velocity") return ["eV*angstrom", "hartree*bohr", "rydberg*bohr", "m/s"];
    return name === "hessian" ? ["eV*angstrom^2", "hartree*bohr^2", "rydberg*bohr^2"] : ["hbar", "half-hbar"];
  };

  it("come back for random types, axes, units, byte orders, containers and numbers of files", () => {
    const layouts = fc.record(
      Object.fromEntries(names.filter((name) => name !== "moments.layer").map((name) => [name, layoutOf(name)])),
    );
    fc.assert(
      fc.property(layouts, fc.integer({ min: 1, max: 12 }), fc.boolean(), (arrays, count, small) => {
        const { points, grid } = writeRandom({ arrays, ...(small ? { blockBytes: 4000 } : {}) });
        const worst = Math.max(...Object.values(arrays).map((layout) => width(layout.type)));
        expectSame(grid, points, count, worst);
        const slow = names.filter((name) => arrays[name]?.axes !== undefined && arrays[name].axes[0] !== "k");
        expect(grid.slowArrays).toEqual(slow);
      }),
      { numRuns: 40 },
    );
  }, 60_000);

  const orders = (items: string[]): string[][] =>
    items.length < 2
      ? [items]
      : items.flatMap((item) => orders(items.filter((other) => other !== item)).map((rest) => [item, ...rest]));

  it.each(orders(["k", "direction", "bra", "ket"]))("axes %s %s %s %s come back bit by bit", (...axes) => {
    const arrays = { velocity: { axes, pieces: 2 } as ArrayLayout, "moments.layer": { axes } as ArrayLayout };
    const { points, grid } = writeRandom({ arrays, blockBytes: 3000 });
    expectSame(grid, points, 5, 0);
  });

  it("real symmetric matrices come back from real types", () => {
    const arrays = Object.fromEntries(names.map((name) => [name, { type: "float64" } as ArrayLayout]));
    const { points, grid } = writeRandom({ arrays }, description, true);
    expectSame(grid, points, 7, 0);
  });

  it("a layer with one band and no moments", () => {
    const layerGrid: GridDescription = {
      ...description,
      vectorsA: [
        [2, 0, 0],
        [-1, 1.7, 0],
        [0, 0, 5],
      ],
      periodic: 2,
      divisions: [5, 4, 1],
      offset: [0, 0, 0],
      bands: 1,
      electrons: 1,
      fermiEv: undefined,
      moments: [],
      hessian: "free-electron",
    };
    const { points, grid } = writeRandom({}, layerGrid);
    expectSame(grid, points, 3, 0);
    expect(grid.facts).toMatchObject({ periodic: 2, hessian: "free-electron", moments: [], fermiEv: undefined });
  });
});
