// sp-square.ts: a square layer of s, px and py orbitals: an orbital Hall effect without spin-orbit coupling.
import type { Triple } from "../grid/grid.js";
import { fourierHamiltonian, type Hop } from "./hops.js";
import { identity, kroneckerOf, matrixOf, pauli, scaled, zeroMatrix } from "./matrix.js";
import type { ComplexMatrix, SampleModel } from "./model.js";
import { choice, declareSample, real, type ValuesOf, withDefaults } from "./parameter.js";

const spSquareParameters = {
  Es: real(3.2, "eV", "level of s"),
  Ep: real(-0.5, "eV", "level of p"),
  ts: real(0.5, "eV", "s-s hopping"),
  tps: real(0.5, "eV", "p-p hopping along the orbital"),
  tpp: real(0.2, "eV", "p-p hopping across the orbital"),
  tsp: real(0.5, "eV", "s-p hopping"),
  spin: choice(
    "one",
    ["one", "pair", "explicit"],
    "one: a single spin species, as published; pair: spin-degenerate bands written once (all responses twice as large); " +
      "explicit: both spins as bands of their own, with a spin moment",
  ),
};

/** Hops along +x (or, with the roles of px and py exchanged, +y) in the basis s, px, py. */
function hopAlong(axis: 0 | 1, p: ValuesOf<typeof spSquareParameters>): ComplexMatrix {
  const along = axis + 1;
  const across = 2 - axis;
  const out = zeroMatrix(3);
  out[0] = -p.ts;
  out[2 * (along * 3 + along)] = p.tps;
  out[2 * (across * 3 + across)] = -p.tpp;
  // 2i tsp sin k = tsp (e^{ik} - e^{-ik}): +tsp from p to s, and -tsp from s to p so that the adjoint brings -tsp e^{-ik}.
  out[2 * along] = p.tsp;
  out[2 * (along * 3)] = -p.tsp;
  return out;
}

/**
 * `H_ss = Es - 2 ts (cx + cy)`, `H_xx = Ep + 2 tps cx - 2 tpp cy`, `H_yy = Ep + 2 tps cy - 2 tpp cx`, `H_s,x = 2i tsp sin kx`,
 * `H_s,y = 2i tsp sin ky`, `H_xy = 0`, a = 1 angstrom, basis s, px, py, <x|Lz|y> = -i. The published conductivities are
 * per spin; `spin` = one (the default) has them: three bands of one electron each. Level counted from 0.
 */
export function spSquareModel(given: Partial<ValuesOf<typeof spSquareParameters>> = {}): SampleModel {
  const p = withDefaults(spSquareParameters, given);
  const explicit = p.spin === "explicit";
  const spinful = (m: ComplexMatrix): ComplexMatrix => (explicit ? kroneckerOf(m, identity(2)) : m);
  const zero = zeroMatrix(3);
  const onsite = matrixOf([
    [p.Es, 0, 0],
    [0, p.Ep, 0],
    [0, 0, p.Ep],
  ]);
  const angular = matrixOf([
    [0, 0, 0],
    [0, 0, [0, -1]],
    [0, [0, 1], 0],
  ]);
  const step: readonly Triple[] = [
    [1, 0, 0],
    [0, 1, 0],
  ];
  const hops: Hop[] = step.map((vectorA, axis) => ({
    vectorA,
    amplitude: spinful(hopAlong(axis === 0 ? 0 : 1, p)),
  }));
  const moments = new Map<string, readonly ComplexMatrix[]>([["orbital", [zero, zero, angular].map(spinful)]]);
  if (explicit) {
    moments.set(
      "spin",
      pauli.map((s) => kroneckerOf(identity(3), scaled(s, 0.5))),
    );
  }
  const bands = explicit ? 6 : 3;
  return {
    name: "sp-square",
    title: `Square layer of s, px, py orbitals (spin: ${p.spin})`,
    source: "after D. Go, D. Jo, C. Kim, H.-W. Lee, Phys. Rev. Lett. 121, 086602 (2018)",
    vectorsA: [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    periodic: 2,
    bands,
    electronsPerBand: p.spin === "pair" ? 2 : 1,
    electrons: undefined,
    fermiEv: 0,
    moments,
    hessian: "array",
    at: fourierHamiltonian(spinful(onsite), bands, hops),
  };
}

export const spSquareSample = declareSample(
  "sp-square",
  "square layer of s, px, py orbitals without spin-orbit coupling: orbital Hall effect",
  spSquareParameters,
  { divisions: [160, 160, 1], offset: [0.5, 0.5, 0] },
  spSquareModel,
);
