// eigenbasis.ts: energies and matrices of a sample model at one k, all in the eigenbasis of H(k).
import type { HessianKind, Triple } from "../grid/grid.js";
import type { PointData } from "../grid/target.js";
import { createEigensolver } from "../kernel/eigen.js";
import type { ComplexMatrix, SampleModel } from "./model.js";

/**
 * A function k -> energies and matrices in the eigenbasis of H(k): vectors as rows C, every matrix becomes C* M C^T. The
 * memory it returns belongs to it and is valid until its next call.
 */
export function createSampler(model: SampleModel, hessian: HessianKind): (k: Triple) => PointData {
  const n = model.bands;
  const solve = createEigensolver(n);
  const energyEv = new Float64Array(n);
  const vectors = new Float64Array(2 * n * n);
  const half = new Float64Array(2 * n * n);
  const matrices = (count: number): ComplexMatrix[] => Array.from({ length: count }, () => new Float64Array(2 * n * n));
  const velocity = matrices(3);
  const moments = new Map([...model.moments].map(([name, parts]) => [name, matrices(parts.length)]));
  const second = hessian === "array" ? matrices(6) : undefined;
  const rotate = (from: readonly ComplexMatrix[], to: readonly ComplexMatrix[]): void => {
    to.forEach((out, i) => {
      rotated(n, vectors, from[i], half, out);
    });
  };
  return (k) => {
    const at = model.at(k);
    solve(at.h, energyEv, vectors);
    rotate(at.dh, velocity);
    for (const [name, parts] of model.moments) rotate(at.moments?.get(name) ?? parts, moments.get(name) ?? []);
    if (second === undefined) return { energyEv, velocity, moments };
    rotate(at.d2h ?? [], second);
    return { energyEv, velocity, moments, hessian: second };
  };
}

/**
 * out <- C* M C^T for the rows of C = `vectors`, M Hermitian; `half` is room for M C^T, row by row of C. Upper
 * triangle only, mirrored: exactly Hermitian, diagonal exactly real.
 */
function rotated(n: number, vectors: Float64Array, m: ComplexMatrix, half: Float64Array, out: ComplexMatrix): void {
  for (let ket = 0; ket < n; ket++) {
    for (let i = 0; i < n; i++) {
      let re = 0;
      let im = 0;
      for (let j = 0; j < n; j++) {
        const a = 2 * (i * n + j);
        const c = 2 * (ket * n + j);
        re += m[a] * vectors[c] - m[a + 1] * vectors[c + 1];
        im += m[a] * vectors[c + 1] + m[a + 1] * vectors[c];
      }
      half[2 * (ket * n + i)] = re;
      half[2 * (ket * n + i) + 1] = im;
    }
  }
  for (let bra = 0; bra < n; bra++) {
    for (let ket = bra; ket < n; ket++) {
      let re = 0;
      let im = 0;
      for (let i = 0; i < n; i++) {
        const c = 2 * (bra * n + i);
        const t = 2 * (ket * n + i);
        re += vectors[c] * half[t] + vectors[c + 1] * half[t + 1];
        im += vectors[c] * half[t + 1] - vectors[c + 1] * half[t];
      }
      if (bra === ket) im = 0;
      const up = 2 * (bra * n + ket);
      const down = 2 * (ket * n + bra);
      out[up] = re;
      out[up + 1] = im;
      out[down] = re;
      out[down + 1] = bra === ket ? 0 : -im;
    }
  }
}
