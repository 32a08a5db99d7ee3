// locate-text.test.ts: does the text say in words what the numbers say: shares, cancellation, alike cells, common places?
import { describe, expect, it } from "vitest";
import { answer, locateText, overlapWords } from "../../src/report/locate-text.js";
import { locateMapSvg } from "../../src/report/svg/locate.js";
import { diverging } from "../../src/report/svg/palette.js";
import { sharedScale } from "../../src/report/svg/zone-map.js";
import type { LocatedCell, LocatedResponse, LocateResult } from "../../src/studies/locate-result.js";

const cell = (rank: number, contribution: number, cumulated: number): LocatedCell => ({
  rank,
  cell: rank,
  k: [0.25 * rank, 0.5, 0],
  k_cartesian: [0, 0, 0],
  contribution,
  correction: 0,
  zone: rank / 16,
  cumulated,
  share: 0,
  hottest: { k: [0.25, 0.5, 0], density: 9, lower: 0, upper: 1, gap_eV: 0.0123 },
  pair: { lower: 0, upper: 1, contribution },
  closest: null,
});

const response = (more: Partial<LocatedResponse> = {}): LocatedResponse => ({
  name: "spin:xy:z",
  unit: "e/2pi",
  value: 10,
  error: 0.5,
  cells_sum: 10,
  pairs_sum: 10,
  correction: 0,
  positive: 10,
  negative: 0,
  vanishes: false,
  concentration: [{ share: 0.8, zone: 0.013, net: 8 }],
  cells: [cell(1, 3, 3), cell(2, 3.001, 6.001), cell(3, 1, 7.001)],
  cells_left: { count: 13, contribution: 2.999 },
  pairs: [{ lower: 0, upper: 1, contribution: 10, correction: 0, cumulated: 10 }],
  by_set: [6, 4],
  projection: [
    [1, -2],
    [3, 4],
  ],
  map: [
    [1, -2],
    [300, 4],
  ],
  ...more,
});

const result = (responses: LocatedResponse[]): LocateResult => ({
  format: "tidegauge.locate/1",
  version: "0.1.0",
  grid: {
    title: "A <layer>",
    sha256: "",
    bands: 4,
    divisions: [2, 2, 1],
    offset: [0, 0, 0],
    periodic: 2,
    points: 4,
    reciprocal: [
      [1, 0, 0],
      [-0.5, 0.8, 0],
      [0, 0, 1],
    ],
  },
  job: {},
  reference_eV: 0,
  level_eV: -0.3,
  temperature_K: 300,
  sets: [
    [0, 1],
    [2, 3],
  ],
  responses,
  overlap: [],
  plane: { centre: [0, 0, 0], along: [1, 0, 0], across: [0, 1, 0], points: 2 },
  sampling: { method: "refine", stored: 4, samples: 100, deepest: 2, patches: 0 },
  notes: ["intrinsic only, rigid band"],
});

describe("the text of a location", () => {
  it("says how small a part of the zone makes 80%, and which pair of sets gives most", () => {
    const own = response();
    expect(answer(result([own]), own)).toBe(
      "spin:xy:z is 10.0(5) e/2pi. 1.3% of the zone makes 80% of it. The pair of bands 0-1 and 2-3 gives most, 10.",
    );
  });

  it("does not hide contributions of both signs, nor round-off behind a percentage", () => {
    const mixed = response({ positive: 30, negative: -20 });
    expect(answer(result([mixed]), mixed)).toMatch(/both signs, 30 and -20, and this part gives 8 net/);
    const cancelling = response({ value: 0, positive: 30, negative: -30 });
    expect(answer(result([cancelling]), cancelling)).toMatch(/cancel, 30 and -30; 1.3% of the zone makes 80% of them/);
    const nothing = response({ value: 0, positive: 0, negative: 0, vanishes: true });
    expect(answer(result([nothing]), nothing)).toMatch(/No place in the zone contributes/);
  });

  it("tells cells that give alike through the same bands in one row", () => {
    const text = locateText(result([response()]), { width: 100 });
    expect(text).toMatch(/^ {4}2 +3 +6\.001 +12\.5% +0\.25 0\.5 .*12\.3 meV +0-1 \/ 2-3$/m);
    expect(text).toMatch(/^ {4}1 +1 +7\.001 /m);
  });

  it("tells whether two responses come from the same places, and with which signs", () => {
    const both = { a: "spin:hall", b: "orbital:hall" };
    expect(overlapWords({ ...both, cells_common: 0.81, cells_cosine: -0.9, pairs_common: 0.2, pairs_cosine: 0 })).toBe(
      "spin:hall and orbital:hall come from largely the same cells (81% in common, signs opposite: cosine -0.9) and mostly different pairs of bands (20% in common, cosine 0).",
    );
    expect(overlapWords({ ...both, cells_common: 0.5, cells_cosine: 0, pairs_common: 0, pairs_cosine: 0 })).toMatch(
      /partly the same cells .* no pair of bands gives anything net to both/,
    );
  });
});

describe("the map", () => {
  it("is the same for the same content, escapes titles, and leaves out what vanishes unless all does", () => {
    const gone = response({ name: "charge:xy", unit: "e^2/h", vanishes: true });
    const svg = locateMapSvg(result([gone, response()]));
    expect(locateMapSvg(result([gone, response()]))).toBe(svg);
    expect(svg).toContain("A &lt;layer&gt;");
    expect(svg).not.toContain("charge:xy");
    expect(locateMapSvg(result([gone]))).toContain("charge:xy");
    expect(svg).not.toMatch(/NaN|undefined|Infinity/);
  });

  it("has a scale that one value in two hundred may exceed, of at most three decades", () => {
    const values = Array.from({ length: 1000 }, (_, i) => (i < 999 ? (i % 2 === 0 ? 1 : -1) * (i + 1) : 1e9));
    const { largest, smallest } = sharedScale(values);
    expect(largest).toBeLessThan(1000);
    expect(smallest).toBe(501);
    expect(sharedScale([1, 1e-9, 1e-9, 1e-9])).toEqual({ largest: 1, smallest: 1e-3 });
    expect(sharedScale([])).toEqual({ largest: 1, smallest: 1 });
    expect(new Set([-1, -0.5, 0, 0.5, 1].map(diverging)).size).toBe(5);
  });
});
