// outside.test.ts: band grids that NumPy and Fortran wrote (outside/make.py, make.f90) give the numbers of their formula.
import { readdirSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { expect, it } from "vitest";
import { bohrA } from "../../src/base/constants.js";
import { openGrid, openReader, viewOf, wantAll } from "../../src/grid/reader.js";

const folder = fileURLToPath(new URL("outside/", import.meta.url));
const grids = readdirSync(folder, { withFileTypes: true }).filter((entry) => entry.isDirectory());

it("finds the grids", () => {
  expect(grids.map((entry) => entry.name).sort()).toEqual(["fortran", "numpy"]);
});

it.each(grids.map((entry) => entry.name))("%s", (name) => {
  const grid = openGrid(`${folder}${name}`);
  expect(grid.facts).toMatchObject({ title: name, fermiEv: 1.5, electrons: 2, points: 6, offset: [0, 0, 0.5] });
  expect(grid.facts.vectorsA[1]).toEqual([0, bohrA, 0]);
  const block = openReader(grid, wantAll(grid)).read(0, 6);
  for (let k = 0; k < 6; k++) {
    for (let b = 0; b < 2; b++) expect(block.energyEv[2 * k + b]).toBeCloseTo(k + 2 * b - 0.3, 6);
    for (let d = 0; d < 3; d++) {
      const [velocity, spin] = [block.velocity[d], block.moments.get("spin")?.[d]];
      if (velocity === undefined || spin === undefined) throw new Error("not read");
      const views = [viewOf(velocity, 6, 2), viewOf(spin, 6, 2)];
      for (let b = 0; b < 2; b++) {
        for (let c = 0; c < 2; c++) {
          const re = 100 * (k + 1) + 10 * d + Math.min(b, c) + 0.1 * Math.max(b, c);
          const im = (b - c) * (k + d + 1);
          expect(views[0].get(k, b, c, 0)).toBeCloseTo(re, 12);
          expect(views[0].get(k, b, c, 1)).toBeCloseTo(im, 12);
          // Written doubled and divided by 1000, in halves of hbar; single precision in the NumPy grid.
          expect(views[1].get(k, b, c, 0) * 1000).toBeCloseTo(re, 3);
          expect(views[1].get(k, b, c, 1) * 1000).toBeCloseTo(im, 3);
        }
      }
    }
  }
});
