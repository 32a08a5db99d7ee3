// tree.test.ts: does the tree integrate functions to their closed forms, and spend no more samples than it needs or may?
import fc from "fast-check";
import { describe, expect, it } from "vitest";

import {
  childWeight,
  createTree,
  type Family,
  guessShare,
  parentWeight,
  type Sample,
  samplePattern,
  type TreeCost,
} from "../../src/refine/tree.js";
import { createRandom } from "../kernel/hermitian.js";

interface Value extends Sample {
  value: number;
}

type Field = (t: Float64Array) => number;

interface Wish {
  readonly dimension: 2 | 3;
  readonly depthLimit?: number;
  readonly sampleLimit?: number;
  /** Largest |parent - mean of children| times volume that is let pass. */
  readonly tolerance: number;
  /** Says that a box must be halved although its samples agree: what gaps.ts does for bands that may touch unseen. */
  readonly suspects?: (centre: Float64Array, size: number) => boolean;
}

interface Found {
  readonly integral: number;
  /** Root of the sum of squares of what families that were let pass disagreed by: the bar that a refined sweep makes of it. */
  readonly bar: number;
  readonly cost: TreeCost;
  readonly evaluated: number;
  readonly created: number;
}

/** Integral over the cell as a refined sweep takes it: families that agree are extrapolated, others count as they are. */
function integrate(field: Field, { dimension, depthLimit = 14, sampleLimit = 1e6, tolerance, suspects }: Wish): Found {
  let [integral, squares, evaluated, created] = [0, 0, 0, 0];
  const mean = (children: readonly Value[]): number =>
    children.reduce((sum, { value }) => sum + value, 0) / 2 ** dimension;
  const disagreement = ({ parent, children, depth }: Family<Value>): number => {
    const guess = children.reduce((sum, child) => sum + guessShare(parent, child, depth) * child.value, 0);
    return (parent.value - guess / children.length) * 2 ** (-dimension * depth);
  };
  const tree = createTree<Value>({
    dimension,
    depthLimit,
    create: () => {
      created++;
      return { t: new Float64Array(dimension), centre: new Float64Array(dimension), value: 0 };
    },
    evaluate: (sample) => {
      evaluated++;
      sample.value = field(sample.t);
    },
    disagrees: (family) =>
      suspects?.(family.parent.centre, 2 ** -family.depth) || Math.abs(disagreement(family)) > tolerance,
    accept: (family, resolved) => {
      const { parent, children, depth } = family;
      squares += disagreement(family) ** 2;
      const extrapolated =
        parentWeight(parent, depth) * parent.value +
        children.reduce((sum, child) => sum + childWeight(parent, child, depth) * child.value, 0) / children.length;
      integral += 2 ** (-dimension * depth) * (resolved ? extrapolated : mean(children));
    },
  });
  const t = new Float64Array(dimension);
  const cost = tree({ t, centre: new Float64Array(dimension), value: field(t) }, sampleLimit);
  return { integral, bar: Math.sqrt(squares), cost, evaluated, created };
}

// Closed forms over [-1/2, 1/2]^d.
const slopes = [1, -2, 0.5];
const smooth: Field = (t) => Math.exp(t.reduce((sum, x, j) => sum + slopes[j] * x, 0));
const smoothIntegral = (dimension: number): number =>
  slopes.slice(0, dimension).reduce((product, a) => (product * 2 * Math.sinh(a / 2)) / a, 1);
/** The flux of a monopole at height D above a square: D / r^3. */
const monopole =
  (height: number, [x, y]: readonly [number, number] = [0, 0]): Field =>
  (t) =>
    height / ((t[0] - x) ** 2 + (t[1] - y) ** 2 + height * height) ** 1.5;
/** Solid angle under which the square is seen from there: a corner's share is atan(x y / (D sqrt(x^2 + y^2 + D^2))). */
function solidAngle(height: number, [x, y]: readonly [number, number] = [0, 0]): number {
  const corner = (a: number, b: number): number => Math.atan((a * b) / (height * Math.hypot(a, b, height)));
  const [right, left, up, down] = [0.5 - x, 0.5 + x, 0.5 - y, 0.5 + y];
  return corner(right, up) + corner(left, up) + corner(right, down) + corner(left, down);
}
/** Product of Lorentzians of half width w, and its integral. */
const lorentzians =
  (w: number): Field =>
  (t) =>
    t.reduce((product, x) => product / (x * x + w * w), 1);
