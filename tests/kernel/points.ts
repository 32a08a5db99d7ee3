// points.ts: test material: random k points, and the literal definition of the curvature, written with naive sums.

import type { Denominator, MatrixRef, PointRef, Product } from "../../src/kernel/kernel.js";
import { adjoint, combine, multiply, randomHermitian } from "./hermitian.js";

/** A reference to a matrix inside a longer array, at an odd place, as a block of a file would hold it. */
export function referTo(matrix: Float64Array, padding = 6): MatrixRef {
  const data = new Float64Array(matrix.length + 2 * padding).fill(Number.NaN);
  data.set(matrix, padding);
  return { data, offset: padding };
}

/** The matrix that a reference means. */
export const matrixOf = (n: number, { data, offset }: MatrixRef): Float64Array =>
  data.slice(offset, offset + 2 * n * n);

/** A point with given energies, three random velocities and `moments` random moments; no second derivative. */
export function randomPoint(energies: readonly number[], moments: number, random: () => number): PointRef {
  const n = energies.length;
  const matrix = () => referTo(randomHermitian(n, random));
  return {
    bands: n,
    energyEv: Float64Array.from([9, 9, 9, ...energies]),
    energyOffset: 3,
    velocity: [matrix(), matrix(), matrix()],
    moments: Array.from({ length: moments }, matrix),
    hessian: undefined,
  };
}

/** The same point with every matrix A replaced by change(A). */
export function mapMatrices(point: PointRef, change: (a: Float64Array) => Float64Array): PointRef {
  const apply = (ref: MatrixRef) => referTo(change(matrixOf(point.bands, ref)), 2);
  return {
    ...point,
    velocity: point.velocity.map((ref) => (ref === undefined ? undefined : apply(ref))),
    moments: point.moments.map(apply),
    hessian: point.hessian?.map(apply),
  };
}

/** All products of `moments` moments and, where asked, of the charge current. */
export function allProducts(moments: number, charge: "with charge" | "without charge"): Product[] {
  const axes = [0, 1, 2] as const;
  const out: Product[] = [];
  for (let moment = charge === "with charge" ? -1 : 0; moment < moments; moment++) {
    for (const flow of axes) for (const field of axes) out.push({ moment, flow, field });
  }
  return out;
}

/** Omega_n = -2 Im sum_m <n|j|m><m|v_field|n> / ((E_n - E_m)^2 + eta^2), j = (O v + v O) / 2, literally. */
export function literalCurvature(point: PointRef, product: Product, denominator: Denominator): Float64Array {
  const n = point.bands;
  const flow = matrixOf(n, point.velocity[product.flow] as MatrixRef);
  const field = matrixOf(n, point.velocity[product.field] as MatrixRef);
  const ov = product.moment < 0 ? flow : multiply(n, matrixOf(n, point.moments[product.moment]), flow);
  const current = combine([0.5, 0.5], [ov, adjoint(n, ov)]);
  const energy = (band: number) => point.energyEv[point.energyOffset + band];
  return Float64Array.from({ length: n }, (_, band) => {
    let sum = 0;
    for (let other = 0; other < n; other++) {
      const gap = energy(other) - energy(band);
      if (other === band || Math.abs(gap) < denominator.degenerateEv) continue;
      const x = 2 * (band * n + other);
      const y = 2 * (other * n + band);
      const imaginary = current[x] * field[y + 1] + current[x + 1] * field[y];
      sum += (-2 * imaginary) / (gap * gap + denominator.broadenEv ** 2);
    }
    return sum;
  });
}
