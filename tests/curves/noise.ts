// noise.ts: normal deviates from a seed, for tests of what is said of scatter.
import { createRandom } from "../kernel/hermitian.js";

/** Normal deviates of unit variance (Box and Muller), the same for the same seed. */
export function createSource(seed: number): () => number {
  const uniform = createRandom(seed);
  return () => Math.sqrt(-2 * Math.log((1.000001 + uniform()) / 2.000002)) * Math.cos(Math.PI * uniform());
}
