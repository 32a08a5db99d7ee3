// box-reader.test.ts: is reading every deposit and summing the same as summing the deposits and reading the nodes?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { occupiedParts, occupiedWeight } from "../../src/curves/occupation.js";
import { planAxis } from "../../src/spectrum/axis.js";
import { createBoxReader } from "../../src/spectrum/box-reader.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../../src/spectrum/boxes.js";
import { createPointDeposit, createPointReader, createPointStore } from "../../src/spectrum/points.js";

const deposits = fc.array(
  fc.record({
    energyEv: fc.double({ min: -3, max: 3, noNaN: true }),
    widths: fc.array(fc.oneof(fc.constant(0), fc.double({ min: 0, max: 4, noNaN: true })), {
      minLength: 2,
      maxLength: 3,
    }),
    value: fc.double({ min: -5, max: 5, noNaN: true }),
  }),
  { minLength: 1, maxLength: 30 },
);
const settings = fc.record({
  levelEv: fc.double({ min: -0.5, max: 0.5, noNaN: true }),
  temperatureK: fc.constantFrom(0, 20, 300, 2000),
});

describe("occupied weight read deposit by deposit (invariant; fast-check)", () => {
  it("of boxes of any width, below, in and above the axis", () => {
    fc.assert(
      fc.property(deposits, settings, (boxes, { levelEv, temperatureK }) => {
        const axis = planAxis({ fromEv: levelEv, toEv: levelEv, points: 1 }, [temperatureK]).nodes;
        const store = createBoxStore(axis, 1);
        const shaper = createBoxShaper(axis);
        const read = createBoxReader(axis, occupiedParts(axis, levelEv, temperatureK));
        let [sum, size] = [0, 0];
        for (const { energyEv, widths, value } of boxes) {
          depositShape(store, shaper(energyEv, Float64Array.from(widths)), Float64Array.of(value));
          sum += value * read(energyEv, Float64Array.from(widths));
          size += Math.abs(value);
        }
        settleBoxes(store);
        const out = new Float64Array(1);
        occupiedWeight({ axis, columns: 1, base: store.base, nodes: store.copies[0] })(levelEv, temperatureK, out);
        expect(Math.abs(sum - out[0])).toBeLessThanOrEqual(1e-13 * size);
      }),
      { numRuns: 150, seed: 5 },
    );
  });

  it("of points", () => {
    fc.assert(
      fc.property(deposits, settings, (points, { levelEv, temperatureK }) => {
        const axis = planAxis({ fromEv: levelEv, toEv: levelEv, points: 1 }, [temperatureK]);
        const store = createPointStore(axis, 1);
        const deposit = createPointDeposit(store);
        const read = createPointReader(axis.nodes, occupiedParts(axis.nodes, levelEv, temperatureK));
        let [sum, size] = [0, 0];
        for (const { energyEv, value } of points) {
          deposit(energyEv, Float64Array.of(value));
          sum += value * read(energyEv);
          size += Math.abs(value);
        }
        const out = new Float64Array(1);
        occupiedWeight({ axis: axis.nodes, columns: 1, base: store.base, nodes: store.nodes })(
          levelEv,
          temperatureK,
          out,
        );
        expect(Math.abs(sum - out[0])).toBeLessThanOrEqual(1e-12 * size);
      }),
      { numRuns: 150, seed: 6 },
    );
  });
});
