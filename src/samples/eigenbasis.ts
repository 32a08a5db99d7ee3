// eigenbasis.ts: energies and matrices of a sample model at one k, all in the eigenbasis of H(k).
import type { HessianKind, Triple } from "../grid/grid.js";
import type { PointData } from "../grid/target.js";
import { createEigensolver } from "../kernel/eigen.js";
import type { ComplexMatrix, SampleModel } from "./model.js";
import { createRotation } from "./rotation.js";

/**
 * A function k -> energies and matrices in the eigenbasis of H(k): vectors as rows C, every matrix becomes C* M C^T. Of
 * a basis larger than the model's bands the lowest bands are kept, and a matrix loses its elements to the others. The memory it returns belongs to it and is valid until its next call.
 */
export function createSampler(model: SampleModel, hessian: HessianKind): (k: Triple) => PointData {
  const { bands, basisSize: n = bands } = model;
  const solve = createEigensolver(n);
  const rotation = createRotation(n, bands);
  const levels = new Float64Array(n);
  const energyEv = levels.subarray(0, bands);
  const vectors = new Float64Array(2 * n * n);
  const matrices = (count: number): ComplexMatrix[] =>
    Array.from({ length: count }, () => new Float64Array(2 * bands * bands));
  const velocity = matrices(3);
  const moments = new Map([...model.moments].map(([name, parts]) => [name, matrices(parts.length)]));
  const second = hessian === "array" ? matrices(6) : undefined;
  const rotate = (from: readonly ComplexMatrix[], to: readonly ComplexMatrix[]): void => {
    to.forEach((out, i) => {
      rotation.rotate(from[i], out);
    });
  };
  return (k) => {
    const at = model.at(k);
    solve(at.h, levels, vectors);
    rotation.setVectors(vectors);
    rotate(at.dh, velocity);
    for (const [name, parts] of model.moments) rotate(at.moments?.get(name) ?? parts, moments.get(name) ?? []);
    if (second === undefined) return { energyEv, velocity, moments };
    rotate(at.d2h ?? [], second);
    return { energyEv, velocity, moments, hessian: second };
  };
}
