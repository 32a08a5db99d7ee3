// catalogue.ts: which samples there are, and the model of a name with parameters as a person types them.
import { closest } from "fastest-levenshtein";
import { usageFault } from "../base/errors.js";
import { demoSample } from "./demo.js";
import { diracSample } from "./dirac.js";
import { haldaneSample } from "./haldane.js";
import { kaneMeleSample } from "./kane-mele.js";
import { luttingerSample } from "./luttinger.js";
import { metalSample } from "./metal.js";
import type { SampleModel } from "./model.js";
import type { Parameter, ParameterValue, Sample, SampleMesh } from "./parameter.js";
import { zincblendeSample } from "./pseudopotential.js";
import { randomSample } from "./random.js";
import { rashbaSample } from "./rashba.js";
import { spSquareSample } from "./sp-square.js";

/** Every sample; a new one is a file of its own and a line here. */
export const sampleCatalogue: readonly Sample[] = [
  diracSample,
  haldaneSample,
  kaneMeleSample,
  rashbaSample,
  luttingerSample,
  zincblendeSample,
  spSquareSample,
  metalSample,
  demoSample,
  randomSample,
];

/** The entry of a name. Throws a usage Fault with the nearest name. */
export function sampleNamed(name: string): Sample {
  const found = sampleCatalogue.find((sample) => sample.name === name);
  if (found !== undefined) return found;
  const names = sampleCatalogue.map((sample) => sample.name);
  throw usageFault(
    `There is no sample "${name}".`,
    `Did you mean "${closest(name, names)}"? The samples are ${names.join(", ")}.`,
  );
}

function checkedValue(sample: Sample, key: string, typed: string): ParameterValue {
  const parameter: Parameter<ParameterValue> | undefined = Object.hasOwn(sample.parameters, key)
    ? (sample.parameters[key] as Parameter<ParameterValue>)
    : undefined;
  const names = Object.keys(sample.parameters);
  if (parameter === undefined) {
    throw usageFault(
      `Sample ${sample.name} has no parameter "${key}".`,
      `Did you mean "${closest(key, names)}"? Its parameters are ${names.join(", ")}.`,
    );
  }
  const result = parameter.schema.safeParse(typed);
  if (result.success) return result.data;
  const unit = parameter.unit === "" ? "" : ` in ${parameter.unit}`;
  throw usageFault(
    `Parameter ${key} of sample ${sample.name} is "${typed}", expected ${result.error.issues[0].message}.`,
    `${key} is: ${parameter.meaning}${unit}; default ${parameter.default ?? "not set"}.`,
  );
}

/**
 * The model of a sample with some of its parameters given as text, the others at their defaults. Throws usage Faults: no
 * such sample or parameter (with the nearest name), a value that is not what the parameter takes.
 */
export function buildSample(name: string, parameters: Readonly<Record<string, string>> = {}): SampleModel {
  const sample = sampleNamed(name);
  const given = Object.entries(parameters).map(([key, typed]) => [key, checkedValue(sample, key, typed)] as const);
  return sample.build(Object.fromEntries(given));
}

/** The default mesh of a sample for one of its models: the sample's own, with a single layer of k points for a layer. */
export function defaultMesh(name: string, model: SampleModel): SampleMesh {
  const { divisions, offset } = sampleNamed(name).mesh;
  if (model.periodic === 3) return { divisions, offset };
  return { divisions: [divisions[0], divisions[1], 1], offset: [offset[0], offset[1], 0] };
}