const lorentzIntegral = (w: number, dimension: number): number => ((2 / w) * Math.atan(0.5 / w)) ** dimension;

describe("integrals over one cell", () => {
  for (const dimension of [2, 3] as const) {
    it(`${dimension}D, smooth: one family is of fourth order, exact for cubics; ${2 ** dimension} samples`, () => {
      const cubic: Field = (t) => 1 + t[0] - 2 * t[0] ** 2 + 3 * t[1] ** 3 + t[0] * t[1] + 5 * t[dimension - 1] ** 2;
      const { integral, cost, evaluated } = integrate(cubic, { dimension, tolerance: 1 });
      // The mean of t^2 over [-1/2, 1/2] is 1/12.
      expect(integral).toBeCloseTo(1 + (5 - 2) / 12, 14);
      expect(cost).toEqual({ samples: 2 ** dimension, deepest: 1, unresolved: 0 });
      expect(evaluated).toBe(2 ** dimension);
    });

    it(`${dimension}D, smooth: sums over uniform boxes err by h^2, extrapolated by h^4: 1/16 with every halving`, () => {
      const exact = smoothIntegral(dimension);
      // Every family ends at the limit, and none counts as resolved: sums of second order, extrapolated here to the fourth.
      const second = [2, 3, 4, 5, 6, 7].slice(0, dimension === 3 ? 5 : 6).map((depthLimit) => {
        const full = integrate(smooth, { dimension, tolerance: 0, depthLimit, sampleLimit: 1e7 });
        expect(full.cost.deepest).toBe(depthLimit);
        return full.integral - exact;
      });
      const fourth = second.slice(1).map((error, i) => (4 * error - second[i]) / 3);
      // The ratio's distance from the power of two is the next even order: it falls like h^2 itself, to 1/4 in the limit.
      for (const [errors, power, nearest] of [
        [second, 4, 5e-5],
        [fourth, 16, dimension === 3 ? 1.5 : 0.03],
      ] as const) {
        const off = errors.slice(1).map((error, i) => Math.abs(errors[i] / error - power));
        for (let i = 1; i < off.length; i++) expect(off[i - 1] / off[i]).toBeGreaterThan(2.9);
        expect(off[off.length - 1]).toBeLessThan(nearest);
      }
    });

    it(`${dimension}D, smooth: errs by less than half the root of the squares of what was let pass`, () => {
      const exact = smoothIntegral(dimension);
      for (const tolerance of [1e-2, 1e-3, 1e-4, 1e-5]) {
        const { integral, bar } = integrate(smooth, { dimension, tolerance });
        expect(Math.abs(integral - exact)).toBeLessThan(bar / 2);
        // In 3D off-middle parents leave a part of one sign (below), which adds up over the families instead of averaging out.
        if (dimension === 2) expect(Math.abs(integral - exact)).toBeLessThan(tolerance / 10);
      }
    });

    it(`${dimension}D: off the middle a family is exact for cubics but for the traceless part of quadratics: w o.A o`, () => {
      const random = createRandom(31 + dimension);
      for (let trial = 0; trial < 50; trial++) {
        const offset = Array.from({ length: dimension }, () => 0.15 * random());
        const a = Array.from({ length: dimension }, () => Array.from({ length: dimension }, random));
        const linear = Array.from({ length: dimension }, random);
        const square = (t: ArrayLike<number>): number =>
          a.reduce((sum, row, i) => sum + row.reduce((part, x, j) => part + x * t[i] * t[j], 0), 0);
        const field: Field = (t) => 2 + linear.reduce((sum, x, j) => sum + x * t[j], 0) + square(t);
        const sampleAt = (t: readonly number[]): Sample => ({
          t: Float64Array.from(t),
          centre: new Float64Array(dimension),
        });
        const parent = sampleAt(offset);
        const w = parentWeight(parent, 0);
        const found = samplePattern(dimension).reduce((sum, place) => {
          const child = sampleAt(place);
          return sum + (childWeight(parent, child, 0) * field(child.t)) / 2 ** dimension;
        }, w * field(parent.t));
        const trace = a.reduce((sum, row, i) => sum + row[i], 0);
        const traceless = square(offset) - (trace * offset.reduce((sum, x) => sum + x * x, 0)) / dimension;
        expect(found).toBeCloseTo(2 + trace / 12 + w * traceless, 14);
      }
    });
  }

  it("2D: the flux of a monopole close above the plane, at samples that grow like log(1/D)", () => {
    const samples = [1e-1, 1e-2, 1e-3, 1e-4].map((height) => {
      const at = [0.1234, -0.2345] as const;
      // Samples far from so sharp a peak agree with each other: as with bands, slopes must tell that it may be there.
      const suspects = (centre: Float64Array, size: number): boolean =>
        size > height && centre.every((x, j) => Math.abs(x - at[j]) < size / 2);
      const found = integrate(monopole(height, at), { dimension: 2, tolerance: 2e-4, depthLimit: 30, suspects });
      expect(Math.abs(found.integral - solidAngle(height, at))).toBeLessThan(found.bar);
      expect(Math.abs(found.integral / solidAngle(height, at) - 1)).toBeLessThan(2e-4);
      expect(found.cost.unresolved).toBe(0);
      expect(found.cost.samples).toBe(found.evaluated);
      return found.cost.samples;
    });
    // 10 times closer costs 3.3 more depths: a constant number of samples each.
    expect(samples[3] - samples[2]).toBeLessThan(1.5 * (samples[1] - samples[0]) + 40);
    expect(samples[3]).toBeLessThan(5000);
  });

  it("3D: a peak a hundredth of the cell wide to 5e-4, at a hundredth of the uniform mesh's samples", () => {
    const exact = lorentzIntegral(0.01, 3);
    const suspects = (centre: Float64Array, size: number): boolean =>
      size > 0.02 && centre.every((x) => Math.abs(x) <= size / 2);
    const { integral, cost } = integrate(lorentzians(0.01), { dimension: 3, tolerance: 1e-6 * exact, suspects });
    // Families around so symmetric a peak err alike: 4.6 times the root of their squares.
    expect(Math.abs(integral / exact - 1)).toBeLessThan(5e-4);
    expect(cost.samples).toBeLessThan(8 ** cost.deepest / 100);
  });
});

