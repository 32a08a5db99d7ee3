// mesh-step.ts: which energy does one mesh step resolve? Read off a few stored points.
import type { GridFacts } from "../grid/grid.js";
import { openGrid } from "../grid/open.js";
import { openReader } from "../grid/reader.js";
import { createPairPass } from "../kernel/pair.js";
import { averageOverSets } from "../kernel/sets.js";
import { cellEdges } from "../zone/mesh.js";
import { walkPoints } from "./blocks.js";
import { spanWidths } from "./pass.js";

const mostPoints = 256;
/** Bands this far outside the window still count: they are what the window's bands couple to. */
const marginEv = 2;
/** Bands this close take their mean slope: their own depends on the basis that the file happens to hold. */
const togetherEv = 1e-5;
/** The part of a band's span over one step that neighbouring stored points still resolve between them. */
const resolvedPart = 0.8;
/** Where no band crosses the window, or none is sloped. */
const fallbackEv = 0.1;

/**
 * Energy (eV) that the mesh resolves in a window of absolute levels: 0.8 of the mean span of the window's bands over one mesh
 * step. Regularises the denominators of the neighbour defect.
 */
export function resolvedEnergy(facts: GridFacts, fromEv: number, toEv: number): number {
  const reader = openReader(openGrid(facts.directory, facts.view), {
    velocity: [0, 1, 2],
    moments: [],
    hessian: false,
  });
  const edges = cellEdges(facts);
  const pass = createPairPass(facts.bands, [], { degenerateEv: 0, broadenEv: 0 });
  const slope = new Float64Array(3 * facts.bands);
  const widths = new Float64Array(edges.length);
  let sum = 0;
  let count = 0;
  const stride = Math.max(1, Math.floor(facts.points / mostPoints));
  for (let first = 0; first < facts.points; first += stride)
    walkPoints(reader, { first, count: 1 }, [], (_flat, point) => {
      pass.slopes(point, slope);
      averageOverSets(point.energyEv.subarray(point.energyOffset, point.energyOffset + facts.bands), slope, togetherEv);
      for (let band = 0; band < facts.bands; band++) {
        const energy = point.energyEv[point.energyOffset + band];
        if (energy < fromEv - marginEv || energy > toEv + marginEv) continue;
        spanWidths(slope, band, edges, widths);
        for (const width of widths) sum += width;
        count += widths.length;
      }
    });
  reader.close();
  return count > 0 && sum > 0 ? (resolvedPart * sum) / count : fallbackEv;
}
