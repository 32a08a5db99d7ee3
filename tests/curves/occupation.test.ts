// occupation.test.ts: do weights on nodes give the closed-form curves of constant and linear densities, warm and cold?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { randomStream } from "../../src/base/random.js";
import {
  type CurveSampler,
  fermi,
  fermiSlope,
  occupiedWeight,
  sampleCurves,
  steppedWeight,
  weightDensity,
} from "../../src/curves/occupation.js";
import { nodeEv, planAxis } from "../../src/spectrum/axis.js";
import { createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../../src/spectrum/boxes.js";
import { createPointDeposit, createPointStore } from "../../src/spectrum/points.js";

const boltzmannEvPerK = 8.617333262e-5; // CODATA 2022
const temperatures = [0, 150, 300, 1000];
const axis = planAxis({ fromEv: -0.5, toEv: 0.7, points: 49 }, temperatures);
const { nodes } = axis;

function curveAt(sampler: CurveSampler, levelEv: number, temperatureK: number): number {
  const out = new Float64Array(1);
  sampler(levelEv, temperatureK, out);
  return out[0];
}

/** Weights of a density per eV, one column: density * step at every node. */
const weightsOf = (density: (energyEv: number) => number, base = 0) => ({
  axis: nodes,
  columns: 1,
  base: Float64Array.of(base),
  nodes: Float64Array.from({ length: nodes.count }, (_, i) => density(nodeEv(nodes, i)) * nodes.stepEv),
});

describe("Fermi factors", () => {
  it("f(x) + f(-x) = 1, -df/dx = f (1 - f), no overflow", () => {
    fc.assert(
      fc.property(fc.double({ min: -800, max: 800, noNaN: true }), (x) => {
        expect(fermi(x) + fermi(-x)).toBeCloseTo(1, 15);
        expect(Math.abs(fermi(x) - (1 - Math.tanh(x / 2)) / 2)).toBeLessThan(2e-16);
        expect(Math.abs(fermiSlope(x) - fermi(x) * fermi(-x))).toBeLessThan(1e-16);
      }),
    );
    expect([fermi(0), fermiSlope(0), fermi(-1e300), fermi(1e300), fermiSlope(1e300)]).toEqual([0.5, 0.25, 1, 0, 0]);
  });

  it("-df/dx integrates to 1 (trapezium rule, exact for it to e^(-2 pi^2 / h))", () => {
    let sum = 0;
    for (let x = -60; x <= 60; x += 0.5) sum += 0.5 * fermiSlope(x);
    expect(sum).toBeCloseTo(1, 14);
  });
});

describe("occupied weight", () => {
  it("of a constant density is linear in the level at every temperature", () => {
    // Nodes below the axis: the density goes on there, as `base`.
    const bottomEv = nodes.startEv - nodes.stepEv / 2;
    const sampler = occupiedWeight(weightsOf(() => 3.5, 2));
    for (const temperature of temperatures)
      for (let level = -0.5; level <= 0.7; level += 0.0137)
        expect(Math.abs(curveAt(sampler, level, temperature) - 2 - 3.5 * (level - bottomEv))).toBeLessThan(1e-11);
  });

  it("of a linear density is c (mu^2 / 2 + pi^2 kT^2 / 6), Sommerfeld's expansion, which ends there", () => {
    const density = (energyEv: number): number => 2.2 * (energyEv - nodes.startEv);
    const sampler = occupiedWeight(weightsOf(density));
    const zero = (level: number): number => 1.1 * (level - nodes.startEv) ** 2;
    const cold = curveAt(sampler, 0.1, 0) - zero(0.1);
    for (const temperature of temperatures)
      for (let level = -0.5; level <= 0.7; level += 0.0137) {
        const thermal = (2.2 * Math.PI ** 2 * (boltzmannEvPerK * temperature) ** 2) / 6;
        // At 0 K the hats make the density continuous and linear: only the foot of the axis differs, by the same constant.
        const foot = temperature === 0 ? cold : -(2.2 * nodes.stepEv ** 2) / 12;
        expect(Math.abs(curveAt(sampler, level, temperature) - zero(level) - thermal - foot)).toBeLessThan(1e-11);
      }
  });

  it("of one line is a step smoothed by a hat of one node at 0 K, f at T > 0", () => {
    const line = { ...weightsOf(() => 0) };
    const at = 400;
    line.nodes[at] = 1;
    const energy = nodeEv(nodes, at);
    const sampler = occupiedWeight(line);
    for (const [offset, part] of [
      [-1.001, 0],
      [-0.5, 1 / 8],
      [0, 1 / 2],
      [0.5, 7 / 8],
      [1.001, 1],
    ])
      expect(curveAt(sampler, energy + offset * nodes.stepEv, 0)).toBeCloseTo(part, 10);
    for (const temperature of temperatures.slice(1))
      for (const offset of [-0.3, -0.02, 0, 0.1]) {
        const exact = 1 / (1 + Math.exp(-offset / (boltzmannEvPerK * temperature)));
        expect(curveAt(sampler, energy + offset, temperature)).toBeCloseTo(exact, 12);
      }
  });

  it("with the level far above is all the weight, far below the base", () => {
    const random = randomStream(3);
    const weights = { ...weightsOf(() => random.normal(), 1.25) };
    const total = weights.nodes.reduce((sum, w) => sum + w, 1.25);
    const sampler = occupiedWeight(weights);
    const top = nodeEv(nodes, nodes.count - 1);
    for (const temperature of temperatures)
      for (const beyond of [0.1 + 40 * boltzmannEvPerK * temperature, 1e6]) {
        expect(curveAt(sampler, top + beyond, temperature)).toBeCloseTo(total, 12);
        expect(curveAt(sampler, nodes.startEv - beyond, temperature)).toBeCloseTo(1.25, 12);
      }
  });

  it("keeps small weights beside large ones of both signs", () => {
    const weights = weightsOf(() => 0);
    for (let i = 0; i + 2 < nodes.count; i += 3) weights.nodes.set([0.5, 1e13, -1e13], i);
    const found = curveAt(occupiedWeight(weights), 1e3, 0);
    expect(found).toBe(0.5 * Math.floor(nodes.count / 3));
  });
});

describe("density of weight", () => {
  it("of a constant density is that density", () => {
    const sampler = weightDensity(
      weightsOf(() => 3.5),
      4 * nodes.stepEv,
    );
    for (const temperature of temperatures)
      for (let level = -0.5; level <= 0.7; level += 0.0137)
        expect(curveAt(sampler, level, temperature)).toBeCloseTo(3.5, 11);
  });

  it("is the derivative of the occupied weight at T > 0, and integrates to the weight at every temperature", () => {
    const random = randomStream(8);
    const inside = (energy: number): number => (energy > -0.2 && energy < 0.4 ? random.normal() : 0);
    const weights = weightsOf(inside);
    const [occupied, density] = [occupiedWeight(weights), weightDensity(weights, 4 * nodes.stepEv)];
    for (const temperature of temperatures) {
      const h = 1e-4;
      if (temperature > 0)
        for (const level of [-0.21, 0, 0.3]) {
          const slope =
            (curveAt(occupied, level + h, temperature) - curveAt(occupied, level - h, temperature)) / (2 * h);
          expect(Math.abs(curveAt(density, level, temperature) - slope)).toBeLessThan(1e-4);
        }
      const step = 2 * nodes.stepEv;
      let sum = 0;
      for (let level = -4; level < 4; level += step) sum += curveAt(density, level, temperature) * step;
      expect(sum).toBeCloseTo(
        weights.nodes.reduce((a, b) => a + b, 0),
        9,
      );
    }
  });
});

/** integral (-df/de)(e - mu) curve(e) de by the trapezium rule. */
function convolved(curve: (energyEv: number) => number, levelEv: number, temperatureK: number, stepEv: number): number {
  const thermalEv = boltzmannEvPerK * temperatureK;
  const reach = Math.ceil((40 * thermalEv) / stepEv);
  let sum = 0;
  for (let i = -reach; i <= reach; i++)
    sum += (stepEv / thermalEv / (4 * Math.cosh((i * stepEv) / (2 * thermalEv)) ** 2)) * curve(levelEv + i * stepEv);
  return sum;
}

describe("sigma(mu, T) = integral (-df/de)(e - mu) sigma(e, 0) de", () => {
  it("for spreads of bands (`cells`)", () => {
    const random = randomStream(12);
    const store = createBoxStore(nodes, 1);
    const shaper = createBoxShaper(nodes);
    let total = 0;
    for (let i = 0; i < 60; i++) {
      const widths = Float64Array.from({ length: 3 }, () => 0.1 * random.uniform() ** 3);
      const weight = random.normal();
      total += Math.abs(weight);
      depositShape(store, shaper(1.6 * random.uniform() - 0.7, widths), Float64Array.of(weight));
    }
    settleBoxes(store);
    const sampler = occupiedWeight({ axis: nodes, columns: 1, base: store.base, nodes: store.copies[0] });
    for (const temperature of temperatures.slice(1)) {
      // A hat has the variance step^2 / 6, |f''| <= 0.0963 / kT^2: what the convolution of the cold curve differs by.
      const bound = (0.0963 / 12) * (nodes.stepEv / (boltzmannEvPerK * temperature)) ** 2;
      for (const level of [-0.5, -0.1, 0, 0.123, 0.7]) {
        const warm = curveAt(sampler, level, temperature);
        const cold = convolved((e) => curveAt(sampler, e, 0), level, temperature, nodes.stepEv / 7);
        expect(Math.abs(warm - cold)).toBeLessThan(bound * total + 1e-9);
      }
    }
  });

  it("for the plain mesh sum (`points`), whose cold curve is known at the levels alone", () => {
    const fine = planAxis({ fromEv: -1.5, toEv: 1.5, points: 6001 }, [0, 300]);
    const random = randomStream(13);
    const store = createPointStore(fine, 1);
    const deposit = createPointDeposit(store);
    let total = 0;
    for (let i = 0; i < 80; i++) {
      const weight = random.normal();
      total += Math.abs(weight);
      // Half-way between two levels: then the step is where the trapezium rule has it.
      deposit(0.0005 * (random.integer(2000) - 1000 + 0.5), Float64Array.of(weight));
    }
    const cold = steppedWeight(store.base, store.steps, 1);
    const curve = (e: number): number => cold[Math.round((e + 1.5) / 0.0005)][0];
    const sampler = occupiedWeight({ axis: fine.nodes, columns: 1, base: store.base, nodes: store.nodes });
    const thermalEv = 300 * boltzmannEvPerK;
    for (const level of [-0.4, 0, 0.25]) {
      const bound = ((0.0963 / 24) * 0.0005 ** 2) / thermalEv ** 2;
      const difference = curveAt(sampler, level, 300) - convolved(curve, level, 300, 0.0005);
      expect(Math.abs(difference)).toBeLessThan(bound * total + 1e-10);
    }
  });
});

describe("sampled curves", () => {
  it("are [temperature][level][column], each row its own", () => {
    const sampler: CurveSampler = (level, temperature, out) => out.set([level, temperature, 7]);
    const curves = sampleCurves(sampler, axis, 3);
    expect(curves).toHaveLength(temperatures.length);
    for (const [t, rows] of curves.entries()) {
      expect(rows).toHaveLength(49);
      for (const [i, row] of rows.entries()) expect([...row]).toEqual([axis.levelsEv[i], temperatures[t], 7]);
    }
  });
});
