// thermal.test.ts: is the Mott integral read off node weights the integral that defines it?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { boltzmannEvPerK } from "../../src/base/constants.js";
import { randomStream } from "../../src/base/random.js";
import { fermi, type NodeWeights, occupiedWeight } from "../../src/curves/occupation.js";
import { stateEntropy, thermalReading, thermalWeight } from "../../src/curves/thermal.js";
import { nodeEv, planAxis } from "../../src/spectrum/axis.js";

const temperatures = [0, 100, 300, 1000];
const axis = planAxis({ fromEv: -0.5, toEv: 0.7, points: 49 }, temperatures);
const { nodes } = axis;

const weightsOf = (weight: (energyEv: number) => number, base = 0): NodeWeights => ({
  axis: nodes,
  columns: 1,
  base: Float64Array.of(base),
  nodes: Float64Array.from({ length: nodes.count }, (_, i) => weight(nodeEv(nodes, i))),
});

function read(weights: NodeWeights, levelEv: number, temperatureK: number): number {
  const out = new Float64Array(1);
  thermalWeight(weights)(levelEv, temperatureK, out);
  return out[0];
}

describe("entropy of a state", () => {
  it("is -f ln f - (1 - f) ln(1 - f), even, at most ln 2, without overflow", () => {
    expect(stateEntropy(0)).toBe(Math.LN2);
    expect([stateEntropy(1e300), stateEntropy(-800)]).toEqual([0, 0]);
    fc.assert(
      fc.property(fc.double({ min: -30, max: 30, noNaN: true }), (x) => {
        const [f, e] = [fermi(x), fermi(-x)];
        expect(Math.abs(stateEntropy(x) + f * Math.log(f) + e * Math.log(e))).toBeLessThan(1e-14);
        expect(stateEntropy(-x)).toBe(stateEntropy(x));
      }),
    );
  });
});

describe("Mott integral", () => {
  it("of weight d per eV is (pi^2 / 3) kT d at every level, whatever lies below the axis (Sommerfeld's expansion, which ends there)", () => {
    const weights = weightsOf(() => 3.5 * nodes.stepEv, 17);
    for (const temperature of temperatures)
      for (const level of [-0.5, -0.123, 0.31, 0.7]) {
        const exact = ((Math.PI ** 2 * boltzmannEvPerK * temperature) / 3) * 3.5;
        expect(Math.abs(read(weights, level, temperature) - exact)).toBeLessThan(1e-11);
      }
  });

  it("is integral (-df/de) ((e - mu) / kT) W(e) de of the cold curve W, by the trapezium rule", () => {
    const random = randomStream(4);
    // Single lines far apart, of both signs: W is a staircase, smoothed by a node at 0 K.
    const weights = weightsOf(() => (random.uniform() < 0.01 ? random.normal() : 0));
    const cold = occupiedWeight(weights);
    const out = new Float64Array(1);
    for (const temperature of temperatures.slice(1)) {
      const scale = boltzmannEvPerK * temperature;
      const step = nodes.stepEv / 8;
      for (const level of [-0.3, 0.05, 0.4]) {
        let sum = 0;
        for (let e = level - 40 * scale; e < level + 40 * scale; e += step) {
          cold(e, 0, out);
          const x = (e - level) / scale;
          sum += (step / scale) * fermi(x) * fermi(-x) * x * out[0];
        }
        // The hat of a node has the variance step^2 / 6, and the second derivative of the entropy is at most 1/4.
        const bound = (1 / 48) * (nodes.stepEv / scale) ** 2 * weights.nodes.reduce((a, w) => a + Math.abs(w), 0);
        expect(Math.abs(read(weights, level, temperature) - sum)).toBeLessThan(bound + 1e-9);
      }
    }
  });

  it("is zero at 0 K, and a part known at a higher temperature only is taken as linear below it", () => {
    expect(
      read(
        weightsOf(() => 1),
        0,
        0,
      ),
    ).toBe(0);
    expect([thermalReading.warmed(100, 400), thermalReading.warmed(0, 400), thermalReading.warmed(0, 0)]).toEqual([
      0.25, 0, 1,
    ]);
  });

  it("errs by at most 2 ln 2 times the error of the curve", () => {
    const random = randomStream(9);
    const weights = weightsOf(() => random.normal());
    const out = new Float64Array(1);
    const cold = occupiedWeight(weights);
    let largest = 0;
    for (let i = 0; i < nodes.count; i++) {
      cold(nodeEv(nodes, i) + nodes.stepEv / 2, 0, out);
      largest = Math.max(largest, Math.abs(out[0]));
    }
    for (const temperature of temperatures.slice(1))
      for (const level of [-0.3, 0.2])
        expect(Math.abs(read(weights, level, temperature))).toBeLessThan(
          largest * thermalReading.gain(temperature, 0) * (1 + 1e-3),
        );
    expect(thermalReading.gain(300, 0)).toBeCloseTo(2 * Math.log(2), 14);
    // Where the error is smooth, Sommerfeld's form bounds it: (pi^2/3) kT over the energy on which it changes by itself.
    expect(thermalReading.gain(300, 1)).toBeCloseTo((Math.PI ** 2 / 3) * 300 * boltzmannEvPerK, 14);
    expect(thermalReading.gain(0, 1)).toBe(0);
  });
});
