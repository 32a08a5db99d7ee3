// text.test.ts: the reading of a sweep on a terminal: aligned, within its width, complete, free of control characters.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { cleanLine } from "../../src/report/clean.js";
import { largestOf, readingAt } from "../../src/report/reading.js";
import { sparkline } from "../../src/report/sparkline.js";
import { table, wrapped } from "../../src/report/table.js";
import { curvesText } from "../../src/report/text.js";
import { sweep } from "./sweep.js";

describe("table", () => {
  it("aligns words left and numbers right, without blanks at line ends", () => {
    const columns = [
      { heading: "name", align: "left" },
      { heading: "value", align: "right" },
      { heading: "unit", align: "left" },
    ] as const;
    expect(
      table(
        [
          ["spin:xy:z", "1", "S/cm"],
          ["μ", "12.5(3)"],
        ],
        columns,
      ),
    ).toBe(["name         value  unit", "spin:xy:z        1  S/cm", "μ          12.5(3)"].join("\n"));
  });

  it("wraps words within the width and loses none", () => {
    fc.assert(
      fc.property(fc.array(fc.stringMatching(/^[a-z]{1,12}$/)), (words) => {
        const lines = wrapped(words.join(" "), 30, "  ").split("\n");
        expect(lines.every((line) => line.length <= 30)).toBe(true);
        expect(lines.join(" ").split(/\s+/).filter(Boolean)).toEqual(words);
      }),
      { seed: 7 },
    );
  });
});

describe("readings", () => {
  const levels = [-1, -0.5, 0.5, 1];
  const value = [1, -4, 2, Number.NaN];
  const error = [0.1, 0.2, 0.4, Number.NaN];

  it("takes a stored level as it is, a straight line between neighbours, nothing outside", () => {
    expect(readingAt(levels, value, error, -0.5)).toEqual({ levelEv: -0.5, value: -4, error: 0.2, index: 1 });
    expect(readingAt(levels, value, error, 0.25)?.value).toBeCloseTo(0.5, 12);
    expect(readingAt(levels, value, error, 0.25)?.error).toBeCloseTo(0.35, 12);
    expect(readingAt(levels, value, error, 1.1)).toBeUndefined();
    expect(readingAt(levels, value, error, -1.1)).toBeUndefined();
  });

  it("finds the largest magnitude and passes over what is no number", () => {
    expect(largestOf(levels, value, error)).toEqual({ levelEv: -0.5, value: -4, error: 0.2, index: 1 });
    expect(largestOf(levels, [Number.NaN, 0, Number.NaN, 0], error)?.index).toBe(1);
    expect(largestOf([0], [Number.NaN], [0])).toBeUndefined();
  });

  it("takes the level nearest to the reference where the largest magnitude is a plateau, up to round-off", () => {
    const flat = [-1, -1 - 1e-12, -1 + 2e-13, -1, 0.5];
    expect(largestOf([-0.4, -0.2, 0.1, 0.3, 0.5], flat, flat)?.index).toBe(2);
    expect(largestOf([-0.4, -0.2, 0.1], [0, 0, 0], [0, 0, 0])?.levelEv).toBe(0.1);
  });
});

describe("sparkline", () => {
  it("runs from the lowest block to the highest, with blanks for gaps", () => {
    expect(sparkline([0, 1, 2, 3, 4, 5, 6, 7], 8)).toBe("▁▂▃▄▅▆▇█");
    expect(sparkline([0, Number.NaN, 1], 8)).toBe("▁ █");
    expect(sparkline([3, 3, 3], 8)).toBe("▁▁▁");
    expect(sparkline([Number.NaN], 8)).toBe(" ");
    expect(sparkline([], 8)).toBe("");
  });

  it("keeps a peak one level wide", () => {
    const curve = Array.from({ length: 400 }, (_, at) => (at === 217 ? 50 : 1));
    expect(sparkline(curve, 40).indexOf("█")).toBe(21);
  });
});

