// dirac-companions.test.ts: has the massive Dirac point its Mott integral and its Drude weight, by every method?
//
// D. Xiao, M.-C. Chang, Q. Niu, Rev. Mod. Phys. 82, 1959 (2010), from memory: H = kx sx + ky sy + D sz. The Mott integral
//   alpha_xy = -(1/e) int de (-df/de) ((e - mu)/T) sigma_xy(e, 0), sigma_xy(e, 0) = -(e^2/2h) D / max(|e|, D),
// was evaluated apart from this program, in e k_B/h. A constant in sigma drops out: no tail of the box. Drude weight:
//   sigma_xx / tau = (e^2/hbar^2) int d2k/(2 pi)^2 delta(E - mu) v_x^2 = (e^2/hbar^2) (mu^2 - D^2) / (4 pi |mu|), E^2 = k^2 + D^2, v = k / E.
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { answer, expectWithin, kelvinOf, place, sampled } from "./runs.js";

const mass = 0.3;
// mu, k_B T, alpha_xy in e k_B/h
const published = [
  [0.45, 0.01, -0.0245382216],
  [0.45, 0.025, -0.0627810462],
  [0.2, 0.05, -0.031092031],
] as const;
/** e k_B/h in A/K, CODATA 2022 (exact in the SI). */
const quantum = (1.602176634e-19 * 1.380649e-23) / 6.62607015e-34;
/** (e^2/hbar^2) eV in S/s, exact in the SI: e^2/hbar / (hbar in eV s). */
const drudeQuantum = (1.602176634e-19 / (6.62607015e-34 / (2 * Math.PI))) ** 2 * 1.602176634e-19;

async function swept(grid: string, method: string): Promise<CurvesResult> {
  const kelvin = [0, 0.01, 0.025, 0.05].map(kelvinOf);
  const window = ["--from", -0.75, "--to", 0.75, "--points", 31, "--temperature", ...kelvin, "--workers", 1];
  const asked = ["--response", "charge:xy", "--method", method, "--thermal"];
  return (await answer(["sweep", grid, ...asked, ...window])) as CurvesResult;
}

/** Mott integral, e k_B/h, and its bar. */
function mott(result: CurvesResult, mu: number, thermalEv: number): { value: number; error: number } {
  const { level, temperature } = place(result, mu, thermalEv);
  const { unit, value, error } = result.responses[0].thermal as NonNullable<(typeof result.responses)[0]["thermal"]>;
  expect(unit).toBe("A/K");
  return { value: value[temperature][level] / quantum, error: error[temperature][level] / quantum };
}

/** Level step of the sweeps, eV: cold densities are means over a hat of that half width. */
const levelStepEv = 0.05;

/**
 * Drude weight in (e^2/hbar^2) eV: the closed form D and (1/2) D'' times the variance of what it is averaged with: pi^2 (k_B T)^2 / 3 of
 * -df/dE (Sommerfeld), step^2 / 6 of the hat at 0 K. D'' = -2 mass^2 / (4 pi |mu|^3).
 */
function drudeWeight(mu: number, thermalEv: number): number {
  if (Math.abs(mu) <= mass) return 0;
  const variance = thermalEv > 0 ? (Math.PI * thermalEv) ** 2 / 3 : levelStepEv ** 2 / 6;
  return (Math.abs(mu) - mass ** 2 / Math.abs(mu) - (variance * mass ** 2) / Math.abs(mu) ** 3) / (4 * Math.PI);
}

const cases = [
  // Mott, measured: points 4e-7 (k_B T = 0.01 is less than a mesh step's energy), 5e-11, 2e-11; cells, h^2: 1.1e-5, 3.4e-5, 3.6e-5;
  // refine 7e-5, 1.9e-5, 5e-6 on a 16th of the points. Drude, relative, cold and warm: counting single points is noise at 0 K.
  { method: "points", mesh: 240, mott: [1e-6, 1e-9, 1e-10], drude: [0.3, 2e-3] },
  { method: "cells", mesh: 240, mott: [3e-5, 7e-5, 7e-5], drude: [5e-4, 5e-4] },
  { method: "refine", mesh: 60, mott: [2e-4, 5e-5, 2e-5], drude: [8e-3, 8e-3] },
] as const;

for (const { method, mesh, mott: tolerance, drude } of cases)
  describe(`massive Dirac point by ${method}, mesh ${mesh}`, async () => {
    const result = await swept(await sampled("dirac", { mesh: [mesh, mesh] }), method);

    it("has the published Mott integral within its bar, and none at 0 K", () => {
      for (const [i, [mu, thermalEv, value]] of published.entries()) {
        const found = mott(result, mu, thermalEv);
        expectWithin(found.value, value, tolerance[i], `mu ${mu}, k_B T ${thermalEv}`);
        if (method === "refine") expectWithin(found.value, value, 2 * found.error, `bar at mu ${mu}`);
        expectWithin(mott(result, -mu, thermalEv).value, -value, tolerance[i], "odd in mu: sigma is even");
      }
      for (const mu of [-0.5, 0.45]) expect(mott(result, mu, 0)).toEqual({ value: 0, error: 0 });
    });

    it("has the Drude weight (mu^2 - D^2) / (4 pi |mu|), alike along x and y, and none in the gap", () => {
      expect(result.drude?.map(({ name, unit }) => [name, unit])).toEqual([
        ["drude:xx", "S/s"],
        ["drude:yy", "S/s"],
      ]);
      const [xx, yy] = result.drude as NonNullable<typeof result.drude>;
      for (const mu of [-0.6, 0.1, 0.45, 0.75])
        for (const [i, thermalEv] of [0, 0.01].entries()) {
          const { level, temperature } = place(result, mu, thermalEv);
          const value = xx.value[temperature][level] / drudeQuantum;
          const error = xx.error[temperature][level] / drudeQuantum;
          const exact = drudeWeight(mu, thermalEv);
          expectWithin(value, exact, drude[i] * exact || 1e-8, `mu ${mu}, k_B T ${thermalEv}`);
          if (method === "refine") expectWithin(value, exact, 2 * error, `bar at mu ${mu}, k_B T ${thermalEv}`);
          expectWithin(yy.value[temperature][level] / drudeQuantum, value, 1e-12, "square symmetry");
        }
    });
  });
