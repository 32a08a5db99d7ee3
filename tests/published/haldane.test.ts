// haldane.test.ts: is the anomalous Hall effect of Haldane's layer quantised in the gap, and right in the bands?
//
// F. D. M. Haldane, Phys. Rev. Lett. 61, 2015 (1988): H and the phase boundary |M| = 3 sqrt3 t2 |sin phi|. t1 = 1, t2 = 0.1,
// phi = pi/2. The rows at k_B T = 0.05 are converged sums made apart from this program (12 digits).
import { describe, expect, it } from "vitest";
import { curveValue, expectWithin, sampled, swept } from "./runs.js";

const thermalEv = [0, 0.05];
const published = [
  [0, -0.999766069052],
  [0.35, -0.931376226039],
  [0.5, -0.798374687009],
  [1, -0.312794862075],
  [-1, -0.312794862075],
] as const;
const asked = { response: ["charge:xy", "charge:yx"], levels: [-1, 1, 41], thermalEv } as const;

describe("Haldane's layer", async () => {
  const grid = await sampled("haldane", { mesh: [120, 120] });
  const points = await swept(grid, { method: "points", ...asked });
  const cells = await swept(grid, { method: "cells", ...asked });

  it("points: -1 e^2/h in the gap and all digits of the temperature rows on 120^2", () => {
    expect(points.responses[0].unit).toBe("e^2/h");
    // A smooth periodic integrand: measured below 1e-14 in the gap and 9e-12 in the bands.
    expectWithin(curveValue(points, "charge:xy", 0), -1, 1e-12, "gap, 0 K");
    for (const [mu, value] of published) {
      expectWithin(curveValue(points, "charge:xy", mu, 0.05), value, 1e-11, `mu ${mu}`);
      expectWithin(curveValue(points, "charge:yx", mu, 0.05), -value, 1e-11, `yx, mu ${mu}`);
    }
  });

  it("points: half the mesh gives the same gap, and seven digits in the bands", async () => {
    const coarse = await sampled("haldane", { mesh: [60, 60] });
    const result = await swept(coarse, { method: "points", ...asked });
    // Measured 2.9e-13 and 5.2e-7.
    expectWithin(curveValue(result, "charge:xy", 0), -1, 1e-12, "gap, 0 K");
    for (const [mu, value] of published)
      expectWithin(curveValue(result, "charge:xy", mu, 0.05), value, 1e-6, `mu ${mu}`);
  });

  it("cells: as exact in the gap; in the bands off by its bands' bending in a cell", () => {
    expectWithin(curveValue(cells, "charge:xy", 0), -1, 1e-12, "gap, 0 K");
    // h^2: measured 2.2e-4 at the band edge (8.5e-4 at 60^2), below 1.5e-5 elsewhere.
    for (const [mu, value] of published)
      expectWithin(curveValue(cells, "charge:xy", mu, 0.05), value, mu === 0.35 ? 3e-4 : 2e-5, `mu ${mu}`);
  });

  it("changes from -1 to 0 at |M| = 3 sqrt3 t2 = 0.5196, and to +1 with the sign of phi", async () => {
    const gap = { method: "points", response: ["charge:xy"], levels: 0 } as const;
    const inGap = async (set: Record<string, number>): Promise<number> =>
      curveValue(await swept(await sampled("haldane", { mesh: [120, 120], set }), gap), "charge:xy", 0);
    // The gap 2 (|M| - 0.5196) sets how soon a mesh is dense enough. Measured: 5.8e-5 at M = 0.45, 1.7e-5 at 0.6,
    // 2.4e-11 at 0.7.
    expectWithin(await inGap({ M: 0.45 }), -1, 1e-4, "M = 0.45");
    expectWithin(await inGap({ M: 0.6 }), 0, 3e-5, "M = 0.6");
    expectWithin(await inGap({ M: -0.7 }), 0, 1e-10, "M = -0.7");
    expectWithin(await inGap({ phi: -Math.PI / 2 }), 1, 1e-12, "phi = -pi/2");
  });
});
