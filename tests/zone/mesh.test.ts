// mesh.test.ts: do flat index and k belong together, do cells tile the zone, and do sub-meshes partition the mesh?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import { cellVolume, dot, reciprocalVectors, type Vectors } from "../../src/zone/lattice.js";
import {
  cartesianK,
  cellEdges,
  fractionalK,
  type MeshFacts,
  meshIndices,
  smallestSubMeshes,
  spreadSubMeshes,
  subMeshOf,
} from "../../src/zone/mesh.js";

const vectorsA: Vectors = [
  [3, 0.2, -0.1],
  [0.5, 2.8, 0.3],
  [-0.4, 0.1, 3.3],
];
const layerVectors: Vectors = [
  [3, 0.2, 0],
  [0.5, 2.8, 0],
  [0, 0, 7],
];

const mesh = (divisions: Triple, offset: Triple = [0, 0, 0], periodic: 2 | 3 = 3): MeshFacts => ({
  vectorsA: periodic === 3 ? vectorsA : layerVectors,
  divisions,
  offset,
  periodic,
});

const pointsIn = ({ divisions }: MeshFacts): number => divisions[0] * divisions[1] * divisions[2];
const allOf = (facts: MeshFacts): number[] => Array.from({ length: pointsIn(facts) }, (_, flat) => flat);
const divisor = fc.integer({ min: 1, max: 12 });
const divisions = fc.tuple(divisor, divisor, divisor);

describe("mesh index", () => {
  it("is (i1 n2 + i2) n3 + i3, one to one", () => {
    fc.assert(
      fc.property(divisions, (n) => {
        const seen = new Set<number>();
        for (const flat of allOf(mesh(n))) {
          const [i1, i2, i3] = meshIndices(flat, n);
          expect([i1 < n[0], i2 < n[1], i3 < n[2]]).toEqual([true, true, true]);
          expect((i1 * n[1] + i2) * n[2] + i3).toBe(flat);
          seen.add(flat);
        }
        expect(seen.size).toBe(pointsIn(mesh(n)));
      }),
      { numRuns: 30 },
    );
  });

  it("goes to k = sum_j ((i_j + offset_j) / n_j) b_j and back by a_j . k / 2 pi", () => {
    const offset = fc.double({ min: 0, max: 0.999, noNaN: true });
    fc.assert(
      fc.property(divisions, fc.tuple(offset, offset, offset), (n, shift) => {
        const facts = mesh(n, shift);
        const reciprocal = reciprocalVectors(vectorsA);
        for (const flat of allOf(facts)) {
          const k = cartesianK(fractionalK(flat, facts), reciprocal);
          const index = meshIndices(flat, n);
          for (let j = 0; j < 3; j++) {
            const back = (dot(vectorsA[j], k) / (2 * Math.PI)) * n[j] - shift[j];
            expect(Math.abs(back - index[j])).toBeLessThan(1e-11);
          }
        }
      }),
      { numRuns: 20 },
    );
  });
});

describe("cells", () => {
  it("tile the zone: edges times divisions are the reciprocal vectors, volumes add up", () => {
    const facts = mesh([4, 6, 5]);
    const edges = cellEdges(facts);
    expect(edges).toHaveLength(3);
    const reciprocal = reciprocalVectors(vectorsA);
    for (let j = 0; j < 3; j++)
      for (let x = 0; x < 3; x++) expect(edges[j][x] * facts.divisions[j]).toBeCloseTo(reciprocal[j][x], 14);
    expect(cellVolume(edges as unknown as Vectors) * 120).toBeCloseTo((2 * Math.PI) ** 3 / cellVolume(vectorsA), 12);
  });

  it("have two edges in a layer, both in its plane", () => {
    const edges = cellEdges(mesh([4, 6, 1], [0, 0, 0], 2));
    expect(edges).toHaveLength(2);
    for (const edge of edges) expect(Math.abs(edge[2])).toBe(0);
  });
});

