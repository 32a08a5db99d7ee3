// dope-gold.test.ts: does `dope` on 12^3 points of gold find the spin Hall peak, its height and its doping where dense meshes have them?
//
// reference/gold-peak.json: plain sums over two dense meshes that share no point, made apart from this program by tests/oracle/gold_curve.py.
import { describe, expect, it } from "vitest";
import type { DopeResult } from "../../src/studies/dope-result.js";
import dense from "./reference/gold-peak.json" with { type: "json" };
import { answer, expectWithin, sampled } from "./runs.js";

/** Place and height of the dense maximum at 300 K, and the electrons there, by the parabola through its neighbours. */
function denseMaximum({ spin_hall, electrons }: { spin_hall: number[][]; electrons: number[][] }) {
  const t = dense.temperature_K.indexOf(300);
  const [value, filled] = [spin_hall[t], electrons[t]];
  const i = value.indexOf(Math.max(...value));
  const [a, b, c] = [value[i - 1], value[i], value[i + 1]];
  const shift = (a - c) / (2 * (a - 2 * b + c));
  const step = dense.level_eV[i + 1] - dense.level_eV[i];
  return {
    levelEv: dense.level_eV[i] + shift * step,
    height: b - ((a - c) * shift) / 4,
    doping: filled[i] + (shift * (filled[i + 1] - filled[i - 1])) / 2 - 11,
  };
}

describe("gold below its Fermi level, refined from 12^3", () => {
  it("has its peak within 10 meV, its height within 2 bars, and dopings within 1% of those of the dense levels", async () => {
    const grid = await sampled("metal", { mesh: [12, 12, 12] });
    const exact = [dense.first, dense.second].map(denseMaximum);
    const window = ["--from", -2.1, "--to", -1.7, "--points", 41, "--accuracy", "2%", "--workers", 1];
    const dopings = ["--doping", ...exact.map(({ doping }) => doping)];
    const result = (await answer(["dope", grid, "--response", "spin:hall", ...window, ...dopings])) as DopeResult;
    const [peak] = result.responses[0].peaks;
    for (const [i, { levelEv, height, doping }] of exact.entries()) {
      expectWithin(peak.level_eV, levelEv, 0.01, "level");
      expectWithin(peak.value, height, 2 * peak.error, "height");
      // The peak is half an eV wide and 2.8 electrons per eV pass under it: its own doping is known no better than its place.
      const [at] = result.dopings[i].responses[0].at_temperatures.filter(({ temperature_K }) => temperature_K === 300);
      const statesPerEv = 2.8;
      expectWithin(
        at.level_eV ?? Number.NaN,
        levelEv,
        (0.01 * Math.abs(doping)) / statesPerEv,
        "level of the dense doping",
      );
      expectWithin(at.value ?? Number.NaN, height, 2 * (at.error ?? Number.NaN), "value at the dense doping");
    }
    expect(peak.rigid_band.caution).toContain("of the electrons change");
  });
});
