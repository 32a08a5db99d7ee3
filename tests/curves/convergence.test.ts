// convergence.test.ts: are rates, extrapolated errors and bounds those of errors made by a known law?
import { describe, expect, it } from "vitest";
import {
  aliasGrowth,
  biasGrowth,
  distance,
  type Evidence,
  fitFall,
  type MeshCurves,
  plainBounds,
  refinedBounds,
  smoothed,
} from "../../src/curves/convergence.js";
import { createSource } from "./noise.js";

const levels = 41;
const truth = Array.from({ length: levels }, (_, i) => 1 + Math.sin(i / 7));

/**
 * Plain sums as aliases make them: the error of shift j of stride s is a sum of Fourier coefficients F(m) cos(2 pi m j / s), m over the multiples
 * of n / s; `coefficient(m)` is F over its size at the stored mesh's first alias.
 */
function aliased(coefficient: (m: number) => number, stride: number): MeshCurves {
  const plain = Array.from({ length: stride }, (_, shift) =>
    truth.map((value, level) => {
      let error = 0;
      for (let m = 1; m <= 40 * stride; m++)
        error += coefficient(m / stride) * Math.cos((2 * Math.PI * m * shift) / stride);
      return value + error * (1 + 0.3 * Math.cos(level / 3));
    }),
  );
  return { step: stride, plain, refined: [] };
}

const known = { plainOrder: 2, refinedOrder: 3.4, reach: 2, bar: [], samplingBar: [] };

describe("fitFall", () => {
  for (const rate of [1.5, 2, 4])
    it(`finds error ~ step^${rate} and the error of the finest mesh`, () => {
      for (const growth of [aliasGrowth, biasGrowth]) {
        const steps = [2, 3, 4];
        const found = fitFall(
          steps,
          steps.map((step) => 0.01 * growth(step, rate)),
          growth,
          9,
        );
        expect(found.from).toBe(3);
        expect(found.rate).toBeCloseTo(rate, 2);
        expect(found.error).toBeCloseTo(0.01, 5);
      }
    });

  it("assumes a rate where fewer than two meshes differ, and knows nothing where there is none", () => {
    expect(fitFall([2], [0.3], aliasGrowth, 1)).toEqual({ rate: 1, from: 1, error: 0.3 / Math.sqrt(3) });
    expect(fitFall([2, 4], [0, 0.1], aliasGrowth, 2).from).toBe(1);
    expect(fitFall([], [], aliasGrowth, 2)).toMatchObject({ from: 0, error: Number.NaN });
  });
});

describe("distance and smoothed", () => {
  it("are root mean squares over shifts and neighbours", () => {
    expect(
      distance(
        [
          [1, 5],
          [3, 5],
        ],
        [1, 1],
        0,
      ),
    ).toEqual([Math.sqrt(2), 4]);
    expect(smoothed([3, 0, 0], 1)).toEqual([3 / Math.SQRT2, Math.sqrt(3), 0]);
  });
});

