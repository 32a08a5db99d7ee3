// columns.ts: gathers the products of one k point into the columns that are kept, band by band; the last column counts electrons.
import type { ResponsePlan } from "../bands/responses.js";

/** Number of columns of a job: one per response, and one that counts states. */
export const columnCount = (plan: ResponsePlan): number => plan.columns.length + 1;

/** Writes the columns of one band: `products` is [product][band]; the last column is 1. */
export function fillColumns(plan: ResponsePlan, products: Float64Array, bands: number, band: number, out: Float64Array): void {
  const { columns } = plan;
  for (let c = 0; c < columns.length; c++) {
    let sum = 0;
    for (const { product, weight } of columns[c].terms) sum += weight * products[product * bands + band];
    out[c] = sum;
  }
  out[columns.length] = 1;
}
