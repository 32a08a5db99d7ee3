// quick-health.ts: what must be told of a grid's health before anything is computed from it? About 30 points, remembered per grid.
import { isFault } from "../base/errors.js";
import type { GridFacts } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import type { HealthFinding } from "../health/finding.js";
import { checkHealth, type Health, quickEffort, unknownHealth } from "../health/health.js";

const remembered = new Map<string, Health>();

/**
 * The quick form of the health checks of a whole grid. Data that cannot be read are left to whoever reads them next, who says
 * where they are wrong: the health is unknown then.
 */
export function quickHealth(directory: string, { sha256 }: Pick<GridFacts, "sha256">): Health {
  const key = `${directory}\n${sha256}`;
  const known = remembered.get(key);
  if (known !== undefined) return known;
  const health = checked(directory);
  remembered.set(key, health);
  return health;
}

function checked(directory: string): Health {
  try {
    return checkHealth(openGrid(directory), quickEffort);
  } catch (error) {
    if (!isFault(error)) throw error;
    return unknownHealth;
  }
}

const sentences = (findings: readonly HealthFinding[]): string[] =>
  findings
    .filter(({ severity }) => severity !== "note")
    .map(({ message, cure }) => `the data look wrong: ${message}. ${cure} (inspect shows the evidence)`);

/** What the quick checks find wrong with a grid, one sentence each; nothing for one that cannot be opened: whoever opens it next says why. */
export function mistakesOf(directory: string): string[] {
  try {
    return sentences(quickHealth(directory, openGrid(directory).facts).findings);
  } catch (error) {
    if (!isFault(error)) throw error;
    return [];
  }
}

/** One sentence for each mistake found, and one where levels lie above what sums over bands can be trusted to; empty for a clean grid. */
export function healthNotes(
  { findings, trustedEv, degenerateEv }: Health,
  upToEv: number,
  degenerate: number,
): string[] {
  const notes = sentences(findings);
  const trusted = findings.some(({ id }) => id === "completeness") ? null : trustedEv;
  if (trusted !== null && Number.isFinite(trusted) && trusted < upToEv)
    notes.push(
      `sums over bands are good to 10% up to ${trusted.toFixed(2)} eV (absolute) only: for levels above, bands are missing`,
    );
  if (degenerate < degenerateEv)
    notes.push(
      `pairs of bands are split by noise on disk: --degenerate ${degenerate} is below the ${degenerateEv} eV that it asks for`,
    );
  return notes;
}
