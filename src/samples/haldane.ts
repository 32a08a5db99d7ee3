// haldane.ts: Haldane's model of a quantum Hall effect without Landau levels.
import { honeycombVectorsA, neighbourVectorsA, reversed, secondVectorsA } from "./honeycomb.js";
import { fourierHamiltonian, type Hop } from "./hops.js";
import { identity, matrixOf, pauli, scaled, sumOf } from "./matrix.js";
import type { SampleModel } from "./model.js";
import { declareSample, real, type ValuesOf, withDefaults } from "./parameter.js";

const haldaneParameters = {
  t1: real(1, "eV", "hopping to neighbours"),
  t2: real(0.1, "eV", "hopping to second neighbours"),
  phi: real(Math.PI / 2, "radian", "phase of the second-neighbour hopping"),
  M: real(0.2, "eV", "staggered potential, + on A and - on B"),
};

/**
 * `H = 2 t2 cos(phi) sum cos(k.b) + t1 sum [cos(k.d) sx + sin(k.d) sy] + [M - 2 t2 sin(phi) sum sin(k.b)] sz` in the basis
 * (A, B), model units read as 1 eV and 1 angstrom (neighbour distance). Phases carry the positions of the sites, so
 * that H(k + G) equals H(k) up to a constant diagonal unitary. The level is counted from 0.
 */
export function haldaneModel(given: Partial<ValuesOf<typeof haldaneParameters>> = {}): SampleModel {
  const { t1, t2, phi, M } = withDefaults(haldaneParameters, given);
  const fromBToA = matrixOf([
    [0, t1],
    [0, 0],
  ]);
  const second = sumOf(scaled(identity(2), t2 * Math.cos(phi)), scaled(pauli[2], [0, t2 * Math.sin(phi)]));
  const hops: Hop[] = [
    ...neighbourVectorsA.map((d) => ({ vectorA: reversed(d), amplitude: fromBToA })),
    ...secondVectorsA.map((b) => ({ vectorA: b, amplitude: second })),
  ];
  // With cos(phi) = 0 and an open gap the levels mirror about 0, so that one electron of two bands puts the level there.
  const mirrored = Math.abs(t2 * Math.cos(phi)) < 1e-12;
  return {
    name: "haldane",
    title: `Haldane model, t1 = ${t1}, t2 = ${t2}, phi = ${Number(phi.toPrecision(7))}, M = ${M} (eV)`,
    source: "F. D. M. Haldane, Phys. Rev. Lett. 61, 2015 (1988)",
    vectorsA: honeycombVectorsA,
    periodic: 2,
    bands: 2,
    electronsPerBand: 1,
    electrons: mirrored ? 1 : undefined,
    fermiEv: 0,
    moments: new Map(),
    hessian: "array",
    at: fourierHamiltonian(scaled(pauli[2], M), 2, hops),
  };
}

export const haldaneSample = declareSample(
  "haldane",
  "Haldane's honeycomb layer: quantised anomalous Hall effect without a magnetic field",
  haldaneParameters,
  { divisions: [120, 120, 1], offset: [0.5, 0.5, 0] },
  haldaneModel,
);
