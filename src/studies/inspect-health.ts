// inspect-health.ts: the health stage of an inspection: the full checks of one grid, as the result holds them.
import { isFault } from "../base/errors.js";
import type { Grid } from "../grid/open.js";
import { checkHealth, fullEffort, type Health } from "../health/health.js";
import type { InspectedHealth } from "./inspect-result.js";
import { countBelow } from "./reference.js";

/** Checks a grid whose form is sound. Null where a check could not be carried out for the data's sake. */
export function inspectHealth(grid: Grid): InspectedHealth | null {
  try {
    return healthOf(checkHealth(grid, fullEffort, (levelEv) => countBelow(grid.facts, levelEv)));
  } catch (error) {
    if (!isFault(error)) throw error;
    return null;
  }
}

function healthOf(health: Health): InspectedHealth {
  const { kept, unevenEv, pairSplittingEv } = health.reversal;
  return {
    findings: health.findings.map((finding) => ({ ...finding })),
    points: health.points,
    equations: health.equations,
    slopes_left: health.slopesLeft,
    step_eV: health.stepEv,
    sums_closed: health.trustedEv === null ? null : health.trustedEv === Infinity,
    sums_trusted_up_to_eV: health.trustedEv !== null && Number.isFinite(health.trustedEv) ? health.trustedEv : null,
    completeness: health.bands.map(({ band, energyEv, missing, meshError }) => ({
      band,
      energy_eV: energyEv,
      missing,
      mesh_error: meshError,
    })),
    symmetry: kept,
    uneven_eV: unevenEv,
    pair_splitting_eV: pairSplittingEv,
    degenerate_eV: health.degenerateEv,
  };
}
