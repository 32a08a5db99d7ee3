// rotation.test.ts: does the rotation into an eigenbasis agree with the triple sum that defines it, whatever the matrix holds?
import { describe, expect, it } from "vitest";
import { randomStream } from "../../src/base/random.js";
import { createRotation } from "../../src/samples/rotation.js";

const stream = randomStream(7);
const random = (): number => 2 * stream.uniform() - 1;

/** A random Hermitian matrix; `keep` says which elements of the upper triangle are there, `imaginary` whether they are complex. */
function hermitian(n: number, keep: (i: number, j: number) => boolean, imaginary: boolean): Float64Array {
  const m = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) {
    for (let j = i; j < n; j++) {
      if (!keep(i, j)) continue;
      const [re, im] = [random(), imaginary && i !== j ? random() : 0];
      m.set([re, im], 2 * (i * n + j));
      m.set([re, -im], 2 * (j * n + i));
    }
  }
  return m;
}

/** sum_ij conj(C[bra, i]) M[i, j] C[ket, j], element by element. */
function defined(n: number, c: Float64Array, m: Float64Array, bra: number, ket: number): [number, number] {
  const sum: [number, number] = [0, 0];
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      const [a, b] = [2 * (bra * n + i), 2 * (ket * n + j)];
      const [re, im] = [c[a] * c[b] + c[a + 1] * c[b + 1], c[a] * c[b + 1] - c[a + 1] * c[b]];
      const [x, y] = [m[2 * (i * n + j)], m[2 * (i * n + j) + 1]];
      sum[0] += re * x - im * y;
      sum[1] += re * y + im * x;
    }
  }
  return sum;
}

const kinds: readonly [string, (i: number, j: number) => boolean, boolean][] = [
  ["full and complex", () => true, true],
  ["full and real", () => true, false],
  ["in two blocks", (i, j) => i % 2 === j % 2, true],
  ["diagonal", (i, j) => i === j, false],
  ["zero", () => false, false],
];

describe("a rotation", () => {
  it.each(kinds)(
    "of a matrix that is %s is the triple sum, exactly Hermitian, for odd and even sizes",
    (_, keep, imaginary) => {
      for (const n of [1, 2, 3, 4, 7, 18]) {
        const rotation = createRotation(n);
        // Two rounds: nothing of the first k point may remain.
        for (let round = 0; round < 2; round++) {
          const vectors = Float64Array.from({ length: 2 * n * n }, random);
          const m = hermitian(n, keep, imaginary);
          const out = new Float64Array(2 * n * n).fill(Number.NaN);
          rotation.setVectors(vectors);
          rotation.rotate(m, out);
          for (let bra = 0; bra < n; bra++) {
            for (let ket = 0; ket < n; ket++) {
              const [re, im] = defined(n, vectors, m, bra, ket);
              const [up, down] = [2 * (bra * n + ket), 2 * (ket * n + bra)];
              expect(Math.hypot(out[up] - re, out[up + 1] - im)).toBeLessThan(1e-14 * n * n);
              expect(out[down] - out[up]).toBe(0);
              expect(Math.abs(out[down + 1] + out[up + 1])).toBe(0);
            }
          }
        }
      }
    },
  );
});
