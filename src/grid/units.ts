// units.ts: how the units a manifest may name convert into eV, angstrom, eV angstrom, eV angstrom^2 and hbar.
import { bohrA, hartreeEv, hbarMetrePerSecondEvA, rydbergEv } from "../base/constants.js";

/** Lengths: multiply by this to get angstrom. */
export const lengthUnits = { angstrom: 1, bohr: bohrA, nm: 10 } as const;

/** Energies: multiply by this to get eV. */
export const energyUnits = { eV: 1, meV: 1e-3, hartree: hartreeEv, rydberg: rydbergEv } as const;

/** dH/dk: multiply by this to get eV angstrom. `m/s` is the velocity itself, dH/dk = hbar v. */
export const velocityUnits = {
  "eV*angstrom": 1,
  "hartree*bohr": hartreeEv * bohrA,
  "rydberg*bohr": rydbergEv * bohrA,
  "m/s": hbarMetrePerSecondEvA,
} as const;

/** Moments: multiply by this to get hbar. `half-hbar` is what Pauli matrices count; `1` is a number without dimension. */
export const momentUnits = { hbar: 1, "half-hbar": 0.5, "1": 1 } as const;

/** d2H/dk2: multiply by this to get eV angstrom^2. */
export const hessianUnits = {
  "eV*angstrom^2": 1,
  "hartree*bohr^2": hartreeEv * bohrA * bohrA,
  "rydberg*bohr^2": rydbergEv * bohrA * bohrA,
} as const;

/** The names of a unit table, as zod's enum wants them. */
export function namesOf<T extends object>(table: T): [keyof T & string, ...(keyof T & string)[]] {
  return Object.keys(table) as [keyof T & string, ...(keyof T & string)[]];
}
