// sweep-numpy.test.ts: is `sweep --method points` of a real metal the sum that an independent NumPy script makes of the same files?
import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { expect, it } from "vitest";
import { sampled, swept } from "../published/runs.js";
import { repository } from "../tooling/build-once.js";
import { describeWithNumpy } from "../tooling/python.js";

interface Answer {
  readonly level_eV: number[];
  readonly electrons_per_cell: number[][];
  readonly states_per_eV: (number[] | null)[];
  readonly responses: { readonly name: string; readonly value: number[][] }[];
}

const response = ["charge:xy", "spin:hall", "spin:xy:z", "spin:yx:z", "orbital:hall"];
const [from, to, count] = [-2, 1, 61];
const degenerateEv = 1e-5;
const roomK = 300;

describeWithNumpy("gold on 12^3 against points.py", (python) => {
  it("has the same curves at 0 and 300 K to 1e-10 of their peaks", async () => {
    const grid = await sampled("metal", { mesh: [12, 12, 12] });
    const asked = ["--levels", from, to, count, "--temperature", 0, roomK, "--degenerate", degenerateEv, "--response"];
    const script = join(repository, "tests/oracle/points.py");
    const oracle: Answer = JSON.parse(
      execFileSync(python, [script, grid, ...asked.map(String), ...response], {
        encoding: "utf8",
        maxBuffer: 1e8,
        env: { ...process.env, OPENBLAS_NUM_THREADS: "1" },
      }),
    );
    const result = await swept(grid, {
      method: "points",
      response,
      levels: [from, to, count],
      thermalEv: [0, roomK * 8.617333262e-5],
      more: ["--degenerate", degenerateEv],
    });
    // No energy of this mesh coincides with a level, where the script would count a half and the program a whole state.
    const spin = result.responses[1].value.flat();
    const scale = Math.max(...spin.map(Math.abs));
    expect(scale).toBeGreaterThan(100);
    const largest = (table: number[][]): number => Math.max(...table.flat().map(Math.abs));
    const difference = (a: number[][], b: number[][]): number =>
      Math.max(...a.flatMap((row, t) => row.map((value, i) => Math.abs(value - b[t][i]))));
    for (const [r, { name, value }] of oracle.responses.entries()) {
      expect(result.responses[r].name).toBe(name);
      // charge:xy vanishes by time reversal: its round-off is measured by the spin response.
      const peak = Math.max(largest(value), name === "charge:xy" ? scale : 0);
      expect({ name, part: difference(value, result.responses[r].value) / peak < 1e-10 }).toEqual({ name, part: true });
    }
    expect(difference(oracle.electrons_per_cell, result.electrons_per_cell)).toBeLessThan(18e-12);
    const warmStates = oracle.states_per_eV[1] as number[];
    expect(difference([warmStates], [result.states_per_eV[1]])).toBeLessThan(1e-10 * largest([warmStates]));
  });
});
