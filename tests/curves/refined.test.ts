// refined.test.ts: are curves and bars of a refined sweep what their formulas say, on sections made by hand?
//
// Closed forms: all weight in the bases (far below the window) is occupied at every level and temperature, so that curves and bars are
// plain numbers; a constant density d per eV from the axis' foot E0 on holds d (mu - E0); a line at E0 holds the Fermi factor.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { type RefinedFacts, refinedCurves, refinedErrors } from "../../src/curves/refined.js";
import { coarseNodes, indicatorNodes, type NodeAxis, nodeEv, planAxis } from "../../src/spectrum/axis.js";
import type { Sections } from "../../src/spectrum/sections.js";

const boltzmannEvPerK = 8.617333262e-5; // CODATA 2022
const axis = planAxis({ fromEv: -0.5, toEv: 0.5, points: 11 }, [0, 300], 2);
const points = 64;
const facts: RefinedFacts = {
  axis,
  columns: 2,
  points,
  electronsPerBand: 1,
  dimension: 3,
  subMeshes: { stride: 2, count: 8 },
  regularEv: 0.4,
  hessian: "array",
  bands: 6,
};

/** A spectrum whose weight lies below the axis. */
const below = (name: string, nodes: NodeAxis, response: number, states: number): Sections => ({
  [`${name}.base`]: Float64Array.of(response, states),
  [`${name}.nodes`]: new Float64Array(2 * nodes.count),
});

interface Made {
  readonly main?: number;
  readonly defect?: number;
  /** Of the contained mesh, whose defect is nothing. */
  readonly coarse?: number;
  readonly states?: number;
  /** At every node. */
  readonly squares?: readonly [number, number];
}

function sectionsOf({ main = 0, defect = 0, coarse = 0, states = 0, squares = [0, 0] }: Made): Sections {
  const sub = coarseNodes(axis);
  const rows = indicatorNodes(axis).count;
  return {
    ...below("refine", axis.nodes, main, states),
    ...below("refine.defect", axis.nodes, defect, 0),
    ...below("coarse", sub, coarse, states / 8),
    ...below("coarse.defect", sub, 0, 0),
    "refine.square": Float64Array.from({ length: 2 * rows }, (_, at) => squares[at % 2]),
  };
}

/** The bars of the response, which must be the same at every level and temperature. */
function barsOf(sections: Sections, known: RefinedFacts = facts): { sampling: number; model: number } {
  const { sampling, model } = refinedErrors(sections, known, refinedCurves(sections, known));
  const one = (rows: Float64Array[][]): number => {
    expect(rows).toHaveLength(2);
    const values = rows.flatMap((row) => row.map(([response]) => response));
    expect(values).toHaveLength(22);
    for (const value of values) expect(value).toBeCloseTo(values[0], 12);
    return values[0];
  };
  return { sampling: one(sampling), model: one(model) };
}

/** A line of weight 1 at a node of the axis, for the response and for the count. */
function line(name: string, at: number): Sections {
  const sections = below(name, axis.nodes, 0, 0);
  sections[`${name}.nodes`].fill(1, 2 * at, 2 * at + 2);
  return sections;
}

describe("curves", () => {
  it("are trees plus defect, a zone mean", () => {
    for (const rows of refinedCurves(sectionsOf({ main: 20, defect: -4, states: 32 }), facts))
      for (const [response, states] of rows) expect([response, states]).toEqual([16 / points, 32 / points]);
  });

  it("at 0 K: the trees' line is a step, the defect's is blurred as at kT = resolved energy / 12; warmer, both have the temperature", () => {
    const at = axis.firstLevelNode + 4 * axis.nodesPerLevel;
    const energy = nodeEv(axis.nodes, at);
    const kT = facts.regularEv / 12;
    const step = (level: number, thermalEv: number): number => 1 / (1 + Math.exp((energy - level) / thermalEv));
    const hot = (2 * kT) / boltzmannEvPerK;
    const known = { ...facts, axis: { ...axis, temperaturesK: [0, hot] } };
    const trees = { ...sectionsOf({}), ...line("refine", at) };
    const defect = { ...sectionsOf({}), ...line("refine.defect", at) };
    const [ofTrees, ofDefect] = [refinedCurves(trees, known), refinedCurves(defect, known)];
    for (const [i, level] of axis.levelsEv.entries()) {
      expect(ofTrees[0][i][0] * points).toBeCloseTo(i < 4 ? 0 : i > 4 ? 1 : 1 / 2, 12);
      expect(ofDefect[0][i][0] * points).toBeCloseTo(step(level, kT), 10);
      for (const curves of [ofTrees, ofDefect]) expect(curves[1][i][0] * points).toBeCloseTo(step(level, 2 * kT), 10);
    }
  });
});

