// demo.test.ts: is the invented metal of the demo what its page says?
import { describe, expect, it } from "vitest";
import { rydbergEv } from "../../src/base/constants.js";
import { createEigensolver } from "../../src/kernel/eigen.js";
import { demoModel, demoSample } from "../../src/samples/demo.js";
import { plainSum } from "./two-centre-sum.js";

describe("the demo's metal", () => {
  it("is a body-centred cubic metal of 18 bands and 8 electrons, with a reference level only as it stands", () => {
    const model = demoModel();
    expect(model.name).toBe("demo");
    expect(model.source).toContain("invented");
    expect(model.vectorsA[0]).toEqual([-1.6, 1.6, 1.6]);
    expect(model.electrons).toBe(8);
    expect((model.fermiEv ?? 0) / rydbergEv).toBeCloseTo(0.078384, 9);
    expect(demoModel({ electrons: 8.4 }).fermiEv).toBeUndefined();
    expect(demoModel({ xi: 0 }).fermiEv).toBeUndefined();
    expect(demoModel({ strain: 0.01, poisson: 0.5 }).vectorsA[0][2]).toBeCloseTo(1.6 * 0.995, 12);
    expect(demoSample.build({}).title).toBe(model.title);
  });

  it("has the levels of its file at the zone centre, without spin-orbit coupling (NumPy)", () => {
    const levels = new Float64Array(18);
    createEigensolver(18)(demoModel({ xi: 0 }).at([0, 0, 0]).h, levels, new Float64Array(648));
    const expected = [
      [-8.58376127, 2],
      [-0.76586196, 6],
      [1.27348144, 4],
      [21.32881523, 6],
    ];
    expected
      .flatMap(([level, times]) => Array<number>(times).fill(level))
      .forEach((level, i) => {
        expect(levels[i]).toBeCloseTo(level, 7);
      });
  });

  // The same plain sum by an independent NumPy program, 10^3 points, 300 K: far from converged (the page's table is dense),
  // but equal to the last digit given.
  it("gives on a plain 10^3 mesh the curves of the independent program", () => {
    const model = demoModel();
    const sums = plainSum(model, 10, 300);
    const expected = [
      [-0.3, 6.7075048, -29.518, 6870.78],
      [0, 8.0226973, 1238.197, 3769.722],
      [0.2, 8.3801081, 2772.144, 2107.641],
    ];
    for (const [level, electrons, spin, orbital] of expected) {
      const at = (model.fermiEv ?? 0) + level;
      expect(sums.electrons(at)).toBeCloseTo(electrons, 6);
      expect(sums.spin(at)).toBeCloseTo(spin, 1);
      expect(sums.orbital(at)).toBeCloseTo(orbital, 1);
    }
  });
});
