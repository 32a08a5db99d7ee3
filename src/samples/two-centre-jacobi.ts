// two-centre-jacobi.ts: eigenvalues and eigenvectors of a real symmetric 9 x 9 matrix, by Jacobi rotations.

const n = 9;
const mostSweeps = 40;

/**
 * Diagonalises `matrix` (row major, destroyed: its diagonal becomes the eigenvalues, in no order). Row i of `vectors`
 * is the eigenvector of the i-th diagonal entry. Cyclic Jacobi: to round-off also for equal eigenvalues, and the
 * vectors of a real matrix are real. Returns false where it did not converge (never seen for finite input).
 */
export function diagonaliseReal9(matrix: Float64Array, vectors: Float64Array): boolean {
  vectors.fill(0);
  for (let i = 0; i < n; i++) vectors[(n + 1) * i] = 1;
  for (let sweep = 0; sweep < mostSweeps; sweep++) {
    let off = 0;
    let all = 0;
    for (let i = 0; i < n; i++)
      for (let j = 0; j <= i; j++) {
        const square = matrix[n * i + j] ** 2;
        all += square;
        if (j < i) off += square;
      }
    if (!(off > 1e-32 * all)) return Number.isFinite(all);
    for (let p = 0; p < n - 1; p++) for (let q = p + 1; q < n; q++) rotate(matrix, vectors, p, q);
  }
  return false;
}

function rotate(m: Float64Array, vectors: Float64Array, p: number, q: number): void {
  const coupling = m[n * p + q];
  if (coupling === 0) return;
  const theta = (m[(n + 1) * q] - m[(n + 1) * p]) / (2 * coupling);
  const t = (theta < 0 ? -1 : 1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
  const c = 1 / Math.sqrt(t * t + 1);
  const s = t * c;
  for (let i = 0; i < n; i++) {
    const a = m[n * i + p];
    const b = m[n * i + q];
    m[n * i + p] = c * a - s * b;
    m[n * i + q] = s * a + c * b;
  }
  for (let i = 0; i < n; i++) {
    const a = m[n * p + i];
    const b = m[n * q + i];
    m[n * p + i] = c * a - s * b;
    m[n * q + i] = s * a + c * b;
    const u = vectors[n * p + i];
    const v = vectors[n * q + i];
    vectors[n * p + i] = c * u - s * v;
    vectors[n * q + i] = s * u + c * v;
  }
  // Zero up to round-off; exactly zero lets the sweeps end.
  m[n * p + q] = 0;
  m[n * q + p] = 0;
}
