// random.ts: where do reproducible random numbers come from? xoshiro128** seeded by SplitMix32; the same seed, the same numbers.

/** A stream of random numbers that depends on the seed alone. */
export interface RandomStream {
  /** Uniform in [0, 2^32), an integer. */
  bits(): number;
  /** Uniform in [0, 1), 53 random bits. */
  uniform(): number;
  /** Standard normal deviate: zero mean, unit variance. */
  normal(): number;
  /** Uniform integer in [0, below); `below` is an integer from 1 to 2^32. Unbiased. */
  integer(below: number): number;
}

const rotateLeft = (word: number, by: number): number => (word << by) | (word >>> (32 - by));

/** SplitMix32: spreads one 32-bit seed over the state words (finaliser of MurmurHash3 on a Weyl sequence). */
function splitMix32(seed: number): () => number {
  let weyl = seed >>> 0;
  return () => {
    weyl = (weyl + 0x9e3779b9) >>> 0;
    let word = weyl;
    word = Math.imul(word ^ (word >>> 16), 0x85ebca6b);
    word = Math.imul(word ^ (word >>> 13), 0xc2b2ae35);
    return (word ^ (word >>> 16)) >>> 0;
  };
}

/**
 * The raw generator xoshiro128** for a state of four 32-bit words, not all zero; each call returns the next integer in
 * [0, 2^32). D. Blackman and S. Vigna, ACM Trans. Math. Softw. 47, 36 (2021); period 2^128 - 1. 32-bit words because
 * they are exact in JavaScript numbers; not for secrets.
 */
export function xoshiro128(state: readonly [number, number, number, number]): () => number {
  let [s0, s1, s2, s3] = state;
  return () => {
    const result = Math.imul(rotateLeft(Math.imul(s1, 5), 7), 9) >>> 0;
    const shifted = s1 << 9;
    s2 ^= s0;
    s3 ^= s1;
    s1 ^= s2;
    s0 ^= s3;
    s2 ^= shifted;
    s3 = rotateLeft(s3, 11);
    return result;
  };
}

/** A random stream for an integer seed (taken modulo 2^32). Nearby seeds give unrelated streams. */
export function randomStream(seed: number): RandomStream {
  const spread = splitMix32(seed);
  const bits = xoshiro128([spread(), spread(), spread(), spread()]);
  const uniform = (): number => ((bits() >>> 5) * 0x4000000 + (bits() >>> 6)) / 0x20000000000000;
  return { bits, uniform, normal: () => normalDeviate(uniform), integer: (below) => integerBelow(bits, below) };
}

/** Box and Muller, Ann. Math. Stat. 29, 610 (1958); the second of each pair is dropped, so that no state is hidden. */
function normalDeviate(uniform: () => number): number {
  const radius = Math.sqrt(-2 * Math.log(1 - uniform()));
  return radius * Math.cos(2 * Math.PI * uniform());
}

/** Rejects the last, incomplete run of 2^32 / below, which would favour small values. */
function integerBelow(bits: () => number, below: number): number {
  if (!Number.isInteger(below) || below < 1 || below > 2 ** 32) throw new RangeError(`no integer below ${below}`);
  const limit = 2 ** 32 - (2 ** 32 % below);
  for (;;) {
    const word = bits();
    if (word < limit) return word % below;
  }
}
