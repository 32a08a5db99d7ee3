// page.test.ts: does the format's page say what the reader does, and show the recipes as they are?
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { parseManifest } from "../../src/grid/open.js";
import { energyUnits, hessianUnits, lengthUnits, momentUnits, velocityUnits } from "../../src/grid/units.js";
import { ascendingToleranceEv, hermitianTolerance, smallestScale } from "../../src/grid/verify.js";
import { recipes, root } from "./recipes.js";

const page = readFileSync(join(root, "data/format.md"), "utf8");
/** Contents of the fenced blocks of one language. */
const fenced = (language: string): string[] =>
  [...page.matchAll(new RegExp(`^\`\`\`${language}\n([\\s\\S]*?)^\`\`\`$`, "gm"))].map((match) => match[1]);

describe("the format's page", () => {
  for (const { file } of recipes) {
    it(`shows ${file} as it is`, () => {
      const language = file.endsWith(".py") ? "python" : "fortran";
      expect(fenced(language)).toContain(readFileSync(join(root, "data/recipes", file), "utf8"));
    });
  }

  it("has an example manifest that the reader accepts", () => {
    const example = fenced("json").find((text) => text.includes('"format"'));
    const manifest = parseManifest(new TextEncoder().encode(example));
    expect(Object.keys(manifest.arrays.moments)).toEqual(["spin", "orbital"]);
  });

  it("names every unit that the reader knows", () => {
    const tables = [energyUnits, lengthUnits, velocityUnits, momentUnits, hessianUnits];
    for (const unit of tables.flatMap((table) => Object.keys(table))) expect(page).toContain(`\`${unit}\``);
  });

  it("states the tolerances of the checks", () => {
    const checks = page.slice(page.indexOf("## What the reader checks"));
    expect(checks).toContain(`${ascendingToleranceEv.toExponential()} eV`);
    expect(checks).toContain(`${hermitianTolerance[64].toExponential()} of the matrix's largest element`);
    expect(checks).toContain(`${hermitianTolerance[32].toExponential()} for`);
    expect(checks).toContain(`is measured against ${smallestScale}`);
  });
});