describe("plain sums", () => {
  const boundOf = (coefficient: (m: number) => number) => {
    const meshes = [1, 2, 3, 4].map((stride) => aliased(coefficient, stride));
    const { bound, rates } = plainBounds({ ...known, meshes });
    const off = meshes[0].plain[0].map((value, level) => Math.abs(value - truth[level]));
    return { bound, rates, off };
  };
  // Errors that fall as powers: the bound holds the error, and is no more than ten times as large; where they fall faster than a metal's
  // (power 2 here), the bound does not count on it from a mesh of twice the step on.
  for (const power of [2, 3, 4])
    it(`with coefficients ~ m^-${power}: rate ${power}, the bound holds and is not absurd`, () => {
      const { bound, rates, off } = boundOf((m) => 0.01 * m ** -power);
      for (const level of truth.keys()) {
        expect(bound[level]).toBeGreaterThan(off[level]);
        expect(bound[level]).toBeLessThan((10 * off[level] * aliasGrowth(2, Math.max(2, power))) / aliasGrowth(2, 2));
        // Aliases that so few shifts cannot tell apart add in phase, which shifts the rate by up to a half.
        expect(Math.abs(rates[level].rate - power)).toBeLessThan(0.6);
      }
    });

  it("with exponentially small coefficients: the bound holds, and falls with them", () => {
    const { bound, off } = boundOf((m) => Math.exp(-12 * m));
    for (const level of truth.keys()) {
      expect(bound[level]).toBeGreaterThan(off[level]);
      // Less than what the mesh of twice the step is off by.
      expect(bound[level]).toBeLessThan(1.3 * Math.exp(-6));
    }
  });

  it("a refined value shows an error that the coarser meshes share", () => {
    const shared = (mesh: MeshCurves): MeshCurves => ({
      ...mesh,
      plain: mesh.plain.map((curve) => curve.map((value) => value + 0.2)),
    });
    const meshes = [1, 2, 3].map((stride) => shared(aliased((m) => 1e-4 * m ** -2, stride)));
    const evidence: Evidence = {
      ...known,
      meshes: [{ ...meshes[0], refined: [truth] }, ...meshes.slice(1)],
      bar: truth.map(() => 0.01),
      samplingBar: truth.map(() => 0.005),
    };
    for (const bound of plainBounds(evidence).bound) expect(bound).toBeCloseTo(0.22, 3);
    // Where it agrees within its bars, the spread may be surer than it.
    const agreeing = { ...evidence, meshes: [{ ...meshes[0], refined: [meshes[0].plain[0]] }, ...meshes.slice(1)] };
    for (const bound of plainBounds(agreeing).bound) expect(bound).toBeLessThan(2e-3);
  });

  it("no coarser mesh, no bound; shifts that mirrors make equal do not count", () => {
    const [own, half, third] = [1, 2, 3].map((stride) => aliased((m) => 0.01 * m ** -2, stride));
    const equal = { ...half, plain: half.plain.map(() => own.plain[0]), blind: true };
    expect(plainBounds({ ...known, meshes: [own] }).bound.every(Number.isNaN)).toBe(true);
    expect(plainBounds({ ...known, meshes: [own, equal] }).bound.every(Number.isNaN)).toBe(true);
    expect(plainBounds({ ...known, meshes: [own, equal, third] })).toEqual(
      plainBounds({ ...known, meshes: [own, third] }),
    );
  });

  it("scatter without a law: bounds hold the error 90 times in 100", () => {
    const normal = createSource(5);
    let held = 0;
    const runs = 40;
    for (let run = 0; run < runs; run++) {
      const size = (stride: number): number => 0.01 * stride ** 2;
      // The mean over all shifts is the stored mesh's sum.
      const meshes = [1, 2, 3, 4].map((stride): MeshCurves => {
        const shifts = stride === 1 ? 1 : stride ** 2;
        return {
          step: stride,
          refined: [],
          plain: Array.from({ length: shifts }, () => truth.map((x) => x + size(stride) * normal())),
        };
      });
      const { bound } = plainBounds({ ...known, meshes });
      held += truth.filter((x, level) => Math.abs(meshes[0].plain[0][level] - x) <= bound[level]).length / levels;
    }
    expect(held / runs).toBeGreaterThan(0.9);
  });
});

describe("refined values", () => {
  const model = (order: number, step: number, size: number): MeshCurves => ({
    step,
    plain: [truth],
    refined: [
      truth.map((value) => value + size * (step ** order - 1)),
      truth.map((value) => value + 1.1 * size * (step ** order - 1)),
    ],
  });
  it("keeps two bars where the shifts agree with them, and widens where they show more", () => {
    const evidence = (bar: number): Evidence => ({
      ...known,
      meshes: [{ step: 1, plain: [truth], refined: [truth] }, model(3.4, 2, 0.01), model(3.4, 3, 0.01)],
      bar: truth.map(() => bar),
      samplingBar: truth.map(() => 0),
    });
    for (const bound of refinedBounds(evidence(0.1))?.bound ?? []) expect(bound).toBe(0.2);
    const widened = refinedBounds(evidence(0.001));
    // The shifts differ by 1 and 1.1 times 0.01 * (2^3.4 - 1); over 2^3.4 - 1, at two bars.
    const expected = 2 * 0.01 * Math.sqrt((1 + 1.1 ** 2) / 2);
    for (const bound of widened?.bound ?? []) expect(bound).toBeCloseTo(expected, 12);
    expect(widened?.rates[0].rate).toBeCloseTo(3.4, 1);
  });

  it("has none where nothing was refined", () => {
    expect(refinedBounds({ ...known, meshes: [{ step: 1, plain: [truth], refined: [] }] })).toBeUndefined();
  });
});
