// traces.ts: what are the traces of a moment over sets of coinciding bands? They do not depend on the basis within a set.
import { setEnd } from "../kernel/sets.js";

/** [set][component], sets in ascending energy; bands closer than 1e-4 eV, or a hundred times the noise on disk, are one set. */
export function setTraces(energyEv: Float64Array, parts: readonly Float64Array[], noiseEv: number): number[] {
  const bands = energyEv.length;
  const together = Math.max(1e-4, 100 * noiseEv);
  const out: number[] = [];
  for (let first = 0, end = 0; first < bands; first = end) {
    end = setEnd(energyEv, 0, bands, first, together);
    for (const part of parts) {
      let sum = 0;
      for (let n = first; n < end; n++) sum += part[2 * n * (bands + 1)];
      out.push(sum);
    }
  }
  return out;
}
