// dirac.ts: the massive Dirac point in two dimensions, cut to a box.
import type { Triple } from "../grid/grid.js";
import { boxVectors, foldIntoBox, polynomialAt } from "./continuum.js";
import { pauli, scaled, zeroMatrix } from "./matrix.js";
import type { SampleModel } from "./model.js";
import { declareSample, real, type ValuesOf, withDefaults } from "./parameter.js";

const diracParameters = {
  mass: real(0.3, "eV", "D, half the gap"),
  box: real(3, "1/angstrom", "K, half the width of the box in k; its tail is known in closed form", {
    min: 0,
    open: true,
  }),
};

/**
 * `H = kx sx + ky sy + D sz`, model units read as 1 eV and 1 angstrom. `charge:xy` in the gap is -(1/2) e^2/h on the
 * whole plane; on the box it is `diracBoxCharge`.
 */
export function diracModel(given: Partial<ValuesOf<typeof diracParameters>> = {}): SampleModel {
  const { mass, box } = withDefaults(diracParameters, given);
  const zero = zeroMatrix(2);
  const polynomial = {
    constant: scaled(pauli[2], mass),
    linear: [pauli[0], pauli[1], zero] as const,
    second: Array.from({ length: 6 }, () => zero),
  };
  return {
    name: "dirac",
    title: `Massive Dirac point, D = ${mass} eV, box of half width ${box} / angstrom`,
    source: "D. Xiao, M.-C. Chang, Q. Niu, Rev. Mod. Phys. 82, 1959 (2010); formula from memory",
    vectorsA: boxVectors(box, 2),
    periodic: 2,
    bands: 2,
    electronsPerBand: 1,
    electrons: 1,
    fermiEv: 0,
    moments: new Map(),
    hessian: "array",
    at: (k: Triple) => polynomialAt(polynomial, 2, foldIntoBox(k, box, 2)),
  };
}

/**
 * `charge:xy` of the full lower band over the square box, in e^2/h: -(1/4 pi) times the solid angle under which the box is
 * seen from a height D above its centre. It tends to -(1/2) sign(D) for a large box.
 */
export function diracBoxCharge(mass: number, box: number): number {
  return -Math.atan((box * box) / (mass * Math.sqrt(2 * box * box + mass * mass))) / Math.PI;
}

export const diracSample = declareSample(
  "dirac",
  "massive Dirac point in two dimensions (continuum, cut to a box): anomalous Hall effect of half a quantum",
  diracParameters,
  { divisions: [240, 240, 1], offset: [0.5, 0.5, 0] },
  diracModel,
);
