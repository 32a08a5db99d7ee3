// metal.ts: a two-centre metal of data/metals, or of a parameter file of one's own, as an entry of the catalogue.
import { existsSync, readdirSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { usageFault } from "../base/errors.js";
import type { SampleModel } from "./model.js";
import { declareSample, optionalReal, real, text, type ValuesOf, withDefaults } from "./parameter.js";
import { twoCentreModel } from "./two-centre.js";
import { readTwoCentreFile } from "./two-centre-file.js";
import { biaxialStrain } from "./two-centre-lattice.js";

const metalParameters = {
  file: text("gold", "a metal that comes with the program (gold), or the path of a parameter file (*.json)"),
  a: optionalReal("angstrom", "lattice constant; left out: the file's", { min: 0, open: true }),
  electrons: optionalReal("", "valence electrons per atom; left out: the file's", { min: 0, max: 18, open: true }),
  xi: optionalReal("eV", "spin-orbit strength on d; left out: the file's"),
  strain: real(0, "", "biaxial strain in the xy plane"),
  poisson: real(1, "", "contraction along z per strain in the plane", { min: 0 }),
};

const metalsDirectory = fileURLToPath(new URL("../../data/metals", import.meta.url));

function parameterFile(file: string): string {
  if (file.endsWith(".json")) return file;
  const path = join(metalsDirectory, `${file}.json`);
  if (existsSync(path)) return path;
  const known = readdirSync(metalsDirectory)
    .filter((name) => name.endsWith(".json"))
    .map((name) => name.slice(0, -".json".length));
  throw usageFault(
    `There is no metal "${file}".`,
    `Give ${known.join(", ")}, or the path of a parameter file that ends in .json.`,
  );
}

/** The metal of a parameter file under overrides; see two-centre.ts. Throws Faults for a missing or wrong file. */
export function metalModel(given: Partial<ValuesOf<typeof metalParameters>> = {}): SampleModel {
  const { file, a, electrons, xi, strain, poisson } = withDefaults(metalParameters, given);
  return twoCentreModel(readTwoCentreFile(parameterFile(file)), {
    ...(a === undefined ? {} : { latticeConstantA: a }),
    ...(electrons === undefined ? {} : { electrons }),
    ...(xi === undefined ? {} : { spinOrbitEv: xi }),
    ...(strain === 0 ? {} : { strain: biaxialStrain(strain, poisson) }),
  });
}

export const metalSample = declareSample(
  "metal",
  "cubic s, p, d metal with spin-orbit coupling from two-centre parameters, 18 bands (gold)",
  metalParameters,
  { divisions: [12, 12, 12], offset: [0, 0, 0] },
  metalModel,
);
