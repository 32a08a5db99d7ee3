// clean.test.ts: is a clean grid left in peace, whatever the model, the mesh and the width of its numbers?
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import type { Triple } from "../../src/grid/grid.js";
import type { GridLayout } from "../../src/grid/writer.js";
import { checkHealth, fullEffort, quickEffort } from "../../src/health/health.js";
import { buildSample, defaultMesh } from "../../src/samples/catalogue.js";
import { writeSample } from "../../src/samples/write.js";
import { healthNotes } from "../../src/studies/quick-health.js";
import { countBelow } from "../../src/studies/reference.js";

const root = mkdtempSync(join(tmpdir(), "tidegauge-clean-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));

type Clean = readonly [string, Readonly<Record<string, string>>, Triple, "single" | "double"];

const grids: Clean[] = [
  ["metal", {}, [6, 6, 6], "single"],
  ["metal", {}, [8, 8, 8], "double"],
  ["metal", { strain: "0.02" }, [5, 6, 7], "double"],
  ["metal", {}, [5, 5, 5], "single"],
  ["luttinger", {}, [7, 7, 7], "double"],
  ["dirac", {}, [7, 7, 1], "double"],
  ["demo", {}, [5, 5, 5], "single"],
  ["kane-mele", {}, [12, 12, 1], "single"],
  ["kane-mele", { r: "0" }, [18, 12, 1], "double"],
  ["haldane", { M: "0.1" }, [12, 12, 1], "single"],
  ["sp-square", {}, [16, 16, 1], "single"],
  ["random", {}, [8, 8, 8], "single"],
  ["random", { seed: "7" }, [6, 6, 6], "double"],
  ["random", { seed: "9" }, [5, 5, 5], "double"],
  ["random", { symmetry: "time-reversal", seed: "3" }, [8, 8, 8], "double"],
  ["random", { symmetry: "inversion", seed: "4" }, [8, 8, 8], "single"],
  ["random", { symmetry: "both", seed: "5", bands: "8" }, [8, 8, 8], "single"],
  ["random", { periodic: "2", seed: "6", soc: "1" }, [16, 16, 1], "single"],
  ["dirac", {}, [20, 20, 1], "single"],
  ["rashba", {}, [20, 20, 1], "double"],
  ["luttinger", {}, [10, 10, 10], "single"],
  ["luttinger", { ezz: "0.005" }, [6, 6, 6], "double"],
  ["luttinger", { ezz: "-0.005" }, [8, 8, 8], "double"],
  ["zincblende", {}, [6, 6, 6], "double"],
];

const single: GridLayout = {
  arrays: {
    energy: { type: "float32" },
    velocity: { type: "complex64" },
  },
};

/** Everything that a grid stores in 32 bits. */
function layoutFor(model: ReturnType<typeof buildSample>): GridLayout {
  const names = [...model.moments.keys()].map((name) => `moments.${name}`);
  if (model.hessian === "array") names.push("hessian");
  return {
    arrays: { ...single.arrays, ...Object.fromEntries(names.map((name) => [name, { type: "complex64" as const }])) },
  };
}

describe("no false alarm", () => {
  it.each(grids)("%s %o on %o in %s precision", (name, parameters, divisions, width) => {
    const model = buildSample(name, parameters);
    const directory = join(
      root,
      `${grids.findIndex((g) => g[0] === name && g[1] === parameters && g[2] === divisions)}`,
    );
    const grid = writeSample(model, {
      directory,
      divisions,
      offset: defaultMesh(name, model).offset,
      layout: width === "single" ? layoutFor(model) : {},
    })!;
    const quick = checkHealth(grid, quickEffort);
    const full = checkHealth(grid, fullEffort, (level) => countBelow(grid.facts, level));
    rmSync(directory, { recursive: true });
    if (name === "zincblende") {
      expect(full.trustedEv).toBeLessThan(20);
      expect(full.findings.map(({ id }) => id)).toEqual(["completeness-range"]);
      expect(healthNotes(quick, 25, 1e-5).join()).toMatch(/good to 10% up to/);
      expect(healthNotes(quick, 0, 1e-5)).toEqual([]);
    }
    for (const { findings, trustedEv } of [quick, full]) {
      expect(findings.filter(({ severity }) => severity !== "note")).toEqual([]);
      // Models in a finite basis close at all bands; plane waves cut to 30 bands do not.
      if (name === "zincblende") expect(trustedEv).toBeGreaterThan(model.fermiEv ?? 0);
      else expect([null, Infinity]).toContain(trustedEv);
    }
  });
});
