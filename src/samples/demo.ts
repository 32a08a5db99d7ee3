// demo.ts: the invented metal of the demo, as a model and as an entry of the catalogue.
import { fileURLToPath } from "node:url";
import type { SampleModel } from "./model.js";
import { declareSample, optionalReal, real, type ValuesOf, withDefaults } from "./parameter.js";
import { twoCentreModel } from "./two-centre.js";
import { readTwoCentreFile } from "./two-centre-file.js";
import { biaxialStrain } from "./two-centre-lattice.js";

const demoParameters = {
  a: optionalReal("angstrom", "lattice constant; left out: 3.2", { min: 0, open: true }),
  electrons: optionalReal("", "valence electrons per atom; left out: 8", { min: 0, max: 18, open: true }),
  xi: optionalReal("eV", "spin-orbit strength on d; left out: 0.4"),
  strain: real(0, "", "biaxial strain in the xy plane"),
  poisson: real(1, "", "contraction along z per strain in the plane", { min: 0 }),
};

const parametersPath = fileURLToPath(new URL("../../data/demo/parameters.json", import.meta.url));

/** Vadholmium, the invented metal of data/demo/README.md, under overrides. `fermiEv` only without any. */
export function demoModel(given: Partial<ValuesOf<typeof demoParameters>> = {}): SampleModel {
  const { a, electrons, xi, strain, poisson } = withDefaults(demoParameters, given);
  const model = twoCentreModel(readTwoCentreFile(parametersPath), {
    latticeConstantA: a,
    electrons,
    spinOrbitEv: xi,
    strain: strain === 0 ? undefined : biaxialStrain(strain, poisson),
  });
  return { ...model, name: "demo" };
}

/** The demo's entry in the catalogue; 24 divisions are what its story is told on. */
export const demoSample = declareSample(
  "demo",
  "vadholmium, an invented d metal: a spin Hall peak within reach of alloying, 18 bands",
  demoParameters,
  { divisions: [24, 24, 24], offset: [0, 0, 0] },
  demoModel,
);
