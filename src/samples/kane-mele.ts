// kane-mele.ts: the quantum spin Hall model of Kane and Mele.
import { honeycombVectorsA, neighbourVectorsA, reversed, secondVectorsA } from "./honeycomb.js";
import { fourierHamiltonian, type Hop } from "./hops.js";
import { identity, kroneckerOf, matrixOf, pauli, scaled, sumOf } from "./matrix.js";
import type { SampleModel } from "./model.js";
import { declareSample, real, type ValuesOf, withDefaults } from "./parameter.js";

const kaneMeleParameters = {
  t: real(1, "eV", "hopping to neighbours"),
  l: real(0.06, "eV", "intrinsic spin-orbit hopping to second neighbours"),
  r: real(0.05, "eV", "Rashba spin-orbit hopping to neighbours"),
  v: real(0.1, "eV", "staggered potential, + on A and - on B"),
};

/**
 * `H = t sum_j e^{-ik.dj} |A><B| + h.c. + i r sum_j e^{-ik.dj} |A><B| (sx djy - sy djx) + h.c. - 2 l sum sin(k.b) tau_z sz
 * + v tau_z` in the basis (A, B) x (up, down); spin = sigma / 2; model units read as 1 eV and 1 angstrom (neighbour
 * distance). The level is counted from 0.
 */
export function kaneMeleModel(given: Partial<ValuesOf<typeof kaneMeleParameters>> = {}): SampleModel {
  const { t, l, r, v } = withDefaults(kaneMeleParameters, given);
  const fromBToA = matrixOf([
    [0, 1],
    [0, 0],
  ]);
  const one = identity(2);
  const hops: Hop[] = [
    ...neighbourVectorsA.map((d) => ({
      vectorA: reversed(d),
      amplitude: kroneckerOf(
        fromBToA,
        sumOf(scaled(one, t), scaled(pauli[0], [0, r * d[1]]), scaled(pauli[1], [0, -r * d[0]])),
      ),
    })),
    ...secondVectorsA.map((b) => ({
      vectorA: b,
      amplitude: scaled(kroneckerOf(pauli[2], pauli[2]), [0, l]),
    })),
  ];
  return {
    name: "kane-mele",
    title: `Kane-Mele model, t = ${t}, l = ${l}, r = ${r}, v = ${v} (eV)`,
    source: "C. L. Kane, E. J. Mele, Phys. Rev. Lett. 95, 146802 and 226801 (2005)",
    vectorsA: honeycombVectorsA,
    periodic: 2,
    bands: 4,
    electronsPerBand: 1,
    // Only without the Rashba term do the levels mirror about 0, so that two electrons put the level there.
    electrons: r === 0 ? 2 : undefined,
    fermiEv: 0,
    moments: new Map([["spin", pauli.map((s) => kroneckerOf(one, scaled(s, 0.5)))]]),
    hessian: "array",
    at: fourierHamiltonian(scaled(kroneckerOf(pauli[2], one), v), 4, hops),
  };
}

export const kaneMeleSample = declareSample(
  "kane-mele",
  "Kane and Mele's honeycomb layer: quantum spin Hall effect",
  kaneMeleParameters,
  { divisions: [150, 150, 1], offset: [0.5, 0.5, 0] },
  kaneMeleModel,
);
