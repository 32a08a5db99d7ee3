// spread.test.ts: is the sampling bar the spread of the sub-meshes, extrapolated by van der Corput's order?
import { describe, expect, it } from "vitest";
import { randomStream } from "../../src/base/random.js";
import type { CurveSampler } from "../../src/curves/occupation.js";
import { spreadSampler } from "../../src/curves/spread.js";

const constant =
  (...values: number[]): CurveSampler =>
  (_level, _temperature, out) =>
    out.set(values);

function barOf(stride: number, dimension: 2 | 3, samplers: readonly CurveSampler[], columns: number): number[] {
  const out = new Float64Array(columns);
  spreadSampler({ stride, dimension, samplers }, columns)(0, 0, out);
  return [...out];
}

describe("spread of sub-meshes", () => {
  it("is the root mean square about the mean times stride^(-(d + 1) / 2), column by column", () => {
    const eight = Array.from({ length: 8 }, (_, i) => constant(i % 2 === 0 ? 4 : 6, 3));
    expect(barOf(2, 3, eight, 2)).toEqual([1 / 4, 0]);
    const nine = Array.from({ length: 9 }, (_, i) => constant(-10 + (i % 3)));
    expect(barOf(3, 2, nine, 1)[0]).toBeCloseTo(Math.sqrt(2 / 3) * 3 ** -1.5, 14);
  });

  it("asks every sub-mesh at the level and temperature wanted", () => {
    const samplers: CurveSampler[] = [1, -1].map((sign) => (level, temperature, out) => {
      out[0] = sign * level * temperature;
    });
    const out = new Float64Array(1);
    spreadSampler({ stride: 2, dimension: 3, samplers }, 1)(0.5, 300, out);
    expect(out[0]).toBeCloseTo(150 / 4, 12);
  });

  it("estimates the true error of the mesh in the circle problem: k^2 < r^2 counted on 24 x 24 points, shifted at random", () => {
    // The area of a disc by counting mesh points errs like h^(3/2): the case that the exponent is made for.
    const random = randomStream(1);
    const n = 24;
    let [square, barSquare] = [0, 0];
    for (let trial = 0; trial < 400; trial++) {
      const radius = 0.2 + 0.2 * random.uniform();
      const shift = [random.uniform(), random.uniform()];
      const counts = new Float64Array(4);
      for (let i = 0; i < n; i++)
        for (let j = 0; j < n; j++) {
          const [x, y] = [(i + shift[0]) / n - 0.5, (j + shift[1]) / n - 0.5];
          if (x * x + y * y < radius * radius) counts[(i % 2) * 2 + (j % 2)]++;
        }
      const samplers = Array.from(counts, (count) => constant((4 * count) / n ** 2));
      const mean = counts.reduce((a, b) => a + b, 0) / n ** 2;
      square += (mean - Math.PI * radius ** 2) ** 2;
      barSquare += barOf(2, 2, samplers, 1)[0] ** 2;
    }
    const ratio = Math.sqrt(barSquare / square);
    expect(ratio).toBeGreaterThan(0.8);
    expect(ratio).toBeLessThan(1.25);
  });
});
