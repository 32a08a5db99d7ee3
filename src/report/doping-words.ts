// doping-words.ts: how is a doping told in words: electrons more or fewer, a concentration, substituted atoms?
import type { DopingAmount } from "../studies/dope-result.js";
import { plain } from "./numbers.js";

/** What the words need to know of the result that the doping is from. */
export interface DopingTerms {
  readonly density_unit: "per_cm3" | "per_cm2";
  readonly substitute: readonly number[];
  readonly sites_per_cell: number;
}

/** "per cm^3" or "per cm^2". */
export const densityWords = (unit: "per_cm3" | "per_cm2"): string => unit.replace("_cm", " cm^");

/** A signed number: "+1", "-0.5". */
export const signed = (value: number, digits = 6): string => `${value > 0 ? "+" : ""}${plain(value, digits)}`;

/** "0.12 electrons per cell more (5.1e21 per cm^3)"; "no doping" at zero. */
export function dopingWords({ per_cell: perCell, density }: DopingAmount, { density_unit }: DopingTerms): string {
  if (perCell === 0) return "no doping";
  const way = perCell > 0 ? "more" : "fewer";
  return `${plain(Math.abs(perCell), 3)} electrons per cell ${way} (${plain(Math.abs(density), 3)} ${densityWords(density_unit)})`;
}

/** "1e19 holes per cm^3": where carriers are few, they have names. */
export function carrierWords({ density }: DopingAmount, { density_unit }: DopingTerms): string {
  return `${plain(Math.abs(density), 3)} ${density < 0 ? "holes" : "electrons"} ${densityWords(density_unit)}`;
}

/** A part of a whole in percent, two digits: "12%". */
export const percent = (part: number): string => `${plain(100 * part, 2)}%`;

/** A cell of a table: the part of the sites, or that this atom drives the level the other way. */
export const substitutedCell = (part: number | null): string => (part === null ? "wrong sign" : percent(part));

/** "12% of the atoms replaced by ones with +1 electron"; what cannot be reached is said; "" without substitutes. */
export function substitutionWords({ substituted }: DopingAmount, { substitute, sites_per_cell }: DopingTerms): string {
  const site = sites_per_cell === 1 ? "atoms" : `${plain(sites_per_cell)} sites of a cell`;
  const words = substitute.map((added, at) => {
    const part = substituted[at];
    const atom = `${signed(added)} electron${Math.abs(added) === 1 ? "" : "s"}`;
    if (part === null) return `not reached with ${atom} an atom, which moves the level the other way`;
    return part > 1
      ? `not reached with ${atom} an atom even if all are replaced`
      : `${percent(part)} of the ${site} replaced by ones with ${atom}`;
  });
  return words.join("; or ");
}
