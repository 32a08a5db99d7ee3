// dope-luttinger.test.ts: do hole concentrations give the levels and spin Hall conductivities of the closed form?
//
// Spherical Luttinger model (J. Schliemann, D. Loss, Phys. Rev. B 69, 165315 (2004); parameters of GaAs, I. Vurgaftman et al., J. Appl. Phys. 89,
// 5815 (2001)): k = sqrt(2 m (-mu)) / hbar of heavy and light holes; p = (kH^3 + kL^3) / 3 pi^2;
// spin:xy:z = (e / 12 pi^2) ((g1 + 2 g2) / g2) (kH - kL). Warm values are integrals of these with Fermi factors.
import { describe, expect, it } from "vitest";
import type { DopedPoint, DopeResult } from "../../src/studies/dope-result.js";
import { gauss } from "./luttinger-sphere.js";
import { answer, expectWithin, sampled } from "./runs.js";

const [g1, g2] = [6.98, 2.582];
const hbar2OverMe = 7.619964231; // eV angstrom^2, CODATA 2022
const kB = 8.617333262e-5;

/** Holes per cm^3 with the level at mu (negative: below the edge) and temperature, in closed form or by Gauss and Legendre. */
function holes(muEv: number, temperatureK: number): number {
  const masses = [g1 - 2 * g2, g1 + 2 * g2].map((inverse) => 2 / (hbar2OverMe * inverse)); // k^2 = mass * energy
  const cold = (depth: number): number =>
    masses.reduce((sum, mass) => sum + (1e24 * (mass * depth) ** 1.5) / (3 * Math.PI ** 2), 0);
  if (temperatureK === 0) return cold(-muEv);
  const scale = temperatureK * kB;
  // p = int dE (dp/dE) f, by parts int p(E) (-df/dE) dE over hole energies E > 0, in E = x^2 for the square root at the edge.
  const reach = Math.sqrt(0.6);
  return gauss(400).reduce((sum, [node, weight]) => {
    const x = reach * node;
    const half = 2 * Math.cosh((x * x + muEv) / (2 * scale));
    return sum + (weight * reach * 2 * x * cold(x * x)) / (scale * half * half);
  }, 0);
}

/** [concentration of holes, temperature, level, spin:xy:z]. */
const published = [
  [2.194778e19, 0, -0.05, 50.39714357],
  [6.207768e19, 0, -0.1, 71.27232394],
  [holes(-0.05, 300), 300, -0.05, 46.13754233],
] as const;

describe("holes of GaAs in the spherical model, refined from 12^3", () => {
  it("the quadrature gives the published concentrations", () => {
    expectWithin(holes(-0.05, 0) / 2.194778e19, 1, 5e-7, "0.05 eV");
    expectWithin(holes(-0.1, 0) / 6.207768e19, 1, 5e-7, "0.10 eV");
    expectWithin(
      holes(-0.1, 30) / (holes(-0.1, 0) * (1 + (Math.PI ** 2 / 8) * ((30 * kB) / 0.1) ** 2)),
      1,
      1e-5,
      "Sommerfeld",
    );
  });

  it("doping in, levels and values out", async () => {
    const grid = await sampled("luttinger", { mesh: [12, 12, 12] });
    const window = ["--from", -0.15, "--to", 0.05, "--points", 101, "--temperature", 0, 300];
    const dopings = ["--doping", ...published.map(([p]) => -p), "--doping-unit", "per_cm3"];
    const result = (await answer([
      "dope",
      grid,
      "--response",
      "spin:xy:z",
      ...window,
      ...dopings,
      "--workers",
      1,
    ])) as DopeResult;
    expect(result.carriers).toBe("few");
    expect(result.responses[0].peaks).toEqual([]);
    for (const [i, [p, temperatureK, level, value]] of published.entries()) {
      const point: DopedPoint = result.dopings[i];
      expectWithin(point.doping.density / -p, 1, 1e-9, "density");
      const told = point.responses[0].at_temperatures.find((each) => each.temperature_K === temperatureK);
      // p goes as level^1.5: one percent of doping is two thirds of a percent of the level.
      expectWithin(told?.level_eV ?? Number.NaN, level, Math.abs((0.01 * level * 2) / 3), `level at ${temperatureK} K`);
      expectWithin(told?.value ?? Number.NaN, value, 2 * (told?.error ?? Number.NaN), `value at ${temperatureK} K`);
    }
  });
});
