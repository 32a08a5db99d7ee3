// dope.test.ts: does a reading of curves tell peaks, dopings, substitutes and cautions as they are, and refuse what it cannot tell?
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import type { CurvesResult } from "../../src/curves/result.js";
import { dopeCsv } from "../../src/report/dope-csv.js";
import { dopeText } from "../../src/report/dope-text.js";
import { dopeSvg } from "../../src/report/svg/dope.js";
import { type DopeOptions, dopeOptions, readDope } from "../../src/studies/dope.js";

/** A made metal: 10 + 2 E electrons per cell; one Lorentzian peak of 1000 at +0.1 eV whose height falls with the temperature. */
function metal(height = (temperatureK: number) => 1000 - temperatureK): CurvesResult {
  const temperature_K = [0, 77, 300, 500];
  const level_eV = Array.from({ length: 201 }, (_, i) => -1 + i / 100);
  const table = (f: (e: number, t: number) => number): number[][] =>
    temperature_K.map((t) => level_eV.map((e) => f(e, t)));
  const value = table((e, t) => height(t) / (1 + ((e - 0.1) / 0.2) ** 2));
  const bars = table(() => 5);
  const response = { name: "spin:xy:z", unit: "(hbar/e) S/cm", value, error: bars, error_sampling: bars };
  return {
    format: "tidegauge.curves/1",
    version: "0",
    grid: {
      title: "made metal",
      sha256: "ab".repeat(32),
      bands: 18,
      divisions: [12, 12, 12],
      periodic: 3,
      points: 1728,
    },
    job: { study: "sweep", from: -1, to: 1 },
    reference_eV: 5,
    level_eV,
    temperature_K,
    electrons_per_cell: table((e) => 10 + 2 * e),
    doping_per_cell: table((e) => 2 * e),
    doping_density: table((e) => 2e22 * e),
    doping_density_unit: "per_cm3",
    states_per_eV: table(() => 2),
    responses: [{ ...response, error_model: table(() => 0), points: value }],
    sampling: { method: "refine", stored: 1728, samples: 1728, deepest: 0 },
    notes: ["intrinsic only, rigid band"],
  };
}

const read = (options: Partial<DopeOptions>, curves = metal()) => readDope(curves, dopeOptions.parse(options), 0);

function refusal(options: Partial<DopeOptions>): string {
  try {
    read(options);
  } catch (error) {
    if (isFault(error)) return `${error.kind}: ${error.message} | ${error.cure}`;
  }
  return "not refused";
}

describe("a peak", () => {
  const [peak] = read({ substitute: [1, -1, 2], sites: 2 }).responses[0].peaks;

  it("is told in electrons, per cm^3 and in substituted atoms", () => {
    expect(peak.level_eV).toBeCloseTo(0.1, 9);
    expect(peak.value).toBeCloseTo(700, 9);
    expect(peak.doping.per_cell).toBeCloseTo(0.2, 9);
    expect(peak.doping.density / 2e21).toBeCloseTo(1, 9);
    // 0.2 electrons on 2 sites a cell: a tenth of them with +1, none with -1, a twentieth with +2.
    expect(peak.doping.substituted.map((part) => part && Number(part.toFixed(9)))).toEqual([0.1, null, 0.05]);
  });

  it("is compared at 77, 300 and 500 K at its doping, and keeps 90% over a third of its half width", () => {
    expect(
      peak.at_temperatures.map(({ temperature_K, value }) => [temperature_K, Math.round(value as number)]),
    ).toEqual([
      [77, 923],
      [300, 700],
      [500, 500],
    ]);
    expect(peak.keeps_90_percent.from_per_cell).toBeCloseTo(2 * (0.1 - 0.2 / 3), 3);
    expect(peak.keeps_90_percent.to_per_cell).toBeCloseTo(2 * (0.1 + 0.2 / 3), 3);
  });

  it("stretches the rigid bands by what it says, with caution beyond usual practice alone", () => {
    expect(peak.rigid_band).toEqual({
      level_shift_eV: peak.level_eV,
      electrons_share: peak.doping.per_cell / 10,
      caution: "",
    });
    const far = read({ doping: [1.2] }).dopings[0].rigid_band;
    expect(far.caution).toMatch(/level moves by 0.60 eV.*12% of the electrons change/);
    expect(read({ substitute: [1], doping: [1.2] }).dopings[0].rigid_band.caution).toContain("more atoms");
  });
});

describe("dopings in", () => {
  it("give the responses at every temperature", () => {
    const result = read({ doping: [0.4, -0.4], temperature: [0] });
    const [first] = result.dopings[0].responses;
    expect(first.at_temperatures.map(({ temperature_K }) => temperature_K)).toEqual([0, 77, 300, 500]);
    expect(first.at_temperatures[0].level_eV).toBeCloseTo(0.2, 9);
    expect(first.at_temperatures[0].value).toBeCloseTo(800, 1);
    expect(read({ doping: [4e21], dopingUnit: "per_cm3" }).dopings[0].doping.per_cell).toBeCloseTo(0.4, 9);
  });

  it("outside the window, in a foreign unit, at a temperature that was not computed, are refused by name with the cure", () => {
    expect(refusal({ doping: [-2.5] })).toMatch(
      /usage: --doping -2.5 per_cell: the window from -1 to 1 eV holds only -2 to 2 .*--from below -1/,
    );
    expect(refusal({ doping: [1], dopingUnit: "per_cm2" })).toMatch(/per_cm2 does not fit a crystal/);
    expect(refusal({ temperature: [20] })).toMatch(/--temperature 20: these curves were computed at 0, 77, 300, 500 K/);
  });
});

describe("reports", () => {
  it("put the answer in plain words first", () => {
    const text = dopeText(read({ substitute: [1] }));
    expect(text).toMatch(/At 300 K spin:xy:z peaks at 700\(5\)/);
    expect(text.replace(/\s+/g, " ")).toContain("20% of the atoms replaced by ones with +1 electron");
    expect(text.replace(/\s+/g, " ")).toContain("some are toxic or otherwise hazardous");
    expect(text).not.toMatch(/NaN|undefined|Infinity/);
  });

  it("say that a response has no peak and where it grows, and that one of zero has none", () => {
    const grows = metal();
    grows.responses[0].value = grows.temperature_K.map(() => grows.level_eV.map((e) => 100 + 50 * e));
    expect(dopeText(read({}, grows)).replace(/\s+/g, " ")).toMatch(
      /no peak inside the window. It is largest at the high end/,
    );
    const nothing = metal(() => 0);
    expect(dopeText(read({}, nothing))).toContain("It is zero throughout");
  });

  it("draw and tabulate the same, twice the same", () => {
    const [result, curves] = [read({ doping: [0.4], substitute: [1] }), metal()];
    expect(dopeSvg(result, curves)).toBe(dopeSvg(result, curves));
    expect(dopeSvg(result, curves)).toContain("Added electrons per cell");
    const rows = dopeCsv(result).trimEnd().split("\n");
    expect(rows[0]).toContain("substituted by +1");
    expect(new Set(rows.map((row) => row.split(",").length)).size).toBe(1);
    expect(rows.filter((row) => row.includes(",peak,"))).toHaveLength(3);
  });
});
