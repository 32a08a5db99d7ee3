// verdicts.test.ts: are levels gathered into runs, and meshes named, as the errors say?
import { describe, expect, it } from "vitest";
import { meshFactor, runsOf, type Status, verdictsOf } from "../../src/curves/verdicts.js";

const bounds = (bound: number[], rate = 2) => ({ bound, rates: bound.map(() => ({ rate, from: 2 })) });

describe("meshFactor", () => {
  it("is the mesh that brings the error down at the rate", () => {
    expect(meshFactor(0.04, 0.01, 2)).toBeCloseTo(2, 12);
    expect(meshFactor(0.001, 0.01, 2)).toBe(1);
  });
  it("names none where errors hardly fall, none that nobody could make, and none where nothing is known", () => {
    expect(meshFactor(0.04, 0.01, 0.25)).toBeUndefined();
    expect(meshFactor(100, 0.01, 1)).toBeUndefined();
    expect(meshFactor(Number.NaN, 0.01, 2)).toBeUndefined();
  });
});

describe("runsOf", () => {
  const run = (text: string, least: number): string =>
    runsOf(
      [...text].map((letter): Status => ({ p: "plain", r: "refined", n: "neither", u: "unknown" })[letter] as Status),
      least,
    )
      .map(({ first, last, status }) => `${status[0]}${last - first + 1}`)
      .join(" ");
  it("takes short good runs between worse ones for worse, and keeps every bad one", () => {
    expect(run("nnpnn", 2)).toBe("n5");
    expect(run("ppnpp", 2)).toBe("p2 n1 p2");
    expect(run("rrprrn", 2)).toBe("r5 n1");
    expect(run("pnn", 2)).toBe("n3");
    expect(run("pppnn", 2)).toBe("p3 n2");
    expect(run("p", 2)).toBe("p1");
  });
});

describe("verdictsOf", () => {
  it("says what is good enough where, the worst error of each run, and what would be needed", () => {
    const verdicts = verdictsOf({
      scale: 100,
      target: 0.01,
      plain: bounds([0.5, 0.8, 4, 9, 16, 16]),
      refined: bounds([0.1, 0.1, 0.5, 0.9, 4, 2], 2),
      samplingBar: [0, 0, 0, 0, 0, 0],
    });
    expect(verdicts.map(({ status, first, last }) => [status, first, last])).toEqual([
      ["plain", 0, 1],
      ["refined", 2, 3],
      ["neither", 4, 5],
    ]);
    expect(verdicts.map(({ plainError }) => plainError)).toEqual([0.008, 0.09, 0.16]);
    expect(verdicts.map(({ plainFactor }) => plainFactor)).toEqual([1, 3, 4]);
    expect(verdicts.map(({ refinedFactor }) => refinedFactor)).toEqual([1, 1, 2]);
  });

  it("knows nothing where no bound is", () => {
    const [verdict] = verdictsOf({
      scale: 1,
      target: 0.01,
      plain: bounds([Number.NaN, Number.NaN]),
      refined: undefined,
      samplingBar: [],
    });
    expect(verdict).toMatchObject({
      status: "unknown",
      plainFactor: undefined,
      refinedFactor: undefined,
      samplesWanted: false,
    });
  });

  it("tells a lack of samples from a lack of mesh points", () => {
    const [verdict] = verdictsOf({
      scale: 1,
      target: 0.01,
      plain: bounds([0.1]),
      refined: bounds([0.04]),
      samplingBar: [0.019],
    });
    expect(verdict).toMatchObject({ status: "neither", samplesWanted: true });
  });
});
