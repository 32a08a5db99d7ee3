// axis.test.ts: do the nodes carry every level, resolve the lowest temperature and reach past the highest?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { coarseNodes, nodeEv, planAxis } from "../../src/spectrum/axis.js";

const boltzmannEvPerK = 8.617333262e-5; // CODATA 2022
const windows = fc.record({
  fromEv: fc.double({ min: -20, max: 20, noNaN: true }),
  widthEv: fc.double({ min: 0.3, max: 8, noNaN: true }),
  points: fc.integer({ min: 1, max: 200 }),
  temperaturesK: fc.array(fc.oneof(fc.constant(0), fc.double({ min: 60, max: 3000, noNaN: true })), {
    minLength: 1,
    maxLength: 4,
  }),
});

const planned = ({
  fromEv,
  widthEv,
  points,
  temperaturesK,
}: typeof windows extends fc.Arbitrary<infer W> ? W : never) =>
  planAxis({ fromEv, toEv: points === 1 ? fromEv : fromEv + widthEv, points }, temperaturesK);

describe("nodes of a window", () => {
  it("level i is node firstLevelNode + i nodesPerLevel", () => {
    fc.assert(
      fc.property(windows, (window) => {
        const axis = planned(window);
        expect(axis.levelsEv).toHaveLength(window.points);
        for (const [i, level] of axis.levelsEv.entries())
          expect(Math.abs(nodeEv(axis.nodes, axis.firstLevelNode + i * axis.nodesPerLevel) - level)).toBeLessThan(
            1e-12,
          );
        if (window.points > 1) expect(axis.levelsEv[window.points - 1]).toBeCloseTo(window.fromEv + window.widthEv, 12);
        expect(axis.levelsEv[0] - window.fromEv).toBe(0);
      }),
    );
  });

  it("8 or more to the lowest kT, 4 or more to a level step where 0 K is asked, 38 or more kT of the highest beyond the levels", () => {
    fc.assert(
      fc.property(windows, (window) => {
        const { nodes, nodesPerLevel, levelsEv } = planned(window);
        const warm = window.temperaturesK.filter((t) => t > 0).map((t) => t * boltzmannEvPerK);
        if (warm.length > 0) expect(nodes.stepEv).toBeLessThanOrEqual((Math.min(...warm) / 8) * (1 + 1e-8));
        expect(nodesPerLevel).toBeGreaterThanOrEqual(window.temperaturesK.includes(0) ? 4 : 1);
        const reach = 38 * Math.max(0, ...warm) + 7 * nodes.stepEv;
        expect(levelsEv[0] - nodes.startEv).toBeGreaterThan(reach);
        expect(nodeEv(nodes, nodes.count - 1) - levelsEv[levelsEv.length - 1]).toBeGreaterThan(reach);
      }),
    );
  });

  it("need not be fine for levels that lie closer than kT alone: 101 levels over 5 meV at 1000 K", () => {
    expect(planAxis({ fromEv: 0, toEv: 0.005, points: 101 }, [1000]).nodesPerLevel).toBe(1);
  });

  it("too many of them are a usage Fault that names the levels, the temperatures and a cure", () => {
    const cases: [number, number[], string][] = [
      [20, [0.5], "0.5 to 0.5 K"],
      [0.1, [1, 2000], "1 to 2000 K"],
      [20, [0, 0.5], "0 to 0.5 K"],
      [20, [0], "0 to 0 K"],
    ];
    for (const [width, temperatures, words] of cases)
      try {
        planAxis({ fromEv: 0, toEv: width, points: 100_000 }, temperatures);
        throw new Error("accepted");
      } catch (error) {
        if (!isFault(error)) throw error;
        expect(error.kind).toBe("usage");
        expect(error.message).toContain(words);
        expect(error.message).not.toContain("Infinity");
      }
  });

  it("the coarse copy for error bars spans them all with at most 1202 nodes", () => {
    fc.assert(
      fc.property(windows, (window) => {
        const axis = planned(window);
        const coarse = coarseNodes(axis);
        expect(coarse.startEv).toBe(axis.nodes.startEv);
        expect(coarse.count).toBeLessThanOrEqual(1202);
        expect(nodeEv(coarse, coarse.count - 1)).toBeGreaterThanOrEqual(
          nodeEv(axis.nodes, axis.nodes.count - 1) - 1e-9,
        );
        const multiple = coarse.stepEv / axis.nodes.stepEv;
        expect(Math.abs(multiple - Math.round(multiple))).toBeLessThan(1e-9);
      }),
    );
  });
});