describe("the bar of sampling", () => {
  it("is 1.5 times the root of the squares let pass", () => {
    expect(barsOf(sectionsOf({ squares: [4e-4, 0] })).sampling).toBeCloseTo(1.5 * 0.02, 14);
    expect(barsOf(sectionsOf({ main: 20, coarse: 9 })).sampling).toBe(0);
  });

  it("is the mean square over 2 kT about the level: linear squares give the square at the level", () => {
    const sections = sectionsOf({});
    const nodes = indicatorNodes(axis);
    for (let node = 0; node < nodes.count; node++) sections["refine.square"][2 * node] = 3 + nodeEv(nodes, node);
    const { sampling } = refinedErrors(sections, facts, refinedCurves(sections, facts));
    for (const rows of sampling)
      for (const [i, level] of axis.levelsEv.entries()) expect(rows[i][0]).toBeCloseTo(1.5 * Math.sqrt(3 + level), 12);
  });
});

describe("the bar of the model", () => {
  const order = 3.4;

  it("is the difference to the contained mesh over stride^3.4 - 1, as zone means", () => {
    fc.assert(
      fc.property(fc.double({ min: -50, max: 50, noNaN: true }), fc.constantFrom(2, 3, 5), (coarse, stride) => {
        const known = { ...facts, subMeshes: { stride, count: stride ** 3 } };
        const { model } = barsOf(sectionsOf({ main: 20, coarse }), known);
        const difference = Math.abs(20 / points - coarse / (points / stride ** 3));
        expect(model).toBeCloseTo(difference / (stride ** order - 1), 12);
      }),
      { numRuns: 20 },
    );
  });

  it("without second derivatives over stride^2 - 1", () => {
    const { model } = barsOf(sectionsOf({ main: 16 }), { ...facts, hessian: "none" });
    expect(model).toBeCloseTo(16 / points / 3, 14);
  });

  it("is never below a hundredth of the defect", () => {
    // Trees 20 and defect 4 make 24; the contained mesh, with an eighth of the points, holds 3: no difference.
    const { model } = barsOf(sectionsOf({ main: 20, defect: 4, coarse: 3 }));
    expect(model).toBeCloseTo((0.01 * 4) / points, 14);
    const both = barsOf(sectionsOf({ main: 20, defect: 4, coarse: 1 }));
    expect(both.model).toBeCloseTo(Math.hypot(16 / (2 ** order - 1), 0.04) / points, 14);
  });

  it("without a contained mesh is a tenth of the defect", () => {
    const sections = sectionsOf({ main: 20, defect: -4 });
    for (const name of ["coarse", "coarse.defect"])
      for (const part of ["base", "nodes"]) delete sections[`${name}.${part}`];
    expect(barsOf(sections, { ...facts, subMeshes: undefined }).model).toBeCloseTo(0.4 / points, 14);
  });

  it("does not vanish where the difference passes through zero: it is averaged over a quarter of the resolved energy", () => {
    // A density that the contained mesh lacks: the difference is slope (mu - foot). Set off so that it vanishes at the middle level.
    const sections = sectionsOf({});
    const { startEv, stepEv, count } = axis.nodes;
    const slope = 5;
    for (let node = 0; node < count; node++) sections["refine.nodes"][2 * node] = slope * stepEv;
    sections["refine.base"][0] = slope * (startEv - stepEv / 2);
    const { model } = refinedErrors(sections, facts, refinedCurves(sections, facts));
    // Nine levels, evenly over -1 .. 1 quarters: the mean square of their places is (2 / 9) (1 + 9/16 + 1/4 + 1/16).
    const rms = Math.sqrt((2 / 9) * (1 + 9 / 16 + 1 / 4 + 1 / 16));
    for (const rows of model)
      for (const [i, level] of axis.levelsEv.entries()) {
        const difference = Math.hypot(slope * level, (slope * rms * facts.regularEv) / 4) / points;
        expect(rows[i][0]).toBeCloseTo(difference / (2 ** order - 1), 12);
      }
  });

  it("is doubled near the top of bands cut from plane waves, and only there", () => {
    // 6 bands: the highest two are not to be trusted, so that more than 4 states per cell double the bar.
    for (const [states, hessian, factor] of [
      [4.001, "free-electron", 2],
      [6, "free-electron", 2],
      [3.999, "free-electron", 1],
      [6, "array", 1],
    ] as const) {
      const sections = sectionsOf({ main: 16, states: states * points, squares: [0.01, 0] });
      const { model, sampling } = barsOf(sections, { ...facts, hessian });
      expect(model).toBeCloseTo((factor * 16) / points / (2 ** order - 1), 12);
      expect(sampling).toBeCloseTo(0.15, 14);
    }
  });
});
