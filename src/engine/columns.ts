// columns.ts: gathers the products of one k point into the columns that are kept, band by band; the last column counts electrons.
import type { ResponseColumn, ResponsePlan } from "../bands/responses.js";
import type { MixedProduct } from "../kernel/kernel.js";

/** Number of columns of a job: one per response, one per direction of the Drude weight, and one that counts states. */
export const columnCount = (plan: ResponsePlan): number => plan.columns.length + plan.drude.length + 1;

/** What is known of the bands of one k point. */
export interface BandQuantities {
  readonly bands: number;
  /** [product * bands + band] */
  readonly products: Float64Array;
  /** v_a v_a, [band * 3 + direction]. */
  readonly squares: Float64Array;
}

/** Writes the columns of one band: responses, v_a v_a of the plan's directions, and last 1. */
export function fillColumns(
  plan: Pick<ResponsePlan, "columns" | "drude">,
  { products, squares, bands }: BandQuantities,
  band: number,
  out: Float64Array,
): void {
  const { columns, drude } = plan;
  for (let c = 0; c < columns.length; c++) {
    let sum = 0;
    for (const { product, weight } of columns[c].terms) sum += weight * products[product * bands + band];
    out[c] = sum;
  }
  for (let i = 0; i < drude.length; i++) out[columns.length + i] = squares[3 * band + drude[i]];
  out[columns.length + drude.length] = 1;
}

/** The parts of pairs of bands in every response, out[response * pairs + pair], from those in every product. */
export function fillPairColumns(
  columns: readonly ResponseColumn[],
  products: Float64Array,
  pairs: number,
  out: Float64Array,
): void {
  out.fill(0, 0, columns.length * pairs);
  for (const [c, { terms }] of columns.entries())
    for (const { product, weight } of terms)
      for (let pair = 0; pair < pairs; pair++) out[c * pairs + pair] += weight * products[product * pairs + pair];
}

/**
 * The same columns from fewer products, for kernels that take sums of currents: the products of a column that share their field
 * become one.
 */
export function mixColumns(
  plan: ResponsePlan,
): Pick<ResponsePlan, "columns" | "drude"> & { readonly products: MixedProduct[] } {
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
  return { products, columns, drude: plan.drude };
}
