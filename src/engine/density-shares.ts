// density-shares.ts: how small a part of the zone makes how much? Volume and contributions of boxes, sorted into bins of their density.

/** Bins an octave, and the octaves about a density of 1. */
const binsPerOctave = 8;
const octaves = 60;
export const shareBins = 2 * octaves * binsPerOctave;
/** Numbers of a bin: volume (cells of the mesh), sum of its positive contributions, sum of its negative ones. */
export const shareNumbers = 3;

/** Empty shares, [response][bin][number]; a higher bin holds boxes of higher magnitude per volume. */
export const newShares = (responses: number): Float64Array => new Float64Array(responses * shareBins * shareNumbers);

/** Adds a box of a volume that contributes parts[response]. */
export function addToShares(shares: Float64Array, volume: number, parts: Float64Array): void {
  for (let r = 0; r < parts.length; r++) {
    const density = Math.abs(parts[r]) / volume;
    const bin = density > 0 ? Math.floor(binsPerOctave * (Math.log2(density) + octaves)) : 0;
    const at = (r * shareBins + Math.min(shareBins - 1, Math.max(0, bin))) * shareNumbers;
    shares[at] += volume;
    shares[at + (parts[r] > 0 ? 1 : 2)] += parts[r];
  }
}

/** A part of the zone: its volume in cells, and what it contributes net. */
export interface ZonePart {
  readonly volume: number;
  readonly net: number;
}

/** Sums of the positive and of the negative contributions of one response. */
export function signedSums(
  shares: Float64Array,
  response: number,
): { readonly positive: number; readonly negative: number } {
  let [positive, negative] = [0, 0];
  for (let bin = 0; bin < shareBins; bin++) {
    const at = (response * shareBins + bin) * shareNumbers;
    positive += shares[at + 1];
    negative += shares[at + 2];
  }
  return { positive, negative };
}

/** The smallest part of the zone that makes `share` of the sum of magnitudes, boxes of highest density first; within a bin in proportion. */
export function smallestPart(shares: Float64Array, response: number, share: number): ZonePart {
  const { positive, negative } = signedSums(shares, response);
  let left = share * (positive - negative);
  let [volume, net] = [0, 0];
  for (let bin = shareBins - 1; bin >= 0 && left > 0; bin--) {
    const at = (response * shareBins + bin) * shareNumbers;
    const magnitude = shares[at + 1] - shares[at + 2];
    const part = magnitude > left ? left / magnitude : 1;
    volume += part * shares[at];
    net += part * (shares[at + 1] + shares[at + 2]);
    left -= magnitude;
  }
  return { volume, net };
}
