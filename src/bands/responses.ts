// responses.ts: turns response names into the products a kernel computes and the columns that are kept.
import { distance } from "fastest-levenshtein";
import { usageFault } from "../base/errors.js";
import type { GridFacts, MomentFacts } from "../grid/grid.js";

/** A curvature product, in the terms of the kernel: moment -1 is the charge current. */
export interface ResponseProduct {
  readonly moment: number;
  readonly flow: 0 | 1 | 2;
  readonly field: 0 | 1 | 2;
}

/** A column: one response as a weighted sum of products. */
export interface ResponseColumn {
  readonly name: string;
  readonly carrier: string;
  readonly terms: readonly { readonly product: number; readonly weight: number }[];
}

export interface ResponsePlan {
  readonly moments: readonly { readonly name: string; readonly direction: number }[];
  readonly products: readonly ResponseProduct[];
  readonly columns: readonly ResponseColumn[];
  /** Directions of the Drude weight, which every sweep keeps beside the responses: those of the plane or of space. */
  readonly drude: readonly (0 | 1 | 2)[];
}

const axes = ["x", "y", "z"];

/** Levi-Civita terms of the rotational mean (1/6) sum eps_abg sigma^g_ab. */
const rotationalMean: readonly (readonly [number, number, number, number])[] = [
  [0, 1, 2, 1 / 6],
  [1, 2, 0, 1 / 6],
  [2, 0, 1, 1 / 6],
  [1, 0, 2, -1 / 6],
  [2, 1, 0, -1 / 6],
  [0, 2, 1, -1 / 6],
];
/** In a layer only currents in the plane exist: the mean over rotations about the normal. */
const layerMean: readonly (readonly [number, number, number, number])[] = [
  [0, 1, 2, 1 / 2],
  [1, 0, 2, -1 / 2],
];

type Facts = Pick<GridFacts, "moments" | "periodic" | "electronsPerBand">;

function knownNames(facts: Facts): string[] {
  return ["charge", ...facts.moments.map((moment) => moment.name)];
}

function carrierOf(name: string, carrier: string, facts: Facts): MomentFacts | undefined {
  if (carrier === "charge") return undefined;
  const moment = facts.moments.find((candidate) => candidate.name === carrier);
  if (moment === undefined) {
    const names = knownNames(facts);
    const nearest = [...names].sort((a, b) => distance(a, carrier) - distance(b, carrier))[0];
    throw usageFault(
      `response "${name}": the grid has no moment "${carrier}"`,
      `It offers ${names.join(", ")}; did you mean "${nearest}"?`,
    );
  }
  if (carrier === "spin" && facts.electronsPerBand === 2)
    throw usageFault(
      `response "${name}": bands that hold 2 electrons carry no spin matrix that could drive a spin current`,
      "Store spinor bands (electronsPerBand 1) to ask for spin responses.",
    );
  return moment;
}

function axisPair(name: string, pair: string, facts: Facts): [number, number] {
  const [flow, field] = [axes.indexOf(pair[0]), axes.indexOf(pair[1])];
  if (pair.length !== 2 || flow < 0 || field < 0)
    throw usageFault(
      `response "${name}": "${pair}" is not a pair of axes`,
      "Write flow then field, e.g. spin:xy:z, or spin:hall, spin:all.",
    );
  if (facts.periodic === 2 && (flow === 2 || field === 2))
    throw usageFault(
      `response "${name}": a layer has no current or field along z`,
      "Use x and y for flow and field; the polarisation may be x, y or z.",
    );
  return [flow, field];
}

/** One name may stand for many: `spin:all`. */
function expandedNames(name: string, facts: Facts): string[] {
  const [carrier, what, ...rest] = name.split(":");
  if (what !== "all" || rest.length > 0) return [name];
  const moment = carrierOf(name, carrier, facts);
  const inPlane = axes.slice(0, facts.periodic);
  const suffixes = moment?.directions === 3 ? axes.map((g) => `:${g}`) : [""];
  return inPlane.flatMap((a) => inPlane.flatMap((b) => suffixes.map((suffix) => `${carrier}:${a}${b}${suffix}`)));
}

type Term = readonly [flow: number, field: number, component: number, weight: number];

/** The elementary terms of one response name. */
function termsOf(name: string, facts: Facts): { carrier: string; terms: readonly Term[] } {
  const parts = name.split(":");
  const [carrier, what, component] = parts;
  if (what === undefined || parts.length > 3)
    throw usageFault(
      `"${name}" is not a response name`,
      "Use charge:xy, spin:xy:z, orbital:xy:z, <moment>:ab:g, <moment>:hall or <moment>:all.",
    );
  const moment = carrierOf(name, carrier, facts);
  const polarised = moment?.directions === 3;
  if (what === "hall" && component === undefined) {
    const mean = facts.periodic === 3 ? rotationalMean : layerMean;
    if (polarised) return { carrier, terms: mean };
    // Without a component there is no scalar to average to: the z component of the antisymmetric vector, in a crystal as in a layer.
    const plane: Term[] = [
      [0, 1, 0, 1 / 2],
      [1, 0, 0, -1 / 2],
    ];
    return { carrier, terms: plane };
  }
  const [flow, field] = axisPair(name, what, facts);
  const g = component === undefined ? 0 : axes.indexOf(component);
  if (polarised !== (component !== undefined) || g < 0)
    throw usageFault(
      `response "${name}": ${polarised ? "the polarisation x, y or z is missing or unknown" : `"${carrier}" has no components`}`,
      polarised ? `Write e.g. ${carrier}:${what}:z.` : `Write ${carrier}:${what}.`,
    );
  return { carrier, terms: [[flow, field, g, 1]] };
}

/**
 * The plan for a list of response names on a grid: distinct moment components, distinct products, one column a response.
 * Throws a usage Fault for an unknown name, naming the nearest known one.
 */
export function planResponses(names: readonly string[], facts: Facts): ResponsePlan {
  const moments: { name: string; direction: number }[] = [];
  const products: ResponseProduct[] = [];
  const momentIndex = (name: string, direction: number): number => {
    const found = moments.findIndex((m) => m.name === name && m.direction === direction);
    return found >= 0 ? found : moments.push({ name, direction }) - 1;
  };
  const productIndex = (moment: number, flow: number, field: number): number => {
    const found = products.findIndex((p) => p.moment === moment && p.flow === flow && p.field === field);
    return found >= 0 ? found : products.push({ moment, flow: flow as 0, field: field as 0 }) - 1;
  };
  const unique = [...new Set(names.flatMap((name) => expandedNames(name, facts)))];
  const columns = unique.map((name): ResponseColumn => {
    const { carrier, terms } = termsOf(name, facts);
    const weighted = terms.map(([flow, field, g, weight]) => {
      const moment = carrier === "charge" ? -1 : momentIndex(carrier, g);
      return { product: productIndex(moment, flow, field), weight };
    });
    return { name, carrier, terms: weighted };
  });
  return { moments, products, columns, drude: facts.periodic === 3 ? [0, 1, 2] : [0, 1] };
}

/** What a sweep computes when no response is named: charge xy and the rotational means of the axial moments. */
export function defaultResponses(facts: Facts): string[] {
  const vector = facts.moments.filter(
    (m) => m.directions === 3 && !(m.name === "spin" && facts.electronsPerBand === 2),
  );
  return ["charge:xy", ...vector.map((m) => (facts.periodic === 3 ? `${m.name}:hall` : `${m.name}:xy:z`))];
}
