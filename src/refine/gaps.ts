// gaps.ts: may two bands touch inside a box although no sample of it shows it?
import type { Triple } from "../grid/grid.js";

/** The levels that can be asked: pairs wholly below or above them cancel. */
export interface LevelWindow {
  readonly fromEv: number;
  readonly toEv: number;
}

/**
 * True when neighbouring bands n, n + 1 that an asked level can split come closer, within the box, than their slopes at the
 * sample can rule out: gap < sum_j |(slope_n - slope_{n+1}) . edge_j| * size. Pairs closer than `degenerateEv` are one level.
 * `energyEv`: [band] at the sample; `slopes`: [band * 3 + direction]; `edges`: of the whole cell; `size`: of the box in cells.
 */
export function mayTouch(
  energyEv: Float64Array,
  slopes: Float64Array,
  edges: readonly Triple[],
  size: number,
  window: LevelWindow,
  degenerateEv: number,
): boolean {
  for (let n = 0; n + 1 < energyEv.length; n++) {
    const gap = energyEv[n + 1] - energyEv[n];
    if (gap < degenerateEv) continue;
    let reach = 0;
    let spread = 0;
    for (const [x, y, z] of edges) {
      const lower = slopes[3 * n] * x + slopes[3 * n + 1] * y + slopes[3 * n + 2] * z;
      const upper = slopes[3 * n + 3] * x + slopes[3 * n + 4] * y + slopes[3 * n + 5] * z;
      reach += (Math.abs(upper - lower) * size) / 2;
      spread += (Math.max(Math.abs(lower), Math.abs(upper)) * size) / 2;
    }
    if (gap < reach && energyEv[n] - spread < window.toEv && energyEv[n + 1] + spread > window.fromEv) return true;
  }
  return false;
}
