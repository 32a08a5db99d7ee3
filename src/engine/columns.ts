// columns.ts: gathers the products of one k point into the columns that are kept, band by band; the last column counts electrons.
import type { ResponseColumn, ResponsePlan } from "../bands/responses.js";
import type { MixedProduct } from "../kernel/kernel.js";

/** Number of columns of a job: one per response, and one that counts states. */
export const columnCount = (plan: ResponsePlan): number => plan.columns.length + 1;

/** Writes the columns of one band: `products` is [product][band]; the last column is 1. */
export function fillColumns(
  plan: Pick<ResponsePlan, "columns">,
  products: Float64Array,
  bands: number,
  band: number,
  out: Float64Array,
): void {
  const { columns } = plan;
  for (let c = 0; c < columns.length; c++) {
    let sum = 0;
    for (const { product, weight } of columns[c].terms) sum += weight * products[product * bands + band];
    out[c] = sum;
  }
  out[columns.length] = 1;
}

/**
 * The same columns from fewer products, for kernels that take sums of currents: the products of a column that share their field
 * become one.
 */
export function mixColumns(plan: ResponsePlan): { products: MixedProduct[]; columns: ResponseColumn[] } {
  const products: MixedProduct[] = [];
  const columns = plan.columns.map((column): ResponseColumn => {
    const fields = [...new Set(column.terms.map(({ product }) => plan.products[product].field))];
    const terms = fields.map((field) => {
      const parts = column.terms.filter(({ product }) => plan.products[product].field === field);
      const current = parts.map(({ product, weight }) => {
        const { moment, flow } = plan.products[product];
        return { moment, flow, weight: parts.length === 1 ? 1 : weight };
      });
      return { product: products.push({ current, field }) - 1, weight: parts.length === 1 ? parts[0].weight : 1 };
    });
    return { ...column, terms };
  });
  return { products, columns };
}
