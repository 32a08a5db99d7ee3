// gold.test.ts: does gold from two-centre parameters have its levels, its electrons, and the plain sums of an independent program?
//
// Parameters and formulas: data/metals/gold.json; method: M. J. Mehl, D. A. Papaconstantopoulos, Phys. Rev. B 54, 4519 (1996);
// spin-orbit strength 0.65 eV from memory. The numbers below were computed by NumPy programs apart from this one: levels at the zone
// centre, the level of 11 electrons at 1000 K on a dense mesh, and the plain 12^3 sums of the rotational means at that level and 300 K.
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { curveValue, expectWithin, sampled, swept } from "./runs.js";

const rydbergEv = 27.211386245981 / 2; // CODATA 2022
const zoneCentreRy = [
  -0.44424344, -0.11682475, -0.11682475, -0.02428855, 0.0680525, 0.0680525, 1.8400445, 1.8400445, 1.8400445,
];
const roomEv = 300 * 8.617333262e-5;

describe("gold", async () => {
  const grid = await sampled("metal", { mesh: [12, 12, 12] });
  const response = ["spin:hall", "orbital:hall", "charge:xy"];
  const room = { response, levels: 0, thermalEv: [roomEv] } as const;
  const points = await swept(grid, { method: "points", ...room });

  it("has its levels at the zone centre, each twice, in the file that is written", async () => {
    const centre = await sampled("metal", { mesh: [1, 1, 1] });
    const bytes = readFileSync(join(centre, "energy.f64"));
    const levels = Array.from({ length: bytes.length / 8 }, (_, band) => bytes.readDoubleLE(8 * band) / rydbergEv);
    expect(levels).toHaveLength(18);
    // Half a unit of the last digit told: 5e-9, or 5e-8 where seven digits are told.
    for (const [band, level] of levels.entries())
      expectWithin(level, zoneCentreRy[Math.floor(band / 2)], band < 12 ? 6e-9 : 6e-8, `band ${band}`);
  });

  it("counts levels from 0.290343 Ry, and holds 11 electrons there to what 12^3 allows", async () => {
    expectWithin(points.reference_eV / rydbergEv, 0.290343, 5e-7, "Fermi level");
    const cells = await swept(grid, { method: "cells", ...room });
    // Measured 11.0187 for points and 11.0095 for cells; 0.29 states per eV: 0.03 eV of level.
    expectWithin(points.electrons_per_cell[0][0], 11, 0.03, "electrons, points");
    expectWithin(cells.electrons_per_cell[0][0], 11, 0.015, "electrons, cells");
  });

  it("points: spin:hall 271.137 and orbital:hall 1052.193 (hbar/e) S/cm at 300 K on 12^3, to the last digit", () => {
    expect(points.responses[0].unit).toBe("(hbar/e) S/cm");
    expectWithin(curveValue(points, "spin:hall", 0, roomEv), 271.137, 6e-4, "spin");
    expectWithin(curveValue(points, "orbital:hall", 0, roomEv), 1052.193, 6e-4, "orbital");
  });

  it("has no anomalous Hall effect: time reversal", () => {
    // Pairs cancel between k and -k: round-off of sums of 1e4 S/cm.
    expectWithin(curveValue(points, "charge:xy", 0, roomEv), 0, 1e-9, "charge:xy");
  });

  it("in (hbar/2e) S/cm the number doubles, and the unit says so", async () => {
    const half = await swept(grid, { method: "points", ...room, more: ["--unit", "(hbar/2e) S/cm"] });
    expect(half.responses[0].unit).toBe("(hbar/2e) S/cm");
    expectWithin(curveValue(half, "spin:hall", 0, roomEv), 2 * 271.137, 1.2e-3, "doubled");
  });
});