describe("contained sub-meshes", () => {
  it("take the smallest prime up to 5 that divides every periodic direction and leaves more than one point", () => {
    const strideOf = (n: Triple, periodic: 2 | 3 = 3) => smallestSubMeshes(mesh(n, [0, 0, 0], periodic))?.stride;
    expect(strideOf([4, 6, 8])).toBe(2);
    expect(strideOf([3, 6, 9])).toBeUndefined();
    expect(strideOf([6, 9, 12])).toBe(3);
    expect(strideOf([10, 15, 25])).toBe(5);
    expect(strideOf([4, 6, 9])).toBeUndefined();
    expect(strideOf([7, 14, 21])).toBeUndefined();
    expect(strideOf([2, 2, 2])).toBeUndefined();
    expect(strideOf([4, 6, 1])).toBeUndefined();
    expect(strideOf([4, 6, 1], 2)).toBe(2);
    expect(smallestSubMeshes(mesh([4, 6, 1], [0, 0, 0], 2))?.count).toBe(4);
    expect(smallestSubMeshes(mesh([6, 9, 12]))?.count).toBe(27);
  });

  it("are not all mirror images of each other where their spread is to tell an error", () => {
    const strideOf = (n: Triple, offset: Triple, periodic: 2 | 3 = 3) =>
      spreadSubMeshes(mesh(n, offset, periodic))?.stride;
    const half: Triple = [0.5, 0.5, 0.5];
    expect(strideOf([24, 24, 24], [0, 0, 0])).toBe(2);
    expect(strideOf([24, 24, 24], [0.25, 0.25, 0.25])).toBe(2);
    expect(strideOf([24, 24, 24], half)).toBe(3);
    expect(strideOf([24, 24, 24], [0, 0, 0.5])).toBe(3);
    expect(strideOf([16, 32, 8], half)).toBe(4);
    expect(strideOf([10, 20, 10], half)).toBe(5);
    expect(strideOf([14, 22, 26], half)).toBe(2);
    expect(strideOf([9, 9, 9], half)).toBe(3);
    expect(strideOf([7, 7, 7], half)).toBeUndefined();
    expect(spreadSubMeshes(mesh([200, 200, 1], [0.5, 0.5, 0], 2))).toEqual({ stride: 4, count: 16 });
    // Offsets of the sub-meshes in their own steps: with these strides some are no mirror image of the first.
    for (const [n, offset] of [
      [24, 0.5],
      [16, 0.5],
      [10, 0.5],
      [24, 0],
    ]) {
      const stride = strideOf([n, n, n], [offset, offset, offset]) as number;
      const distances = Array.from({ length: stride }, (_, j) => (j + offset) / stride).map((x) => Math.min(x, 1 - x));
      expect(new Set(distances.map((x) => x.toFixed(6))).size).toBeGreaterThan(1);
    }
  });

  it("partition the mesh into equal cosets; two points share one when they differ by multiples of the stride", () => {
    const cases: [Triple, 2 | 3][] = [
      [[4, 6, 8], 3],
      [[6, 9, 12], 3],
      [[10, 15, 1], 2],
    ];
    for (const [n, periodic] of cases) {
      const facts = mesh(n, [0, 0, 0], periodic);
      const sub = smallestSubMeshes(facts);
      if (sub === undefined) throw new Error("the mesh has sub-meshes");
      const members = Array.from({ length: sub.count }, () => new Set<string>());
      for (const flat of allOf(facts)) {
        const coset = subMeshOf(flat, facts, sub);
        const residues = meshIndices(flat, n).map((i) => i % sub.stride);
        members[coset].add(residues.slice(0, periodic).join());
      }
      expect(members.map((residues) => residues.size)).toEqual(members.map(() => 1));
      expect(new Set(members.flatMap((residues) => [...residues])).size).toBe(sub.count);
      const sizes = new Array<number>(sub.count).fill(0);
      for (const flat of allOf(facts)) sizes[subMeshOf(flat, facts, sub)]++;
      expect(new Set(sizes)).toEqual(new Set([pointsIn(facts) / sub.count]));
    }
  });
});
