// doping-amount.ts: a doping in electrons, concentration and substituted atoms, and how far it stretches the rigid bands.
import type { DopingAmount, RigidBandStretch } from "./dope-result.js";

/** What turns one measure of a doping into another. */
export interface DopingScale {
  /** Density of one electron per cell, in cm^-3 or cm^-2. */
  readonly densityOfOne: number;
  /** Electrons that a substituted atom adds (negative: takes away), for each atom in question. */
  readonly substitute: readonly number[];
  /** Atoms per cell that may be substituted. */
  readonly sites: number;
  /** Electrons per cell in the grid's bands. */
  readonly electrons: number;
}

/** Usual practice for rigid bands: a level moved by a few tenths of an eV, a few percent of the electrons, dilute substitution. */
export const usualPractice = { shiftEv: 0.3, share: 0.03, substituted: 0.1 } as const;

/** A doping in every measure. */
export function dopingAmount(perCell: number, { densityOfOne, substitute, sites }: DopingScale): DopingAmount {
  const parts = substitute.map((added) => perCell / (added * sites));
  return {
    per_cell: perCell,
    density: perCell * densityOfOne,
    substituted: parts.map((part) => (part < 0 ? null : part)),
  };
}

/** The stretch of a level shift and a doping, with a caution beyond usual practice. */
export function rigidBandStretch(levelShiftEv: number, amount: DopingAmount, scale: DopingScale): RigidBandStretch {
  const share = Math.abs(amount.per_cell) / scale.electrons;
  const percent = (part: number): string => `${Number((100 * part).toPrecision(2))}%`;
  const beyond: string[] = [];
  if (Math.abs(levelShiftEv) > usualPractice.shiftEv)
    beyond.push(`the level moves by ${Math.abs(levelShiftEv).toFixed(2)} eV (usual: up to ${usualPractice.shiftEv})`);
  if (share > usualPractice.share)
    beyond.push(`${percent(share)} of the electrons change (usual: up to ${percent(usualPractice.share)})`);
  const fractions = amount.substituted.filter((part) => part !== null);
  const least = Math.min(...fractions);
  if (fractions.length > 0 && least > 1) beyond.push("more atoms would have to be substituted than there are");
  else if (fractions.length > 0 && least > usualPractice.substituted)
    beyond.push(`${percent(least)} of the atoms are substituted (usual: up to ${percent(usualPractice.substituted)})`);
  return { level_shift_eV: levelShiftEv, electrons_share: share, caution: beyond.join("; ") };
}
