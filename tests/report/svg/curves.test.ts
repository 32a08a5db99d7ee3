// curves.test.ts: the picture of a sweep: structure, escaping, well-formedness, determinism. What it looks like is judged by eye.
import { describe, expect, it } from "vitest";
import { curvesSvg, quantityWords } from "../../../src/report/svg/curves.js";
import { fittingLines, superscript, textWidthPx, unitInPicture } from "../../../src/report/svg/lettering.js";
import { tickPower, verticalRange } from "../../../src/report/svg/panel.js";
import { pythonWith, runPython } from "../python.js";
import { sweep } from "../sweep.js";

const python = pythonWith("xml.parsers.expat") ?? "";
const count = (text: string, part: string): number => text.split(part).length - 1;
/** All character data of the picture, entities kept. */
const wordsOf = (svg: string): string => svg.replace(/<[^>]*>/g, " ").replace(/\s+/g, " ");

/** Parses with a strict, independent XML parser. */
const parsedStrictly = (svg: string): string =>
  runPython(
    python,
    "import sys, xml.dom.minidom as m; print(m.parseString(sys.stdin.buffer.read()).documentElement.tagName)",
    svg,
  );

describe("curvesSvg", () => {
  const result = sweep({ responses: ["spin:xy:z", "orbital:hall", "charge:xy"], temperatureK: [0, 300], levels: 81 });
  const svg = curvesSvg(result);
  const words = wordsOf(svg);

  it("has a panel per response and one for the density of states", () => {
    expect(count(svg, '<g class="panel"')).toBe(4);
    for (const label of [
      "Spin Hall conductivity, spin:xy:z",
      "Orbital Hall conductivity, orbital:hall",
      "Anomalous Hall conductivity, charge:xy",
      "Density of states",
    ])
      expect(count(svg, `aria-label="${label}"`)).toBe(1);
  });

  it("draws a line, a band and a plain sum for each temperature and response, a line alone for the states", () => {
    expect(count(svg, 'aria-label="area"')).toBe(6);
    expect(count(svg, 'aria-label="line"')).toBe(6 * 2 + 2);
    expect(count(svg, 'aria-label="x-axis tick label"')).toBe(1);
    expect(count(svg, 'aria-label="y-axis tick label"')).toBe(4);
  });

  it("names quantities, units, temperatures, the level axis, the reference, and the scope", () => {
    for (const text of [
      "spin:xy:z, in (ħ/e) S/cm",
      "charge:xy, in S/cm",
      "states/eV per cell",
      " 0 K ",
      " 300 K ",
      "plain mesh sum",
      "± one bar",
      "Fermi level",
      "in eV",
      "intrinsic only, rigid band — screening numbers",
      "mesh 24 × 24 × 24, 18 bands; method refine, 412,345 samples",
      "platinum-like d metal",
    ])
      expect(words).toContain(text);
  });

  it("leaves the plain sum out when the method is the plain sum, the mark out when the reference is outside", () => {
    const points = curvesSvg({ ...result, sampling: { ...result.sampling, method: "points" } });
    expect(wordsOf(points)).not.toContain("plain mesh sum");
    expect(count(points, 'aria-label="line"')).toBe(6 + 2);
    const outside = curvesSvg({ ...result, level_eV: result.level_eV.map((level) => level + 3) });
    expect(wordsOf(outside)).not.toContain(" Fermi level");
  });

  it("gives the same bytes again, and only ids of its prefix", () => {
    expect(curvesSvg(structuredClone(result))).toBe(svg);
    const ids = [...curvesSvg(result, { idPrefix: "gold" }).matchAll(/ id="([^"]*)"/g)].map(([, id]) => id);
    expect(ids.every((id) => id.startsWith("gold-"))).toBe(true);
    expect(new Set(ids).size).toBe(ids.length);
    for (const [, id] of svg.matchAll(/url\(#([^)]*)\)/g)) expect(svg).toContain(` id="${id}"`);
  });

  it("needs nothing from outside", () => {
    expect(svg.replace('xmlns="http://www.w3.org/2000/svg"', "")).not.toMatch(
      /https?:|<script|<style|@import|@font-face|<foreignObject|NaN|undefined|Infinity/,
    );
  });

  it("draws gaps, lone levels, zeros and no numbers at all without an invalid coordinate", () => {
    const odd = sweep({ responses: ["spin:xy:z", "spin:yz:x", "spin:zx:y"], levels: 9 });
    odd.responses[0].value[0].fill(Number.NaN, 2, 4);
    odd.responses[0].error[0].fill(Number.POSITIVE_INFINITY, 5, 7);
    odd.responses[1].value[0].fill(0);
    odd.responses[2].value[0].fill(Number.NaN);
    const drawn = curvesSvg(odd);
    expect(wordsOf(drawn)).toContain("no numbers");
    expect(drawn).not.toMatch(/NaN|undefined|Infinity/);
    expect(curvesSvg(sweep({ levels: 2 }))).not.toMatch(/NaN|undefined|Infinity/);
    expect(curvesSvg({ ...result, responses: [] })).toContain("Density of states");
  });

  const hostile = `</title><script>alert(1)</script>" onload='x' & <b>\u0000\u001b\ud800]]>\ufffe`;
  it("takes text from outside as text, wherever it stands", () => {
    const odd = sweep({ title: hostile, levels: 9 });
    odd.responses[0].name = `spin:xy:${hostile}`;
    odd.responses[0].unit = hostile;
    odd.notes.push(hostile);
    odd.version = hostile;
    const drawn = curvesSvg(odd, { idPrefix: hostile });
    expect(drawn).not.toMatch(/<script|<b>|<title>\s*<\/title>/);
    expect(drawn).not.toMatch(/[^\P{Cc}\n]/u);
    expect(drawn).toContain("&lt;script&gt;alert(1)&lt;/script&gt;");
    if (python !== "") expect(parsedStrictly(drawn)).toBe("svg\n");
  });

  it.skipIf(python === "")("is well-formed XML", () => expect(parsedStrictly(svg)).toBe("svg\n"));

  it("breaks long titles and units into lines instead of clipping them", () => {
    const long = `${"words of a long title ".repeat(12)}${"unbroken".repeat(30)}`;
    const odd = sweep({ title: long, levels: 9 });
    odd.responses[0].unit = "x".repeat(300);
    const drawn = curvesSvg(odd, { widthPx: 480 });
    const lines = [...drawn.matchAll(/<text x="24" [^>]*font-size="(\d+)"[^>]*>([^<]*)</g)];
    expect(lines.length).toBeGreaterThan(12);
    for (const [, size, text] of lines) expect(textWidthPx(text, Number(size))).toBeLessThanOrEqual(480 - 48);
    expect(wordsOf(drawn).replaceAll(" ", "")).toContain(long.replaceAll(" ", ""));
  });
});

describe("vertical range", () => {
  it("holds all values and zero, and lets bars and plain sums widen it by a third at most", () => {
    const [bottom, top] = verticalRange([{ colour: "", value: [100, 300], error: [1, 1e6], points: [-1e9, 5] }]) ?? [
      0, 0,
    ];
    expect(bottom).toBeCloseTo(-100 - 25, 9);
    expect(top).toBeCloseTo(400 + 25, 9);
    expect(verticalRange([{ colour: "", value: [Number.NaN] }])).toBeUndefined();
    expect(verticalRange([{ colour: "", value: [0, 0] }])).toEqual([-1, 1]);
  });

  it("takes out a power of ten only where tick labels would be long", () => {
    expect([0.05, 1, 99999].map((top) => tickPower([0, top]))).toEqual([0, 0, 0]);
    expect([tickPower([-2e-7, 1e-7]), tickPower([0, 3e6])]).toEqual([-7, 6]);
  });
});

describe("lettering", () => {
  it("prints units as journals do", () => {
    expect(["(hbar/e) S/cm", "(hbar/2e) S/cm", "e^2/h", "e/2pi", "A/(m K)", "cm^-3"].map(unitInPicture)).toEqual([
      "(ħ/e) S/cm",
      "(ħ/2e) S/cm",
      "e²/h",
      "e/2π",
      "A/(m K)",
      "cm⁻³",
    ]);
    expect(superscript(-12)).toBe("⁻¹²");
  });

  it("names the quantity of a response", () => {
    expect(["charge:xy", "spin:hall", "orbital:xy:z", "toString:xy:z"].map(quantityWords)).toEqual([
      "Anomalous Hall conductivity",
      "Spin Hall conductivity",
      "Orbital Hall conductivity",
      "Hall conductivity of toString",
    ]);
  });

  it("gives no lines for no text", () => expect(fittingLines(" \u0000 ", 100, 12)).toEqual([]));
});
