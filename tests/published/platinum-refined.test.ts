// platinum-refined.test.ts: does a refined sweep of a platinum-like metal on 12^3 points give the converged values, cold and warm?
//
// Two-centre gold with platinum's lattice, filling and spin-orbit strength (platinum-like.test.ts). Dense sums by
// tests/oracle/gold_curve.py: tests/published/reference/platinum-like.json; between its 0 and 30 K they move by a few 1e-3.
import { readFileSync } from "node:fs";
import { describe, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { answer, expectWithin, sampled } from "./runs.js";

interface Reference {
  readonly reference_eV: number;
  readonly level_eV: readonly number[];
  readonly temperature_K: readonly number[];
  readonly first: Readonly<Record<"spin_hall" | "orbital_hall", readonly (readonly number[])[]>>;
}

const dense = JSON.parse(readFileSync(new URL("reference/platinum-like.json", import.meta.url), "utf8")) as Reference;
const atLevel = (name: "spin_hall" | "orbital_hall", kelvin: number): number =>
  dense.first[name][dense.temperature_K.indexOf(kelvin)][dense.level_eV.indexOf(0)];

describe("a platinum-like metal, refined from 12^3", () => {
  it("is within 1% of the dense values at 300 K, within 3% at 10 K, and within 2 bars", async () => {
    const grid = await sampled("metal", { mesh: [12, 12, 12], set: { a: 3.924, electrons: 10, xi: 0.55 } });
    const at = async (level: number, more: readonly (string | number)[]): Promise<CurvesResult> =>
      (await answer([
        ...["sweep", grid, "--from", level, "--to", level, "--points", 1, "--workers", 1],
        ...more,
      ])) as CurvesResult;
    const plain = await at(0, ["--method", "points", "--temperature", 300]);
    const asked = ["--response", "spin:xy:z", "orbital:xy:z", "--temperature", 10, 300];
    const { responses } = await at(dense.reference_eV - plain.reference_eV, asked);
    for (const [i, name] of (["spin_hall", "orbital_hall"] as const).entries()) {
      const { value, error } = responses[i];
      for (const [t, [kelvin, part]] of (
        [
          [30, 0.03],
          [300, 0.01],
        ] as const
      ).entries()) {
        const exact = atLevel(name, kelvin);
        expectWithin(value[t][0], exact, part * exact, `${name}, row ${t}`);
        expectWithin(value[t][0], exact, 2 * error[t][0], `${name}, row ${t}, bars`);
      }
    }
  });
});
