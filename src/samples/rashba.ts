// rashba.ts: the two-dimensional electron gas with Rashba coupling, cut to a box, with its spin and its orbital moment.
import type { Triple } from "../grid/grid.js";
import { boxVectors, foldIntoBox, polynomialAt } from "./continuum.js";
import { identity, pauli, productOf, scaled, sumOf, zeroMatrix } from "./matrix.js";
import type { ComplexMatrix, SampleModel } from "./model.js";
import { declareSample, real, type ValuesOf, withDefaults } from "./parameter.js";

const rashbaParameters = {
  alpha: real(1, "eV angstrom", "Rashba coupling"),
  mass: real(1, "1 / (eV angstrom^2)", "m / hbar^2 in H = k^2 / 2m", { min: 0, open: true }),
  box: real(5, "1/angstrom", "K, half the width of the box in k; must hold the occupied states", {
    min: 0,
    open: true,
  }),
};

/** Below this half splitting the touching point's limit is taken: reciprocals must stay finite. */
const smallestSplittingEv = 1e-290;

/**
 * The orbital moment about z at k, units of hbar, in the fixed basis: the interband part of (r x k)_z, which is
 * L_nm = A^x_nm ky - A^y_nm kx with A_nm = i <n|d_k H|m> / (E_m - E_n) and zero diagonal (S. Zhang, Z. Yang, Phys. Rev.
 * Lett. 94, 066602 (2005)). For two bands +-d about their mean, X - (its band-diagonal part) = [H, [H, X]] / (2d)^2 and
 * [H, A] = -i (d_k H, interband), hence A = -i [H, d_k H] / (4 d^2): no eigenvectors, no phases. It equals -(s_z)
 * between bands; at k = 0, where the bands touch, that is also its limit.
 */
function orbitalMoment(h: ComplexMatrix, dhx: ComplexMatrix, dhy: ComplexMatrix, k: Triple): ComplexMatrix {
  const halfSplitting = Math.hypot((h[0] - h[6]) / 2, h[2], h[3]);
  if (halfSplitting < smallestSplittingEv) return scaled(pauli[2], -0.5);
  const direction = scaled(h, 1 / halfSplitting);
  const turning = sumOf(scaled(dhx, k[1] / halfSplitting), scaled(dhy, -k[0] / halfSplitting));
  const commutator = sumOf(productOf(direction, turning), scaled(productOf(turning, direction), -1));
  return scaled(commutator, [0, -0.25]);
}

/**
 * `H = k^2 / 2m + alpha (ky sx - kx sy)`, model units read as 1 eV and 1 angstrom (published with hbar = m = alpha = 1).
 * Moments: spin = sigma / 2; orbital about z as above (x and y vanish), different at every k. Level counted from 0, where the
 * two bands touch; there is no natural filling of a continuum.
 */
export function rashbaModel(given: Partial<ValuesOf<typeof rashbaParameters>> = {}): SampleModel {
  const { alpha, mass, box } = withDefaults(rashbaParameters, given);
  const zero = zeroMatrix(2);
  const curvature = scaled(identity(2), 1 / mass);
  const polynomial = {
    constant: zero,
    linear: [scaled(pauli[1], -alpha), scaled(pauli[0], alpha), zero] as const,
    second: [curvature, curvature, zero, zero, zero, zero],
  };
  return {
    name: "rashba",
    title: `Rashba electron gas, alpha = ${alpha} eV angstrom, box of half width ${box} / angstrom`,
    source:
      "J. Sinova et al., Phys. Rev. Lett. 92, 126603 (2004); orbital moment: S. Zhang, Z. Yang, Phys. Rev. Lett. 94, 066602 (2005)",
    vectorsA: boxVectors(box, 2),
    periodic: 2,
    bands: 2,
    electronsPerBand: 1,
    electrons: undefined,
    fermiEv: 0,
    moments: new Map([
      ["spin", pauli.map((s) => scaled(s, 0.5))],
      ["orbital", [zero, zero, scaled(pauli[2], -0.5)]],
    ]),
    hessian: "array",
    at: (k) => {
      const folded = foldIntoBox(k, box, 2);
      const at = polynomialAt(polynomial, 2, folded);
      const orbital = orbitalMoment(at.h, at.dh[0], at.dh[1], folded);
      return { ...at, moments: new Map([["orbital", [zero, zero, orbital]]]) };
    },
  };
}

export const rashbaSample = declareSample(
  "rashba",
  "Rashba electron gas in two dimensions (continuum, cut to a box): universal spin Hall conductivity and its orbital counterpart",
  rashbaParameters,
  { divisions: [200, 200, 1], offset: [0.5, 0.5, 0] },
  rashbaModel,
);
