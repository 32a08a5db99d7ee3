// oracle.test.ts: does the NumPy oracle give the recipes' known responses? Ties the oracle to closed forms.
import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { expect, it } from "vitest";
import { requireOrSkip } from "../tooling/python.js";
import { cellAreaA2, closedForm, meshDivisions } from "./dirac.js";
import { numpy, recipes, root, runRecipe } from "./recipes.js";

interface Answer {
  readonly electrons_per_cell: number[][];
  readonly responses: { readonly name: string; readonly unit: string; readonly value: number[][] }[];
}

const oracle = (grid: string, ...options: string[]): Answer =>
  JSON.parse(
    execFileSync(numpy.tool ?? "python3", [join(root, "tests/oracle/points.py"), grid, ...options], {
      encoding: "utf8",
    }),
  );

const points = meshDivisions * meshDivisions;

/** (2 pi / area) times the mesh mean of the lower band's curvature: what a level in the gap gives in e/2pi. */
function lowerBand(pick: (k: number) => number): number {
  let sum = 0;
  for (let k = 0; k < points; k++) sum += pick(k);
  return ((2 * Math.PI) / cellAreaA2) * (sum / points);
}

for (const recipe of recipes) {
  const tool = numpy.tool === undefined ? undefined : recipe.tool;
  requireOrSkip(`${numpy.needs} and ${recipe.needs}`, tool, `points.py on ${recipe.file}`, () => {
    it("gives -1 e^2/h in the gap, the closed form's spin response, and full bands above", () => {
      const responses = ["charge:xy", "charge:yx", "spin:xy:z", "spin:hall"];
      const answer = oracle(
        runRecipe(recipe),
        ...["--levels", "0", "9", "2", "--temperature", "0", "100", "--degenerate", "1e-6", "--response", ...responses],
      );
      expect(answer.electrons_per_cell[0]).toEqual([1, 2]);
      const value = (response: number, temperature: number): number => answer.responses[response].value[temperature][0];
      expect(answer.responses.map((response) => response.unit)).toEqual(["e^2/h", "e^2/h", "e/2pi", "e/2pi"]);
      // The gap reaches from -0.6 to 1 eV: at 100 K the occupation is that of T = 0 to 1e-12.
      for (const temperature of [0, 1]) {
        expect(value(0, temperature)).toBeCloseTo(-lowerBand((k) => closedForm(k).chargeXyA2), 11);
        expect(value(1, temperature)).toBeCloseTo(-value(0, temperature), 12);
        expect(value(2, temperature)).toBeCloseTo(
          lowerBand((k) => closedForm(k).spinXyA2[2]),
          12,
        );
      }
      // Two bands, both full: every pair cancels.
      for (const { value } of answer.responses) expect(Math.abs(value[0][1])).toBeLessThan(1e-13);
    }, 60_000);
  });
}
