// units.ts: prefactors of the Kubo formula and the units in which a response is told; every sign of a result is here.
import { boltzmannEvPerK, e2OverHbarS, hbarEvS, perAngstromInPerCm } from "../base/constants.js";
import { usageFault } from "../base/errors.js";
import type { GridFacts } from "../grid/grid.js";
import { cellArea, cellVolume, length } from "../zone/lattice.js";

/** How a zone mean of sum_n f Omega_n (angstrom^2 times the moment) becomes a response: value = factor * mean. */
export interface ResponseUnit {
  readonly unit: string;
  readonly factor: number;
}

type Facts = Pick<GridFacts, "vectorsA" | "periodic" | "electronsPerBand" | "moments">;

/** S/cm per zone mean, before the sign: e^2/hbar / cell volume. */
const bulkFactor = (facts: Facts): number => (e2OverHbarS / cellVolume(facts.vectorsA)) * perAngstromInPerCm;

/** For a layer: integral d2k / 2 pi = (2 pi / cell area) * zone mean; in e^2/h for charge, in e/2pi for a moment in hbar. */
const layerFactor = (facts: Facts): number => (2 * Math.PI) / cellArea(facts.vectorsA);

/** For a layer told as bulk: its a3 is the thickness. */
const thickFactor = (facts: Facts): number =>
  (e2OverHbarS / (cellArea(facts.vectorsA) * length(facts.vectorsA[2]))) * perAngstromInPerCm;

/** A unit on offer, and the labels that mean it: its own, and for what carries no hbar those of the moments in the same sweep. */
interface Choice {
  readonly unit: string;
  readonly factor: number;
  readonly labels: readonly string[];
}

const bulkUnits: readonly (readonly [unit: string, multiple: number])[] = [
  ["S/cm", 1],
  ["S/m", 100],
];
const fluxes: readonly (readonly [prefix: string, multiple: number])[] = [
  ["(hbar/e) ", 1],
  ["(hbar/2e) ", 2],
];

/** What carries no hbar: e^2/h for a layer, and S/cm. */
function plainChoices(facts: Facts, bulk: number): Choice[] {
  const conductivity = bulkUnits.map(([unit, multiple]): Choice => {
    return { unit, factor: bulk * multiple, labels: [unit, ...fluxes.map(([prefix]) => prefix + unit)] };
  });
  if (facts.periodic === 3) return conductivity;
  return [{ unit: "e^2/h", factor: layerFactor(facts), labels: ["e^2/h", "e/2pi"] }, ...conductivity];
}

/** A moment in hbar: e/2pi for a layer, and (hbar/e) S/cm. */
function momentChoices(facts: Facts, bulk: number): Choice[] {
  const conductivity = fluxes.flatMap(([prefix, double]) =>
    bulkUnits.map(([unit, multiple]): Choice => {
      return { unit: prefix + unit, factor: bulk * double * multiple, labels: [prefix + unit] };
    }),
  );
  if (facts.periodic === 3) return conductivity;
  return [{ unit: "e/2pi", factor: layerFactor(facts), labels: ["e/2pi"] }, ...conductivity];
}

function choices(carrier: string, facts: Facts): Choice[] {
  const bulk = facts.periodic === 3 ? bulkFactor(facts) : thickFactor(facts);
  const dimensionless = facts.moments.find((m) => m.name === carrier)?.unit === "1";
  return carrier === "charge" || dimensionless ? plainChoices(facts, bulk) : momentChoices(facts, bulk);
}

const bare = (label: string): string => label.replace(/[\s()]/g, "").toLowerCase();

/**
 * Prefactor and unit of a response. Charge: sigma_ab = -(e^2/hbar) integral f Omega; a moment's current per field carries no
 * charge factor, hence the other sign, and is told in (hbar/e) S/cm (a layer: e/2pi, charge e^2/h); in (hbar/2e) the
 * number doubles. Bands of two electrons count twice. `wanted` is one of the labels, e.g. "(hbar/2e) S/cm"; blanks may be
 * left out; a moment's unit, asked of what carries no hbar, means its counterpart there. Throws a usage Fault for a unit
 * that fits no response of this kind.
 */
export function responseUnit(carrier: string, facts: Facts, wanted?: string): ResponseUnit {
  const known = choices(carrier, facts);
  const found =
    wanted === undefined ? known[0] : known.find(({ labels }) => labels.some((label) => bare(label) === bare(wanted)));
  if (found === undefined)
    throw usageFault(
      `unit "${wanted}" does not fit ${carrier} on this grid`,
      `Use one of: ${known.map(({ unit }) => unit).join(", ")}.`,
    );
  const sign = carrier === "charge" ? -1 : 1;
  return { unit: found.unit, factor: sign * found.factor * facts.electronsPerBand };
}

/**
 * The thermoelectric counterpart of a response, alpha in j = sigma E - alpha grad T, from the zone mean of
 * integral de (-df/de) ((e - mu) / kT) sum_n theta(e - E_n) Omega_n: value = factor * mean, with -k_B/e and the prefactor of the
 * response itself. A current per field in S/m becomes one per temperature gradient in A/(m K), S becomes A; (hbar/e) and (hbar/2e)
 * stay before it as they stand in the response's unit.
 */
export function thermalUnit(carrier: string, facts: Facts, wanted?: string): ResponseUnit {
  const { unit, factor } = responseUnit(carrier, facts, wanted);
  const flux = /^\(hbar\/2?e\) /.exec(unit)?.[0] ?? "";
  const quantum = e2OverHbarS / (2 * Math.PI);
  if (unit === "e^2/h") return { unit: "A/K", factor: -boltzmannEvPerK * quantum * factor };
  if (unit === "e/2pi") return { unit: "(hbar/e) A/K", factor: -boltzmannEvPerK * quantum * factor };
  const perMetre = unit.endsWith("S/cm") ? 100 : 1;
  return { unit: `${flux}A/(m K)`, factor: -boltzmannEvPerK * perMetre * factor };
}

/**
 * Drude weight sigma_aa / tau = (e^2 / hbar^2) integral d^dk/(2 pi)^d sum_n (-df/dE) (dE_n/dk_a)^2 from the zone mean of
 * sum_n (-df/dE) (dE_n/dk_a)^2 (eV angstrom^2): (S/m)/s, or for a layer S/s.
 */
export function drudeUnit(facts: Pick<Facts, "vectorsA" | "periodic" | "electronsPerBand">): ResponseUnit {
  const perSecond = (e2OverHbarS / hbarEvS) * facts.electronsPerBand;
  if (facts.periodic === 2) return { unit: "S/s", factor: perSecond / cellArea(facts.vectorsA) };
  return { unit: "(S/m)/s", factor: (perSecond * perAngstromInPerCm * 100) / cellVolume(facts.vectorsA) };
}
