// two-centre.test.ts: does the two-centre sampler give the numbers of gold.py, which was written without looking at it?
import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import type { PointData } from "../../src/grid/target.js";
import { createSampler } from "../../src/samples/eigenbasis.js";
import { twoCentreModel } from "../../src/samples/two-centre.js";
import { readTwoCentreFile } from "../../src/samples/two-centre-file.js";
import { root } from "../recipes/recipes.js";
import { describeWithNumpy } from "../tooling/python.js";

interface OraclePoint {
  readonly fraction: Triple;
  readonly energy_eV: number[];
  /** Bands of each degenerate set. */
  readonly groups: number[][];
  /** [direction][group] */
  readonly velocity_trace_eVA: number[][];
  readonly curvature_A2: Record<string, number[]>;
}

const parameters = join(root, "data/metals/gold.json");
const bands = 18;
const degenerateEv = 1e-6;
// Two general points; a mirror plane; the middle of the square face, where sets of more than two bands meet.
const fractions = [0.1, 0.23, 0.37, 0.71, 0.05, 0.4, 0.3, 0.3, 0.1, 0.5, 0.5, 0];

function oraclePoints(python: string): OraclePoint[] {
  const options = ["sample", "--degenerate", String(degenerateEv), "--k", ...fractions.map(String)];
  return JSON.parse(
    execFileSync(python, [join(root, "tests/oracle/gold.py"), parameters, ...options], { encoding: "utf8" }),
  );
}

/** k of fractions of the fcc reciprocal vectors b1 = (2 pi / a)(-1, 1, 1), ...; 1/angstrom. */
function cartesian([f1, f2, f3]: Triple, sideA: number): Triple {
  const unit = (2 * Math.PI) / sideA;
  return [unit * (-f1 + f2 + f3), unit * (f1 - f2 + f3), unit * (f1 + f2 - f3)];
}

/** Sum over the bands of `group` of -2 Im sum_m j_nm v_mn / dE^2, j = (O v_x + v_x O) / 2, field y; by the definition. */
function groupCurvature(point: PointData, moment: Float64Array, group: readonly number[]): number {
  const [vx, vy] = point.velocity;
  let total = 0;
  for (const n of group) {
    for (let m = 0; m < bands; m++) {
      const gap = point.energyEv[n] - point.energyEv[m];
      if (Math.abs(gap) < degenerateEv) continue;
      let [re, im] = [0, 0];
      for (let i = 0; i < bands; i++) {
        for (const [a, b] of [[moment, vx] as const, [vx, moment] as const]) {
          const [p, q] = [2 * (n * bands + i), 2 * (i * bands + m)];
          re += (a[p] * b[q] - a[p + 1] * b[q + 1]) / 2;
          im += (a[p] * b[q + 1] + a[p + 1] * b[q]) / 2;
        }
      }
      const back = 2 * (m * bands + n);
      total += (-2 * (re * vy[back + 1] + im * vy[back])) / (gap * gap);
    }
  }
  return total;
}

describeWithNumpy("two-centre gold against an independent NumPy sampler", (python) => {
  const expected = oraclePoints(python);
  const model = twoCentreModel(readTwoCentreFile(parameters));
  const sample = createSampler(model, "none");
  // a1 = (0, a/2, a/2), so its largest component is half the cube's side.
  const pointAt = (fraction: Triple): PointData => sample(cartesian(fraction, 2 * Math.max(...model.vectorsA[0])));

  it("has the same energies and the same slopes of each degenerate set", () => {
    for (const oracle of expected) {
      const point = pointAt(oracle.fraction);
      oracle.energy_eV.forEach((energy, n) => {
        expect(point.energyEv[n]).toBeCloseTo(energy, 10);
      });
      oracle.groups.forEach((group, g) => {
        point.velocity.forEach((v, direction) => {
          const trace = group.reduce((sum, n) => sum + v[2 * (n * bands + n)], 0);
          expect(trace).toBeCloseTo(oracle.velocity_trace_eVA[direction][g], 9);
        });
      });
    }
  });

  it("has the same spin and orbital curvature of each degenerate set", () => {
    for (const oracle of expected) {
      const point = pointAt(oracle.fraction);
      for (const name of ["spin", "orbital"]) {
        const moment = point.moments.get(name)?.[2];
        if (moment === undefined) throw new Error(`the sampler has no ${name}`);
        oracle.groups.forEach((group, g) => {
          const reference = oracle.curvature_A2[`${name}:xy:z`][g];
          // Relative: near-degeneracies make single curvatures large and magnify round-off in the gap.
          const difference = groupCurvature(point, moment, group) - reference;
          expect(Math.abs(difference) / Math.max(1, Math.abs(reference))).toBeLessThan(1e-8);
        });
      }
    }
  });
});
