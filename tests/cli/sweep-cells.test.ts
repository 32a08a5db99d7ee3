// sweep-cells.test.ts: are electrons and density of states of gold by `--method cells` close to a dense mesh, and closer than `points`?
import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { type Method, sampled, swept } from "../published/runs.js";
import { repository } from "../tooling/build-once.js";
import { describeWithNumpy } from "../tooling/python.js";

interface Dense {
  readonly electrons_per_cell: number[][];
  readonly states_per_eV: [null, number[]];
}

const [from, to, count] = [-6, 1, 141];
const roomK = 300;

/** Root mean square difference of two curves. */
const rms = (a: readonly number[], b: readonly number[]): number =>
  Math.sqrt(a.reduce((sum, value, i) => sum + (value - b[i]) ** 2, 0) / a.length);

describeWithNumpy("gold on 8^3 and 12^3 against energies on 48^3 by filling.py", async (python) => {
  const grids = [await sampled("metal", { mesh: [8, 8, 8] }), await sampled("metal", { mesh: [12, 12, 12] })];
  const curves = async (method: Method): Promise<CurvesResult[]> => {
    const asked = {
      method,
      response: ["charge:xy"],
      levels: [from, to, count],
      thermalEv: [0, roomK * 8.617333262e-5],
    } as const;
    return [await swept(grids[0], asked), await swept(grids[1], asked)];
  };
  const points = await curves("points");
  const cells = await curves("cells");
  const window = [points[0].reference_eV + from, points[0].reference_eV + to, count];
  const args = ["--divisions", 48, "--levels", ...window, "--temperature", 0, roomK].map(String);
  const script = join(repository, "tests/oracle/filling.py");
  const dense: Dense = JSON.parse(
    execFileSync(python, [script, join(repository, "data/metals/gold.json"), ...args], { encoding: "utf8" }),
  );

  it("electrons at 0 and 300 K: 0.044 and 0.020 of 11 (rms), a half to a third of the error of points", () => {
    // The reference itself is good to 0.005 at 0 K and 0.002 at 300 K (against 64^3). Measured, rms over 7 eV: points 0.100 and 0.058 at
    // 0 K, 0.085 and 0.047 at 300 K; cells 0.044 and 0.020, 0.042 and 0.018.
    for (const t of [0, 1])
      for (const [i, bound] of [0.055, 0.025].entries()) {
        const [plain, spread] = [points[i], cells[i]].map((c) =>
          rms(c.electrons_per_cell[t], dense.electrons_per_cell[t]),
        );
        expect(spread).toBeLessThan(bound);
        expect(spread).toBeLessThan(0.6 * plain);
      }
  });

  it("density of states: 8^3 cells are closer than 12^3 points, at 300 K and all the more at 0 K", () => {
    // Measured against the warm dense curve (up to 3.5 per eV, itself good to 0.06): points 0.82 and 0.51 at 300 K, 1.5 and 0.92 at 0 K;
    // cells 0.25 and 0.11 at 300 K, 0.30 and 0.13 at 0 K.
    for (const t of [0, 1]) {
      const error = (result: CurvesResult): number => rms(result.states_per_eV[t], dense.states_per_eV[1]);
      expect(error(cells[0])).toBeLessThan(0.4);
      expect(error(cells[1])).toBeLessThan(0.2);
      expect(error(cells[0])).toBeLessThan(0.6 * error(points[1]));
    }
  });
});