describe("where boxes are sampled", () => {
  it("one place in each half, in opposite pairs, with the second moment 1/16, on no plane of symmetry", () => {
    for (const dimension of [2, 3] as const) {
      const pattern = samplePattern(dimension);
      for (const [corner, point] of pattern.entries()) {
        for (let j = 0; j < dimension; j++) {
          expect(point[j] > 0).toBe((corner & (1 << j)) > 0);
          expect(Math.abs(point[j])).toBeLessThan(0.5);
          expect(point[j] + pattern[pattern.length - 1 - corner][j]).toBeCloseTo(0, 15);
          for (let i = 0; i < j; i++) expect(Math.abs(Math.abs(point[i]) - Math.abs(point[j]))).toBeGreaterThan(5e-3);
        }
      }
      for (let i = 0; i < dimension; i++)
        for (let j = 0; j < dimension; j++) {
          const moment = pattern.reduce((sum, point) => sum + point[i] * point[j], 0) / pattern.length;
          expect(moment).toBeCloseTo(i === j ? 1 / 16 : 0, 15);
        }
    }
  });
});

describe("limits", () => {
  it("ends at the depth limit: every box once, and each last family told as unresolved", () => {
    for (const dimension of [2, 3] as const)
      for (const depthLimit of [1, 2, 4]) {
        const { cost, evaluated } = integrate(() => 1, { dimension, depthLimit, tolerance: -1 });
        const boxes = (depth: number): number => 2 ** (dimension * depth);
        let samples = 0;
        for (let depth = 1; depth <= depthLimit; depth++) samples += boxes(depth);
        expect(cost).toEqual({ samples, deepest: depthLimit, unresolved: boxes(depthLimit - 1) });
        expect(evaluated).toBe(samples);
      }
  });

  it("ends all branches at the sample limit: no more than the open families of one path beyond it, and the whole cell covered", () => {
    for (const dimension of [2, 3] as const)
      for (const sampleLimit of [0, 1, 10, 100, 1000, 5000]) {
        const depthLimit = 12;
        const found = integrate(() => 1, { dimension, depthLimit, tolerance: -1, sampleLimit });
        const open = 2 ** dimension * 2 ** dimension * depthLimit;
        expect(found.cost.samples).toBeLessThanOrEqual(sampleLimit + open);
        expect(found.cost.samples).toBeGreaterThanOrEqual(Math.min(sampleLimit, 2 ** dimension));
        expect(found.cost.unresolved).toBeGreaterThan(0);
        expect(found.integral).toBeCloseTo(1, 12);
      }
  });

  it("keeps one row of children per depth, also over many cells", () => {
    for (const dimension of [2, 3] as const)
      for (const tolerance of [-1, 1e-4]) {
        const { created, cost } = integrate(monopole(0.02), { dimension, tolerance, depthLimit: 5 });
        expect(created).toBe(2 ** dimension * cost.deepest);
      }
    let created = 0;
    const tree = createTree({
      dimension: 3,
      depthLimit: 3,
      create: () => {
        created++;
        return { t: new Float64Array(3), centre: new Float64Array(3) };
      },
      evaluate: () => {},
      disagrees: () => true,
      accept: () => {},
    });
    for (let cell = 0; cell < 20; cell++) tree({ t: new Float64Array(3), centre: new Float64Array(3) }, 1000);
    expect(created).toBe(3 * 8);
  });
});

