// write.test.ts: is the band grid of a sample what the model says, in one eigenbasis per k, and read back as it was written?
import { existsSync, mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import type { Block, MatrixBlock, Triple } from "../../src/grid/grid.js";
import { openReader, wantAll } from "../../src/grid/reader.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { createSampler } from "../../src/samples/eigenbasis.js";
import type { ComplexMatrix, SampleModel } from "../../src/samples/model.js";
import { writeSample } from "../../src/samples/write.js";
import { element, jacobiEigen, momentInEOver2Pi, naiveIntegrals, reciprocal } from "./naive.js";

const root = mkdtempSync(join(tmpdir(), "samples-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));
let count = 0;
const fresh = (): string => join(root, `grid-${count++}`);

function written(
  model: SampleModel,
  divisions: Triple,
  offset: Triple,
  hessian = true,
): { block: Block; directory: string } {
  const directory = fresh();
  const grid = writeSample(model, { directory, divisions, offset, hessian });
  if (grid === undefined) throw new Error("stopped");
  const reader = openReader(grid, wantAll(grid));
  return { block: reader.read(0, reader.facts.points), directory };
}

const entry = (m: MatrixBlock, i: number, n: number, bra: number, ket: number): [number, number] => {
  const at = m.offset + i * m.stride + 2 * (bra * n + ket);
  return [m.data[at], m.data[at + 1]];
};

const meshK = (model: SampleModel, divisions: Triple, offset: Triple, flat: number): Triple => {
  const [, n2, n3] = divisions;
  const index = [Math.floor(flat / (n2 * n3)), Math.floor(flat / n3) % n2, flat % n3];
  const f = index.map((i, j) => (i + offset[j]) / divisions[j]);
  const b = reciprocal(model.vectorsA);
  return [0, 1, 2].map((x) => f[0] * b[0][x] + f[1] * b[1][x] + f[2] * b[2][x]) as unknown as Triple;
};

describe("writeSample", () => {
  it("writes energies and matrices of one eigenbasis: products around closed loops agree with the model's", () => {
    const model = buildSample("random", { bands: "4", periodic: "3", seed: "3" });
    const [divisions, offset]: [Triple, Triple] = [
      [2, 3, 2],
      [0.25, 0, 0.5],
    ];
    const { block } = written(model, divisions, offset);
    expect(block.count).toBe(12);
    for (let i = 0; i < block.count; i++) {
      const at = model.at(meshK(model, divisions, offset, i));
      const { values, vectors } = jacobiEigen(at.h);
      const spin = model.moments.get("spin")?.[2] ?? at.h;
      const fixed: readonly ComplexMatrix[] = [at.dh[0], spin, at.d2h?.[5] ?? at.h];
      const stored = [block.velocity[0], block.moments.get("spin")?.[2], block.hessian?.[5]] as MatrixBlock[];
      for (let n = 0; n < 4; n++) expect(block.energyEv[4 * i + n]).toBeCloseTo(values[n], 11);
      // <0|v_x|1> <1|s_z|2> <2|d2H_xy|0> has no phase left to choose.
      const loop = (e: (m: number, bra: number, ket: number) => [number, number]): [number, number] =>
        [e(0, 0, 1), e(1, 1, 2), e(2, 2, 0)].reduce(([a, b], [c, d]) => [a * c - b * d, a * d + b * c]);
      const expected = loop((m, bra, ket) => element(vectors[bra], fixed[m], vectors[ket]));
      const found = loop((m, bra, ket) => entry(stored[m], i, 4, bra, ket));
      expect(found[0]).toBeCloseTo(expected[0], 9);
      expect(found[1]).toBeCloseTo(expected[1], 9);
    }
  });

  it("stores k-dependent moments: Rashba's orbital Hall conductivity comes back from the file", () => {
    const model = buildSample("rashba");
    const [divisions, offset]: [Triple, Triple] = [
      [60, 60, 1],
      [0.5, 0.5, 0],
    ];
    const { block } = written(model, divisions, offset, false);
    expect(block.hessian).toBeUndefined();
    const query = { muEv: 1, kTEv: 0.2 };
    const response = { flow: 0, field: 1, moment: "orbital", g: 2 };
    const [expected] = naiveIntegrals(model, divisions, offset, response, [query]).map(momentInEOver2Pi);
    const stored = storedOrbital(block, query.muEv, query.kTEv, (model.vectorsA[0][0] as number) ** 2);
    expect(stored).toBeCloseTo(expected, 12);
    expect(stored / (2 * Math.PI)).toBeCloseTo(0.039720233418, 6);
  });

  it("records level, moments and provenance", () => {
    const facts = (name: string, parameters: Record<string, string>): unknown => {
      const model = buildSample(name, parameters);
      const grid = writeSample(model, { directory: fresh(), divisions: [2, 2, 1], tags: { step: 1 } });
      const { fermiEv, electrons, electronsPerBand, moments, tags, hessian } = grid?.facts ?? {};
      return { fermiEv, electrons, electronsPerBand, moments: moments?.map((m) => m.name), tags, hessian };
    };
    expect(facts("random", { periodic: "2", bands: "4" })).toEqual({
      fermiEv: undefined,
      electrons: 2,
      electronsPerBand: 1,
      moments: ["spin", "orbital"],
      tags: { step: 1 },
      hessian: "array",
    });
    expect(facts("haldane", {})).toMatchObject({ fermiEv: 0, electrons: 1, moments: [] });
  });

  it("tells its progress and leaves nothing behind when stopped", () => {
    const directory = fresh();
    const told: number[] = [];
    const model = buildSample("dirac");
    const grid = writeSample(model, { directory, divisions: [40, 40, 1] }, (done) => {
      told.push(done);
      return told.length < 3;
    });
    expect(grid).toBeUndefined();
    expect(told).toEqual([256, 512, 768]);
    expect(existsSync(directory)).toBe(false);
  });

  it("refuses meshes that cannot be", () => {
    const layer = buildSample("haldane");
    const options = { directory: fresh(), divisions: [4, 4, 2] as Triple };
    expect(() => writeSample(layer, options)).toThrow("cannot be sampled on 4 x 4 x 2");
    expect(() => writeSample(layer, { ...options, divisions: [4, 0, 1] })).toThrow("4 x 0 x 1");
    expect(() => writeSample(layer, { ...options, divisions: [4, 4, 1], offset: [0, 1, 0] })).toThrow("offset 0, 1, 0");
    expect(existsSync(options.directory)).toBe(false);
  });

  it("samples a degenerate point into exactly Hermitian matrices", () => {
    const sample = createSampler(buildSample("luttinger"), "array");
    const { velocity, hessian = [] } = sample([0, 0, 0]);
    for (const m of [...velocity, ...hessian]) for (let n = 0; n < 4; n++) expect(m[2 * (n * 4 + n) + 1]).toBe(0);
  });
});

/** orbital:xy:z from the stored matrices of two bands, in e/2pi. */
function storedOrbital(block: Block, muEv: number, kTEv: number, cellA2: number): number {
  const [vx, vy] = [block.velocity[0], block.velocity[1]] as MatrixBlock[];
  const orbital = block.moments.get("orbital")?.[2] as MatrixBlock;
  let sum = 0;
  for (let i = 0; i < block.count; i++) {
    const e = [block.energyEv[2 * i], block.energyEv[2 * i + 1]];
    // j_01 = (1/2) sum_p (L_0p v_p1 + v_0p L_p1).
    const j: [number, number] = [0, 0];
    for (let p = 0; p < 2; p++) {
      for (const [left, right] of [
        [orbital, vx],
        [vx, orbital],
      ]) {
        const [a, b] = entry(left, i, 2, 0, p);
        const [c, d] = entry(right, i, 2, p, 1);
        j[0] += (a * c - b * d) / 2;
        j[1] += (a * d + b * c) / 2;
      }
    }
    const [re, im] = entry(vy, i, 2, 1, 0);
    const omega = (-2 * (j[0] * im + j[1] * re)) / (e[0] - e[1]) ** 2;
    const f = e.map((x) => 1 / (1 + Math.exp((x - muEv) / kTEv)));
    sum += (f[0] - f[1]) * omega;
  }
  return (2 * Math.PI * sum) / block.count / cellA2;
}
