// sections.ts: a spectrum as named arrays, so that partial results of blocks can be sent, added in order and stored.

/** Named arrays of equal shape in every block of one job. */
export type Sections = Record<string, Float64Array>;

/** Adds `part` into `total` array by array; the order of calls is the order of summation. */
export function addSections(total: Sections, part: Sections): void {
  for (const [name, values] of Object.entries(part)) {
    const sum = total[name];
    if (sum === undefined) total[name] = values.slice();
    else for (let i = 0; i < values.length; i++) sum[i] += values[i];
  }
}