describe("boxes", () => {
  /** A tree that halves at random; what it accepted, and every call in order. */
  function wander(dimension: 2 | 3, seed: number, sampleLimit: number) {
    const random = createRandom(seed);
    const calls: string[] = [];
    const boxes: { t: number[]; depth: number }[] = [];
    const tree = createTree({
      dimension,
      depthLimit: 6,
      create: () => ({ t: new Float64Array(dimension), centre: new Float64Array(dimension) }),
      evaluate: ({ t }) => calls.push(`evaluate ${[...t]}`),
      disagrees: ({ parent, depth }) => {
        calls.push(`disagrees ${depth} ${[...parent.t]}`);
        return random() < 0.4;
      },
      accept: ({ parent, children, depth }, resolved) => {
        calls.push(`accept ${depth} ${resolved} ${[...parent.t]}`);
        for (const { centre } of children) boxes.push({ t: [...centre], depth: depth + 1 });
      },
    });
    const cost = tree({ t: new Float64Array(dimension), centre: new Float64Array(dimension) }, sampleLimit);
    return { boxes, calls, cost };
  }
  const choice = fc.tuple(fc.constantFrom(2 as const, 3 as const), fc.integer({ min: 1, max: 1e6 }), fc.nat(400));

  it("what is accepted fills the cell once, without overlap", () => {
    fc.assert(
      fc.property(choice, ([dimension, seed, sampleLimit]) => {
        const { boxes } = wander(dimension, seed, sampleLimit);
        expect(boxes.reduce((sum, { depth }) => sum + 2 ** (-dimension * depth), 0)).toBe(1);
        const point = createRandom(seed + 1);
        for (let trial = 0; trial < 20; trial++) {
          const x = Array.from({ length: dimension }, () => point() / 2);
          const holding = boxes.filter(({ t, depth }) => t.every((c, j) => Math.abs(x[j] - c) <= 2 ** -depth / 2));
          expect(holding).toHaveLength(1);
        }
      }),
      { numRuns: 60 },
    );
  });

  it("the order of calls depends on the cell alone; samples are counted one by one", () => {
    fc.assert(
      fc.property(choice, ([dimension, seed, sampleLimit]) => {
        const [first, second] = [wander(dimension, seed, sampleLimit), wander(dimension, seed, sampleLimit)];
        expect(second.calls).toEqual(first.calls);
        expect(first.cost.samples).toBe(first.calls.filter((call) => call.startsWith("evaluate")).length);
        expect(first.cost.unresolved).toBe(first.calls.filter((call) => /^accept \d+ false/.test(call)).length);
      }),
      { numRuns: 40 },
    );
  });
});
