// gaps.ts: may two bands touch inside a box although no sample of it shows it, and would that matter?
import type { Triple } from "../grid/grid.js";

/** The levels that can be asked, and how much an unseen touching may matter. */
export interface Closeness {
  /** Pairs wholly below or above the window cancel. */
  readonly fromEv: number;
  readonly toEv: number;
  /** Pairs closer than this are one level. */
  readonly degenerateEv: number;
  /** A gap much below this is blurred by temperature or by the resolution of the levels. */
  readonly blurEv: number;
  /** What the flux of one touching, through a layer or through a sheet one cell long, is worth, in parts of what is tolerated. */
  readonly strictness: number;
  readonly dimension: 2 | 3;
}

/** A touching worth less than this part of what is tolerated is left alone. */
const worthwhile = 0.5;

/**
 * True when neighbouring bands n, n + 1 that an asked level can split come closer, within the box, than their slopes at the
 * sample can rule out (gap < sum_j |(slope_n - slope_{n+1}) . edge_j| size / 2), and the curvature hidden there would
 * matter: a touching carries a fixed flux through a layer; in a crystal through each sheet, so that it shrinks with the box; where
 * the bands differ by less than the blur, occupations differ in proportion.
 * `energyEv`: [band] at the sample; `slopes`: [band * 3 + direction]; `edges`: of the whole cell; `size`: of the box in cells.
 */
export function mayTouch(
  energyEv: Float64Array,
  slopes: Float64Array,
  edges: readonly Triple[],
  size: number,
  closeness: Closeness,
): boolean {
  const worth = closeness.strictness * (closeness.dimension === 3 ? size : 1);
  if (worth < worthwhile) return false;
  for (let n = 0; n + 1 < energyEv.length; n++) {
    const gap = energyEv[n + 1] - energyEv[n];
    if (gap < closeness.degenerateEv) continue;
    let reach = 0;
    let spread = 0;
    for (const [x, y, z] of edges) {
      const lower = slopes[3 * n] * x + slopes[3 * n + 1] * y + slopes[3 * n + 2] * z;
      const upper = slopes[3 * n + 3] * x + slopes[3 * n + 4] * y + slopes[3 * n + 5] * z;
      reach += (Math.abs(upper - lower) * size) / 2;
      spread += (Math.max(Math.abs(lower), Math.abs(upper)) * size) / 2;
    }
    if (gap >= reach || worth * Math.min(1, reach / closeness.blurEv) < worthwhile) continue;
    if (energyEv[n] - spread < closeness.toEv && energyEv[n + 1] + spread > closeness.fromEv) return true;
  }
  return false;
}