describe("curvesText", () => {
  const result = sweep({ responses: ["spin:xy:z", "orbital:hall"], temperatureK: [0, 300] });
  const response = result.responses[0];
  response.value = response.value.map((row) => row.map((_, e) => (e === 120 ? -900.04 : 257.4123)));
  response.error = response.error.map((row) => row.map(() => 0.5));
  const text = curvesText(result);

  it("says the value at the reference level and the largest with its level and doping", () => {
    expect(text.replace(/\s+/g, " ")).toContain(
      "At 0 K spin:xy:z is 257.4(5) (hbar/e) S/cm at the reference level and reaches -900.0(5) (hbar/e) S/cm, its largest " +
        "magnitude in the window, at -0.8 eV, which takes 1.36 electrons per cell fewer.",
    );
    const row = text.split("\n").find((line) => line.startsWith("spin:xy:z  "));
    expect(row?.split(/\s{2,}/)).toEqual(["spin:xy:z", "(hbar/e) S/cm", "0", "257.4(5)", "-900.0(5)", "-0.8", "-1.36"]);
  });

  it("says how the zone was sampled, and the scope", () => {
    const flat = text.replace(/\s+/g, " ");
    expect(flat).toContain("Mesh 24 x 24 x 24, 13,824 stored points of 18 bands; refine: adaptive refinement");
    expect(flat).toContain("412,345 samples, cells halved up to 5 times.");
    expect(flat).toContain("Note: intrinsic only, rigid band");
  });

  it("warns of a value that is not told from zero, of missing bars and of a maximum at the edge", () => {
    const doubtful = sweep();
    doubtful.responses[0].error = doubtful.responses[0].error.map((row) =>
      row.map((_, e) => (e < 5 ? Number.NaN : 100)),
    );
    doubtful.responses[0].value = doubtful.responses[0].value.map((row) => row.map((_, e) => e));
    const flat = curvesText(doubtful).replace(/\s+/g, " ");
    expect(flat).toContain("Caution: Largest at the edge of the window, and may grow beyond it: spin:xy:z.");
    expect(flat).toContain(
      "Caution: Not told apart from zero at the reference level (value within two bars): spin:xy:z.",
    );
    expect(flat).toContain('Caution: No bar could be estimated at some levels (shown as "?"): spin:xy:z.');
    expect(curvesText(result)).not.toContain("within two bars): spin:xy:z");
  });

  it.each([80, 96, 120])("stays within %d columns, ends lines cleanly", (width) => {
    for (const line of curvesText(result, { width }).split("\n")) {
      expect([...line].length).toBeLessThanOrEqual(width);
      expect(line).toBe(line.trimEnd());
    }
  });

  it("draws no charts when they are not wanted, and then stays in ASCII", () => {
    expect(curvesText(result, { charts: false })).toMatch(/^[\x0a\x20-\x7e]*$/);
    expect(text).toMatch(/█/);
  });

  it("works without numbers, without responses, at one level, with the reference level outside", () => {
    const empty = sweep({ levels: 3 });
    empty.responses[0].value = empty.responses[0].value.map((row) => row.map(() => Number.NaN));
    expect(curvesText(empty)).toContain("spin:xy:z has no numbers in this window.");
    expect(curvesText({ ...empty, responses: [] })).toContain("No response was asked for.");
    const shifted = sweep({ levels: 5 });
    shifted.level_eV = shifted.level_eV.map((level) => level + 3);
    expect(curvesText(shifted)).toContain("outside");
  });

  it("lets no control character of a title or name through", () => {
    const odd = sweep({ title: "red\u001b[31m title\r\nnext\u202e", levels: 5 });
    odd.responses[0].name = "spin\u0007:xy:z";
    odd.notes.push("a\tnote\u0000");
    expect(curvesText(odd)).not.toMatch(/[\x00-\x09\x0b-\x1f\x7f-\x9f\u202e]/);
  });
});

it("cleanLine keeps letters of any script and removes what is not text", () => {
  expect(cleanLine(" a\u0000\u0001b \u2028c\ud800 µΩ 金 ")).toBe("a b  c µΩ 金");
});
