// units.ts: prefactors of the Kubo formula and the units in which a response is told; every sign of a result is here.
import { e2OverHbarS, perAngstromInPerCm } from "../base/constants.js";
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

/** Each family of units: the flux quantum part, then the choices, as [label, multiple of the first]. */
function choices(carrier: string, facts: Facts): [string, number][] {
  const dimensionless = facts.moments.find((m) => m.name === carrier)?.unit === "1";
  const flux = carrier === "charge" || dimensionless ? [""] : ["(hbar/e) ", "(hbar/2e) "];
  const conductivity: [string, number][] = flux.flatMap((prefix, i): [string, number][] => {
    const bulk = (facts.periodic === 3 ? bulkFactor(facts) : thickFactor(facts)) * (i === 1 ? 2 : 1);
    return [
      [`${prefix}S/cm`, bulk],
      [`${prefix}S/m`, bulk * 100],
    ];
  });
  if (facts.periodic === 3) return conductivity;
  const sheet: [string, number] = carrier === "charge" || dimensionless ? ["e^2/h", layerFactor(facts)] : ["e/2pi", layerFactor(facts)];
  return [sheet, ...conductivity];
}

/**
 * Prefactor and unit of a response. Charge: sigma_ab = -(e^2/hbar) integral f Omega; a moment's current per field carries no
 * charge factor, hence the other sign, and is told in (hbar/e) S/cm (a layer: e/2pi, charge e^2/h); in (hbar/2e) the
 * number doubles. Bands of two electrons count twice. `wanted` is one of the labels, e.g. "(hbar/2e) S/cm"; blanks may be
 * left out. Throws a usage Fault for a unit that fits no response of this kind.
 */
export function responseUnit(carrier: string, facts: Facts, wanted?: string): ResponseUnit {
  const known = choices(carrier, facts);
  const bare = (label: string): string => label.replace(/[\s()]/g, "").toLowerCase();
  const suffix = wanted === undefined ? undefined : bare(wanted);
  const found =
    suffix === undefined
      ? known[0]
      : (known.find(([label]) => bare(label) === suffix) ?? (carrier === "charge" ? chargeTwin(known, suffix) : undefined));
  if (found === undefined)
    throw usageFault(
      `unit "${wanted}" does not fit ${carrier} on this grid`,
      `Use one of: ${known.map(([label]) => label).join(", ")}.`,
    );
  const sign = carrier === "charge" ? -1 : 1;
  return { unit: found[0], factor: sign * found[1] * facts.electronsPerBand };
}

/** A unit named for the moments, e.g. (hbar/2e) S/m or e/2pi, means its own counterpart for the charge in the same sweep. */
function chargeTwin(known: readonly [string, number][], suffix: string): [string, number] | undefined {
  if (suffix === "e/2pi") return known.find(([label]) => label === "e^2/h");
  return known.find(([label]) => suffix.endsWith(label.toLowerCase()) && label !== "e^2/h");
}
