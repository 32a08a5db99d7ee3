// sums.ts: how are many numbers added without losing the small ones? Neumaier's compensated sum, for one number and for a row.

/**
 * A running sum that carries what rounding drops. `total()` is exact to about one rounding of the result plus
 * n eps^2 sum|x|: A. Neumaier, Z. Angew. Math. Mech. 54, 39 (1974), "Kahan-Babuska" with the larger of the two operands
 * giving up its low part.
 */
export interface CompensatedSum {
  add(value: number): void;
  total(): number;
}

/** A compensated sum that starts at zero. Infinities and NaN pass through as in a plain sum. */
export function compensatedSum(): CompensatedSum {
  let sum = 0;
  let lost = 0;
  return {
    add(value) {
      const next = sum + value;
      lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
      sum = next;
    },
    total() {
      const corrected = sum + lost;
      return Number.isNaN(corrected) ? sum : corrected; // inf - inf in the low part must not hide an infinite sum
    },
  };
}

/** The compensated sum of a list of numbers; 0 for an empty one. */
export function sumOf(values: ArrayLike<number>): number {
  const sum = compensatedSum();
  for (let i = 0; i < values.length; i++) sum.add(values[i]!);
  return sum.total();
}

/** Element-wise compensated sums of equally long rows (spectra of blocks). */
export interface CompensatedRow {
  /** Adds a row of the agreed length; the row is not kept. */
  add(row: Float64Array): void;
  /** Writes the sums into `out`, or into a new array, and returns it. */
  total(out?: Float64Array): Float64Array;
}

/** A row of `length` compensated sums, all zero at the start. Throws RangeError when a row of another length is added. */
export function compensatedRow(length: number): CompensatedRow {
  const sum = new Float64Array(length);
  const lost = new Float64Array(length);
  return {
    add(row) {
      if (row.length !== length) throw new RangeError(`a row of ${row.length} numbers added to a sum of ${length}`);
      for (let i = 0; i < length; i++) {
        const old = sum[i]!;
        const value = row[i]!;
        const next = old + value;
        lost[i]! += Math.abs(old) >= Math.abs(value) ? old - next + value : value - next + old;
        sum[i] = next;
      }
    },
    total(out = new Float64Array(length)) {
      for (let i = 0; i < length; i++) {
        const corrected = sum[i]! + lost[i]!;
        out[i] = Number.isNaN(corrected) ? sum[i]! : corrected;
      }
      return out;
    },
  };
}
