// palette.test.ts: colours keep their contrast and stay apart for every common kind of colour vision.
// Contrast: Web Content Accessibility Guidelines 2.2, 1.4.3 and 1.4.11. Simulation: Machado, Oliveira, Fernandes, IEEE Trans.
// Vis. Comput. Graph. 15, 1291 (2009), severity 1. Difference: CIE 1976 L*a*b*, D65.
import { describe, expect, it } from "vitest";
import { temperatureColours, tone } from "../../../src/report/svg/palette.js";

const linear = (hex: string): number[] =>
  [1, 3, 5].map((at) => {
    const value = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  });
const times = (matrix: number[][], v: number[]): number[] =>
  matrix.map((row) => row.reduce((sum, m, at) => sum + m * v[at], 0));
const toXyz = [
  [0.4124, 0.3576, 0.1805],
  [0.2126, 0.7152, 0.0722],
  [0.0193, 0.1192, 0.9505],
];
const visions: Record<string, number[][]> = {
  common: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};

const luminance = (hex: string): number => times(toXyz, linear(hex))[1];
function contrast(a: string, b: string): number {
  const [dark, light] = [luminance(a), luminance(b)].sort((x, y) => x - y);
  return (light + 0.05) / (dark + 0.05);
}
function lab(rgb: number[]): number[] {
  const f = (t: number): number => (t > (6 / 29) ** 3 ? Math.cbrt(t) : t / (3 * (6 / 29) ** 2) + 4 / 29);
  const [x, y, z] = times(
    toXyz,
    rgb.map((value) => Math.max(0, value)),
  ).map((value, at) => f(value / [0.9505, 1, 1.089][at]));
  return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}
const apart = (a: string, b: string, vision: number[][]): number => {
  const [p, q] = [a, b].map((hex) => lab(times(vision, linear(hex))));
  return Math.hypot(...p.map((value, at) => value - q[at]));
};

describe("colours", () => {
  it("are enough against the ground: text 7, faint text 4.5, lines 3", () => {
    expect(contrast(tone.ink, tone.paper)).toBeGreaterThan(7);
    expect(contrast(tone.faint, tone.paper)).toBeGreaterThan(4.5);
    for (const count of [1, 2, 3, 4, 5, 9])
      for (const colour of temperatureColours(count)) expect(contrast(colour, tone.paper)).toBeGreaterThan(3);
  });

  it.each(Object.keys(visions))("stay apart for up to five temperatures in %s", (vision) => {
    for (const count of [2, 3, 4, 5]) {
      const colours = temperatureColours(count);
      for (const [at, a] of colours.entries())
        for (const b of colours.slice(at + 1)) expect(apart(a, b, visions[vision])).toBeGreaterThan(20);
    }
  });

  it("are as many as asked for, all different", () => {
    for (const count of [1, 2, 3, 4, 5, 7, 12]) expect(new Set(temperatureColours(count)).size).toBe(count);
    expect(temperatureColours(0)).toEqual([]);
  });
});
