// spread.ts: an error bar from the spread over the sub-meshes that the stored mesh contains, extrapolated to the full mesh.
import type { CurveSampler } from "./occupation.js";

/** The contained sub-meshes of one stride and their curves, each already normalised to the whole zone. */
export interface SubMeshCurves {
  readonly stride: number;
  readonly dimension: 2 | 3;
  readonly samplers: readonly CurveSampler[];
}

/**
 * How the error of a plain sum over a metal falls with the mesh step h: counting lattice points inside a smooth Fermi surface errs
 * like h^((d + 1) / 2) (van der Corput's estimate; d = 2, 3). Insulators and warm metals fall faster, so that the bar is then wide.
 */
export const sharpSurfaceOrder = (dimension: 2 | 3): number => (dimension + 1) / 2;

/** Root mean square spread of the sub-mesh curves about their mean, scaled down to the full mesh: out[column]. */
export function spreadSampler(curves: SubMeshCurves, columns: number): CurveSampler {
  const scale = curves.stride ** -sharpSurfaceOrder(curves.dimension);
  const each = curves.samplers.map(() => new Float64Array(columns));
  return (levelEv, temperatureK, out) => {
    for (const [i, sampler] of curves.samplers.entries()) sampler(levelEv, temperatureK, each[i]);
    for (let c = 0; c < columns; c++) {
      let mean = 0;
      for (const values of each) mean += values[c] / each.length;
      let square = 0;
      for (const values of each) square += (values[c] - mean) ** 2 / each.length;
      out[c] = Math.sqrt(square) * scale;
    }
  };
}
