// reference.ts: finds the level that holds a stated number of electrons, from the energies alone, when a grid states no Fermi level.
import { occupiedWeight } from "../curves/occupation.js";
import { walkPoints } from "../engine/blocks.js";
import { openRegion } from "../engine/regions.js";
import type { GridFacts } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { planAxis } from "../spectrum/axis.js";
import { createPointDeposit, createPointStore } from "../spectrum/points.js";

/** Temperature at which a metal's level is sought: a stored mesh is too coarse for a sharp step. */
export const referenceTemperatureK = 300;

export interface ReferenceLevel {
  readonly levelEv: number;
  /** Where it comes from, in words. */
  readonly origin: string;
}

/** Lowest and highest energy of each band: [band][min, max]. */
function bandRanges(facts: GridFacts): Float64Array {
  const ranges = new Float64Array(2 * facts.bands);
  for (let band = 0; band < facts.bands; band++) {
    ranges[2 * band] = Number.POSITIVE_INFINITY;
    ranges[2 * band + 1] = Number.NEGATIVE_INFINITY;
  }
  visitEnergies(facts, (energies, offset) => {
    for (let band = 0; band < facts.bands; band++) {
      ranges[2 * band] = Math.min(ranges[2 * band], energies[offset + band]);
      ranges[2 * band + 1] = Math.max(ranges[2 * band + 1], energies[offset + band]);
    }
  });
  return ranges;
}

/** Visits the energies of all stored points that count, patches' included; `weight`: of a point, in cells of the mesh. */
function visitEnergies(
  facts: GridFacts,
  visit: (energies: Float64Array, offset: number, weight: number) => void,
): void {
  const { directory, view } = facts;
  const { patches } = openGrid(directory, view);
  for (const patch of [undefined, ...patches.keys()]) {
    const region = openRegion({ directory, view }, { patch }, { velocity: [], moments: [], hessian: false });
    walkPoints(region.reader, { first: 0, count: region.facts.points }, [], (flat, point) => {
      if (region.counts(flat)) visit(point.energyEv, point.energyOffset, region.weight);
    });
    region.reader.close();
  }
}

/** Electrons per cell in states up to a level, on the stored mesh. */
export function countBelow(facts: GridFacts, levelEv: number): number {
  let states = 0;
  visitEnergies(facts, (energies, offset, weight) => {
    for (let band = 0; band < facts.bands; band++) if (energies[offset + band] <= levelEv) states += weight;
  });
  return (states * facts.electronsPerBand) / facts.points;
}

/** The stated Fermi level; else mid-gap where the electrons fill whole bands below a gap; else the level of N(mu, 300 K) = electrons. */
export function referenceLevel(facts: GridFacts): ReferenceLevel {
  if (facts.fermiEv !== undefined) return { levelEv: facts.fermiEv, origin: "the Fermi level stated by the grid" };
  const electrons = facts.electrons as number;
  const ranges = bandRanges(facts);
  const filled = electrons / facts.electronsPerBand;
  const below = Math.round(filled);
  if (Math.abs(filled - below) < 1e-9 && below > 0 && below < facts.bands) {
    const [top, bottom] = [ranges[2 * below - 1], ranges[2 * below]];
    if (bottom > top)
      return { levelEv: (top + bottom) / 2, origin: `the middle of the gap above ${electrons} electrons` };
  }
  const band = Math.min(facts.bands - 1, Math.floor(filled));
  const levelEv = solveLevel(facts, filled, ranges[2 * Math.max(0, band - 1)], ranges[2 * band + 1]);
  return {
    levelEv,
    origin: `the level that holds ${electrons} electrons on the stored mesh at ${referenceTemperatureK} K`,
  };
}

/** Bisects N(mu, 300 K) = filled within a bracket of energies, widened by a few kT. */
function solveLevel(facts: GridFacts, filled: number, lowEv: number, highEv: number): number {
  let [low, high] = [lowEv - 1, highEv + 1];
  const axis = planAxis({ fromEv: low, toEv: high, points: 2 + Math.ceil((high - low) / 0.02) }, [
    referenceTemperatureK,
  ]);
  const store = createPointStore(axis, 1);
  const deposit = createPointDeposit(store);
  const one = new Float64Array(1);
  visitEnergies(facts, (energies, offset, weight) => {
    one[0] = weight;
    for (let band = 0; band < facts.bands; band++) deposit(energies[offset + band], one);
  });
  const count = occupiedWeight({ axis: axis.nodes, columns: 1, base: store.base, nodes: store.nodes });
  const out = new Float64Array(1);
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    count(middle, referenceTemperatureK, out);
    if (out[0] / facts.points < filled) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
