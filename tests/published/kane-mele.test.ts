// kane-mele.test.ts: is the spin Hall effect of Kane and Mele's layer quantised without Rashba coupling, and right with it?
//
// C. L. Kane, E. J. Mele, Phys. Rev. Lett. 95, 146802 and 226801 (2005): H and the phase boundary v = 3 sqrt3 l at r = 0.
// t = 1, l = 0.06. The rows with r != 0, not quantised, are converged sums made apart from this program (12 digits).
import { describe, expect, it } from "vitest";
import { curveValue, expectWithin, sampled, swept } from "./runs.js";

const thermalEv = [0, 0.03];
const published = [
  [0, 1.020923723529],
  [0.3, 0.85872384377],
  [-0.5, 0.756764169018],
] as const;
const asked = { response: ["spin:xy:z", "spin:yx:z", "charge:xy"], levels: [-0.5, 0.5, 11], thermalEv } as const;

describe("Kane and Mele's layer", async () => {
  const grid = await sampled("kane-mele", { mesh: [120, 120], set: { v: 0.1, r: 0.05 } });
  const points = await swept(grid, { method: "points", ...asked });
  const cells = await swept(grid, { method: "cells", ...asked });

  it("points: mid-gap and temperature rows with Rashba coupling", () => {
    expect(points.responses.map(({ unit }) => unit)).toEqual(["e/2pi", "e/2pi", "e^2/h"]);
    // Measured on 120^2: 6e-12 mid-gap; warm 2e-12, 8e-10 and 2.9e-8 (the Fermi surface at -0.5).
    expectWithin(curveValue(points, "spin:xy:z", 0), 1.021792379909, 2e-11, "mid-gap, 0 K");
    for (const [i, [mu, value]] of published.entries()) {
      expectWithin(curveValue(points, "spin:xy:z", mu, 0.03), value, [1e-11, 2e-9, 5e-8][i], `mu ${mu}`);
      expectWithin(curveValue(points, "spin:yx:z", mu, 0.03), -value, [1e-11, 2e-9, 5e-8][i], `yx, mu ${mu}`);
    }
  });

  it("cells: the same mid-gap; in the bands off by their bending in a cell", () => {
    expectWithin(curveValue(cells, "spin:xy:z", 0), 1.021792379909, 2e-11, "mid-gap, 0 K");
    // h^2: measured 2.0e-5, 2.1e-4 (8.8e-4 at 60^2) and 9e-6.
    for (const [i, [mu, value]] of published.entries())
      expectWithin(curveValue(cells, "spin:xy:z", mu, 0.03), value, [4e-5, 3e-4, 4e-5][i], `mu ${mu}`);
  });

  it("keeps time reversal: no anomalous Hall effect at any level", () => {
    for (const row of points.responses[2].value) for (const value of row) expectWithin(value, 0, 1e-13, "charge:xy");
  });

  it("with more Rashba coupling and no staggering: 1.0993786 e/2pi mid-gap", async () => {
    const other = await sampled("kane-mele", { mesh: [120, 120], set: { v: 0, r: 0.1 } });
    const result = await swept(other, { method: "points", response: ["spin:xy:z"], levels: 0 });
    expectWithin(curveValue(result, "spin:xy:z", 0), 1.099378614898, 5e-11, "mid-gap"); // measured 1.0e-11
  });

  it("without Rashba coupling: 1 e/2pi below v = 3 sqrt3 l = 0.3118, 0 above", async () => {
    const inGap = async (v: number): Promise<number> => {
      const layer = await sampled("kane-mele", { mesh: [120, 120], set: { r: 0, v } });
      return curveValue(await swept(layer, { method: "points", response: ["spin:xy:z"], levels: 0 }), "spin:xy:z", 0);
    };
    // Measured 4e-14, and near the closing of the gap 5.4e-6; 6e-12 at v = 0.5.
    expectWithin(await inGap(0.1), 1, 1e-12, "v = 0.1");
    expectWithin(await inGap(0.4), 0, 1e-5, "v = 0.4");
    expectWithin(await inGap(0.5), 0, 2e-11, "v = 0.5");
  });
});
