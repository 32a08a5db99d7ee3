// pseudopotential-strength.ts: how strong must the spin-orbit coupling be for the valence top to split as it should?
import { usageFault } from "../base/errors.js";
import { createEigensolver } from "../kernel/eigen.js";
import { scaled, sumOf } from "./matrix.js";
import type { ComplexMatrix } from "./model.js";

/** The levels of a Hermitian matrix, ascending; the matrix is left alone. */
export function levelsOf(n: number): (h: ComplexMatrix) => Float64Array {
  const solve = createEigensolver(n);
  const vectors = new Float64Array(2 * n * n);
  return (h) => {
    const values = new Float64Array(n);
    solve(h.slice(), values, vectors);
    return values;
  };
}

/**
 * The spin-orbit strength in eV at which the sixfold valence top of `h` splits by `splittingEv` into four levels above two, by the
 * secant method: the splitting is all but linear in the strength. `spinOrbit`: the coupling of unit strength.
 * Throws a usage Fault where no strength does it.
 */
export function strengthEv(h: ComplexMatrix, spinOrbit: ComplexMatrix, n: number, splittingEv: number): number {
  if (splittingEv === 0) return 0;
  const levels = levelsOf(n);
  const excess = (strength: number): number => {
    const e = levels(sumOf(h, scaled(spinOrbit, strength)));
    return (e[4] + e[5] + e[6] + e[7]) / 4 - (e[2] + e[3]) / 2 - splittingEv;
  };
  let [x0, y0] = [0, -splittingEv];
  let x1 = 1e-3;
  for (let step = 0; step < 20; step++) {
    const y1 = excess(x1);
    if (Math.abs(y1) < 1e-11) return x1;
    [x0, x1, y0] = [x1, x1 - (y1 * (x1 - x0)) / (y1 - y0), y1];
  }
  throw usageFault(
    `No spin-orbit strength splits the valence top by ${splittingEv} eV.`,
    "Give a smaller splitting, or leave it out for the material's.",
  );
}
