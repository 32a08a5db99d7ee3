// splittings.test.ts: are mesh points told that sit on small splittings and carry a plain sum, and those with energies noise in their pairs?
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { checkHealth, fullEffort } from "../../src/health/health.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { healthNotes, quickHealth } from "../../src/studies/quick-health.js";
import { countBelow } from "../../src/studies/reference.js";
import { sweepOptions } from "../../src/studies/sweep.js";
import { planSweep } from "../../src/studies/sweep-plan.js";
import { planted, sampled } from "./plant.js";

const root = mkdtempSync(join(tmpdir(), "tidegauge-splittings-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));

describe("small splittings", () => {
  it.each([
    ["0.0001", true],
    ["0.65", false],
  ])("gold with a spin-orbit strength of %s eV: told is %s", (xi, told) => {
    const directory = join(root, `gold-${xi}`);
    const grid = planted(sampled({ ...buildSample("metal", { xi }), fermiEv: 1.5 }, [6, 6, 6]), directory);
    const { findings } = checkHealth(grid, fullEffort, (level) => countBelow(grid.facts, level));
    expect(findings.some(({ id }) => id === "small-splittings")).toBe(told);
  });
});

describe("noise in pairs", () => {
  // With time reversal and inversion every level is twofold (Kramers): here the partners are 3e-6 eV apart on disk.
  const crystal = sampled(buildSample("random", { symmetry: "both" }), [6, 6, 6]);
  const directory = join(root, "noisy");
  planted(crystal, directory, {
    point: (p) => ({ ...p, energyEv: p.energyEv.map((e, band) => e + (band % 2) * 3e-6) }),
  });

  it("sets the default degeneracy tolerance to ten times the splitting", () => {
    const planned = planSweep(directory, sweepOptions.parse({}));
    expect(planned.options.degenerate).toBeCloseTo(3e-5, 12);
    expect(planned.job.denominator.degenerateEv).toBe(planned.options.degenerate);
    expect(planSweep(directory, sweepOptions.parse({ degenerate: 1e-7 })).options.degenerate).toBe(1e-7);
  });

  it("is told when a smaller one is asked for", () => {
    const { facts } = planted(crystal, join(root, "exact"));
    expect(quickHealth(facts.directory, facts).degenerateEv).toBe(1e-5);
    const noisy = quickHealth(directory, { sha256: "" });
    expect(noisy.reversal.kept).toBe("both");
    expect(healthNotes(noisy, 1, 1e-7).join()).toMatch(/split by noise.*3e-5|split by noise.*0\.00003/);
    expect(healthNotes(noisy, 1, 3e-5)).toEqual([]);
  });
});
