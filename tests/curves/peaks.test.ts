// peaks.test.ts: are maxima of |value| found where closed forms have them, with their height, prominence and width, and doubted where they must be?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { findPeaks, growsBeyond, type PeakCurve, resolvedWidth } from "../../src/curves/peaks.js";

const kB = 8.617333262e-5;
const cold = { temperatureK: 0, meshEv: 0, barFactor: 1, leastProminence: 0 };

function sampled(f: (e: number) => number, bar = 0.001, from = -1, to = 1, points = 401): PeakCurve {
  const levelsEv = Array.from({ length: points }, (_, i) => from + ((to - from) * i) / (points - 1));
  return { levelsEv, value: levelsEv.map(f), error: levelsEv.map(() => bar) };
}

const lorentz = (e: number, at: number, half: number): number => 1 / (1 + ((e - at) / half) ** 2);

describe("one Lorentzian", () => {
  it("has its place, height and sign wherever it stands, whatever the sign", () => {
    const place = fc.double({ min: -0.5, max: 0.5, noNaN: true });
    const half = fc.double({ min: 0.03, max: 0.2, noNaN: true });
    const height = fc.double({ min: 1, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(place, half, height, fc.constantFrom(1, -1), (at, width, tall, sign) => {
        const curve = sampled((e) => sign * tall * lorentz(e, at, width), 1e-3 * tall);
        const [peak, ...others] = findPeaks(curve, cold);
        expect(others).toEqual([]);
        expect(Math.abs(peak.levelEv - at)).toBeLessThan(2e-4); // parabola through 5 meV steps: below (step / half)^2 steps / 4
        expect(Math.abs(peak.value / (sign * tall) - 1)).toBeLessThan(1e-3);
        expect(peak.resolved).toBe(true);
      }),
    );
  });

  it("has the width and the tolerance of the closed form", () => {
    const [peak] = findPeaks(
      sampled((e) => lorentz(e, 0.1, 0.05)),
      cold,
    );
    // The higher saddle is the window's end at +1: 1 / (1 + 18^2). Half the prominence down: 1/(1 + x^2) = 1 - p/2.
    const saddle = 1 / (1 + 18 ** 2);
    expect(peak.prominence).toBeCloseTo(1 - saddle, 6);
    const x = Math.sqrt(1 / (1 - (1 - saddle) / 2) - 1);
    expect(peak.widthEv).toBeCloseTo(2 * 0.05 * x, 4);
    expect(peak.keeps.toEv - peak.keeps.fromEv).toBeCloseTo((2 * 0.05) / 3, 3); // 1/(1 + x^2) = 0.9 at x = 1/3
    expect([peak.keeps.openBelow, peak.keeps.openAbove]).toEqual([false, false]);
  });
});

describe("several", () => {
  it("of both signs are parted where the response changes sign, and measured against each other", () => {
    const two = (e: number): number => lorentz(e, -0.4, 0.02) - 0.5 * lorentz(e, 0.4, 0.02);
    const peaks = findPeaks(sampled(two), cold);
    expect(peaks.map(({ levelEv }) => Number(levelEv.toFixed(3)))).toEqual([-0.4, 0.4]);
    expect(peaks[1].value).toBeLessThan(0);
    expect(peaks[1].prominence).toBeCloseTo(0.5, 2); // the response passes through zero between them
  });

  it("on one another's shoulder count by the saddle between them", () => {
    const f = (e: number): number => lorentz(e, -0.1, 0.05) + 0.6 * lorentz(e, 0.15, 0.05);
    const curve = sampled(f, 0.001);
    const saddle = Math.min(...curve.value.filter((_, i) => curve.levelsEv[i] > -0.1 && curve.levelsEv[i] < 0.15));
    const lower = findPeaks(curve, cold)[1];
    expect(lower.prominence).toBeCloseTo(Math.abs(lower.value) - saddle, 9);
    expect(findPeaks(curve, { ...cold, leastProminence: 0.9 })).toHaveLength(1);
  });

  it("are the same however the response is scaled or the levels are shifted", () => {
    const f = (e: number): number => Math.sin(9 * e) * Math.exp(-e);
    const shift = fc.double({ min: -5, max: 5, noNaN: true });
    const scale = fc.double({ min: 1e-3, max: 1e3, noNaN: true });
    const plain = findPeaks(sampled(f), cold);
    fc.assert(
      fc.property(shift, scale, (by, times) => {
        const moved = sampled((e) => times * f(e - by), 0.001 * times, by - 1, by + 1);
        const peaks = findPeaks(moved, cold);
        expect(peaks).toHaveLength(plain.length);
        for (const [i, peak] of peaks.entries()) {
          expect(peak.levelEv - by).toBeCloseTo(plain[i].levelEv, 6);
          expect(peak.prominence / times).toBeCloseTo(plain[i].prominence, 6);
        }
      }),
    );
  });
});

describe("what is no peak, or not a sure one", () => {
  it("a curve that only grows has none, and says at which end it grows", () => {
    expect(
      findPeaks(
        sampled((e) => Math.exp(e)),
        cold,
      ),
    ).toEqual([]);
    expect(growsBeyond(sampled((e) => Math.exp(e)))).toEqual(["high"]);
    expect(growsBeyond(sampled((e) => e * e))).toEqual(["low", "high"]);
    expect(growsBeyond(sampled((e) => lorentz(e, 0, 0.1)))).toEqual([]);
    expect(
      findPeaks(
        sampled(() => 0),
        cold,
      ),
    ).toEqual([]);
    expect(
      findPeaks(
        sampled(() => 3),
        cold,
      ),
    ).toEqual([]);
  });

  it("a plateau is one peak in its middle", () => {
    const [peak, ...others] = findPeaks(
      sampled((e) => Math.min(1, 1.5 - 2 * Math.abs(e - 0.1))),
      cold,
    );
    expect(others).toEqual([]);
    expect(peak.levelEv).toBeCloseTo(0.1, 2);
    expect(peak.value).toBe(1);
  });

  it("a line at 0 K, seen at T, has the thermal width and is unresolved; ten times wider it is resolved", () => {
    const thermalEv = 300 * kB;
    // -df/dE times 4 kT: what a line becomes.
    const line = (e: number): number => 1 / Math.cosh((e - 0.2) / (2 * thermalEv)) ** 2;
    const [hot] = findPeaks(sampled(line), { ...cold, temperatureK: 300 });
    expect(hot.widthEv).toBeCloseTo(3.5254943 * thermalEv, 3); // 4 arccosh(sqrt 2) kT, closed form
    expect(hot.resolved).toBe(false);
    expect(hot.why).toContain("300 K");
    const [wide] = findPeaks(
      sampled((e) => line(0.2 + (e - 0.2) / 5)),
      { ...cold, temperatureK: 300 },
    );
    expect(wide.resolved).toBe(true);
  });

  it("narrower than two level steps, than the mesh resolves, or within two bars: unresolved, and why", () => {
    const why = (curve: PeakCurve, meshEv = 0): string => findPeaks(curve, { ...cold, meshEv })[0].why;
    const spike = sampled((e) => (Math.abs(e) < 1e-9 ? 1 : 0));
    expect(why(spike)).toContain("step between levels");
    expect(
      why(
        sampled((e) => lorentz(e, 0, 0.05)),
        0.2,
      ),
    ).toContain("the mesh");
    expect(why(sampled((e) => 10 + 0.1 * lorentz(e, 0, 0.05), 0.06))).toContain("two error bars");
    expect(why(sampled((e) => lorentz(e, 0, 0.05), Number.NaN))).toContain("no error bar");
    expect(resolvedWidth(0.01, { ...cold, meshEv: 0.3 })).toEqual({
      widthEv: 0.6,
      by: "the mesh",
    });
  });
});
