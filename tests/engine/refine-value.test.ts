// refine-value.test.ts: does a refined sweep reach closed forms and published values from meshes on which the plain sum fails?
//
// F. D. M. Haldane, Phys. Rev. Lett. 61, 2015 (1988); C. L. Kane, E. J. Mele, Phys. Rev. Lett. 95, 146802 (2005): rows as in
// tests/published. Massive Dirac point in a box: the solid angle of a square (samples/dirac.ts).
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { diracBoxCharge } from "../../src/samples/dirac.js";
import { refined, sampled } from "./refined.js";

const kelvinPerEv = 1 / 8.617333262e-5; // CODATA 2022
const published = {
  haldane: {
    response: "charge:xy",
    coldGap: -1,
    warmEv: 0.05,
    window: { from: -1, to: 1, points: 41 },
    rows: [
      [0, -0.999766069052],
      [0.35, -0.931376226039],
      [0.5, -0.798374687009],
      [1, -0.312794862075],
      [-1, -0.312794862075],
    ],
  },
  "kane-mele": {
    response: "spin:xy:z",
    coldGap: 1.021792379909,
    warmEv: 0.03,
    window: { from: -0.5, to: 0.5, points: 11 },
    rows: [
      [0, 1.020923723529],
      [0.3, 0.85872384377],
      [-0.5, 0.756764169018],
    ],
  },
} as const;

function levelOf(result: CurvesResult, levelEv: number): number {
  const at = result.level_eV.findIndex((level) => Math.abs(level - levelEv) < 1e-9);
  expect(at).toBeGreaterThanOrEqual(0);
  return at;
}

describe("layers of 8 x 8 and 16 x 16 points", () => {
  for (const name of ["haldane", "kane-mele"] as const)
    for (const n of [8, 16])
      it(`${name}, ${n}^2: within 2 bars and 1.2% of the gap's value; together 4 times nearer than the plain sum`, async () => {
        const { response, coldGap, warmEv, window, rows } = published[name];
        const temperature = [0, warmEv * kelvinPerEv];
        const asked = { response: [response], temperature, ...window };
        const result = await refined(sampled(name, {}, [n, n, 1]), asked);
        const { value, error, points } = result.responses[0];
        let [square, plainSquare] = [0, 0];
        for (const [t, mu, exact] of [[0, 0, coldGap] as const, ...rows.map((row) => [1, ...row] as const)]) {
          const level = levelOf(result, mu);
          const wrong = value[t][level] - exact;
          expect(Math.abs(wrong)).toBeLessThan(2 * error[t][level]);
          expect(Math.abs(wrong)).toBeLessThan(0.012);
          square += wrong ** 2;
          plainSquare += (points[t][level] - exact) ** 2;
        }
        expect(4 * Math.sqrt(square)).toBeLessThan(Math.sqrt(plainSquare));
      });
});

describe("a gap that closes between the points of a fixed mesh", () => {
  it("24^2, D from 0.3 to 0.003 eV: right within 1%, where the plain sum loses everything; samples grow like the depth", async () => {
    const box = 3;
    const found: CurvesResult["sampling"][] = [];
    for (const mass of [0.3, 0.03, 0.003]) {
      const grid = sampled("dirac", { mass: `${mass}`, box: `${box}` }, [24, 24, 1], [0.3, 0.4, 0]);
      const asked = { response: ["charge:xy"], from: 0, to: 0, points: 1, temperature: [0] };
      const result = await refined(grid, asked);
      const { value, error, points } = result.responses[0];
      const exact = diracBoxCharge(mass, box);
      expect(Math.abs(value[0][0] / exact - 1)).toBeLessThan(0.01);
      expect(Math.abs(value[0][0] - exact)).toBeLessThan(2 * error[0][0]);
      if (mass < 0.1) expect(Math.abs(points[0][0] / exact - 1)).toBeGreaterThan(0.5);
      found.push(result.sampling);
    }
    // A tenfold smaller gap is log2(10) = 3.3 halvings deeper.
    for (const [i, { samples, deepest, unresolved }] of found.entries()) {
      expect(unresolved).toBe(0);
      if (i === 0) continue;
      expect(deepest - found[i - 1].deepest).toBeLessThanOrEqual(5);
      expect(samples).toBeLessThan(2 * found[i - 1].samples);
    }
  });
});
