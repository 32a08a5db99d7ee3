// hermitian.ts: test material: Hermitian and unitary matrices, products of matrices, and NumPy as a second opinion.

import { spawnSync } from "node:child_process";

/** Seeded numbers in (-1, 1): a 32-bit mixing generator (Steele, Lea and Flood, OOPSLA 2014). */
export function createRandom(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x9e3779b9) >>> 0;
    let x = state;
    x = Math.imul(x ^ (x >>> 16), 0x85ebca6b);
    x = Math.imul(x ^ (x >>> 13), 0xc2b2ae35);
    return ((x ^ (x >>> 16)) >>> 0) / 2 ** 31 - 1;
  };
}

/** Random Hermitian n x n matrix, entries of order one, row-major interleaved. */
export function randomHermitian(n: number, random: () => number): Float64Array {
  const a = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      const re = random();
      const im = i === j ? 0 : random();
      a.set([re, im], 2 * (i * n + j));
      a.set([re, -im], 2 * (j * n + i));
    }
  }
  return a;
}

/** Diagonal matrix. */
export function diagonalMatrix(values: readonly number[]): Float64Array {
  const n = values.length;
  const a = new Float64Array(2 * n * n);
  for (const [i, value] of values.entries()) a[2 * (i * n + i)] = value;
  return a;
}

/** Product a b of two n x n complex matrices. */
export function multiply(n: number, a: Float64Array, b: Float64Array): Float64Array {
  const out = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let re = 0;
      let im = 0;
      for (let k = 0; k < n; k++) {
        const x = 2 * (i * n + k);
        const y = 2 * (k * n + j);
        re += a[x] * b[y] - a[x + 1] * b[y + 1];
        im += a[x] * b[y + 1] + a[x + 1] * b[y];
      }
      out[2 * (i * n + j)] = re;
      out[2 * (i * n + j) + 1] = im;
    }
  }
  return out;
}

/** Conjugate transpose. */
export function adjoint(n: number, a: Float64Array): Float64Array {
  const out = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      out[2 * (i * n + j)] = a[2 * (j * n + i)];
      out[2 * (i * n + j) + 1] = -a[2 * (j * n + i) + 1];
    }
  }
  return out;
}

/** u^H a u: the matrix a in the basis of the columns of u. */
export const rotate = (n: number, a: Float64Array, u: Float64Array): Float64Array =>
  multiply(n, adjoint(n, u), multiply(n, a, u));

/** sum_i factors[i] matrices[i]. */
export function combine(factors: readonly number[], matrices: readonly Float64Array[]): Float64Array {
  const out = new Float64Array(matrices[0].length);
  for (const [k, matrix] of matrices.entries()) {
    for (let i = 0; i < out.length; i++) out[i] += factors[k] * matrix[i];
  }
  return out;
}

/** Random unitary matrix: Gram-Schmidt, twice over, of random columns. */
export function randomUnitary(n: number, random: () => number): Float64Array {
  const u = Float64Array.from({ length: 2 * n * n }, random);
  for (let round = 0; round < 2; round++) {
    for (let j = 0; j < n; j++) {
      for (let k = 0; k < j; k++) removeColumn(n, u, j, k);
      let norm = 0;
      for (let i = 0; i < n; i++) norm += u[2 * (i * n + j)] ** 2 + u[2 * (i * n + j) + 1] ** 2;
      for (let i = 0; i < n; i++) {
        u[2 * (i * n + j)] /= Math.sqrt(norm);
        u[2 * (i * n + j) + 1] /= Math.sqrt(norm);
      }
    }
  }
  return u;
}

/** Takes the share of the normalised column k out of column j. */
function removeColumn(n: number, u: Float64Array, j: number, k: number): void {
  let re = 0;
  let im = 0;
  for (let i = 0; i < n; i++) {
    const x = 2 * (i * n + k);
    const y = 2 * (i * n + j);
    re += u[x] * u[y] + u[x + 1] * u[y + 1];
    im += u[x] * u[y + 1] - u[x + 1] * u[y];
  }
  for (let i = 0; i < n; i++) {
    const x = 2 * (i * n + k);
    const y = 2 * (i * n + j);
    u[y] -= u[x] * re - u[x + 1] * im;
    u[y + 1] -= u[x] * im + u[x + 1] * re;
  }
}

/** Largest absolute difference of two arrays. */
export function distance(a: Float64Array, b: Float64Array): number {
  let largest = 0;
  for (let i = 0; i < a.length; i++) largest = Math.max(largest, Math.abs(a[i] - b[i]));
  return largest;
}

/** Largest absolute entry. */
export const largestOf = (a: Float64Array): number => a.reduce((most, x) => Math.max(most, Math.abs(x)), 0);

/** What a Python script that imports NumPy prints for a JSON input on its standard input; throws where it fails. */
export function askNumpy(script: string, input: unknown): unknown {
  const run = spawnSync("/usr/bin/python3", ["-c", script], {
    input: JSON.stringify(input),
    encoding: "utf8",
    maxBuffer: 1 << 28,
    env: { ...process.env, OPENBLAS_NUM_THREADS: "1" },
  });
  if (run.status !== 0) throw new Error(`NumPy script failed: ${run.stderr}`);
  return JSON.parse(run.stdout);
}

/** Why the comparison with NumPy cannot be made here; undefined where it can. */
export function numpyMissing(): string | undefined {
  const probe = spawnSync("/usr/bin/python3", ["-c", "import numpy"], { encoding: "utf8" });
  if (probe.error !== undefined) return "no Python at /usr/bin/python3";
  return probe.status === 0 ? undefined : "NumPy cannot be imported by /usr/bin/python3";
}
