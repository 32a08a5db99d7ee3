// json.test.ts: curves.json is deterministic, reads back unchanged and is refused with a place when it is not sound.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import type { CurvesResult } from "../../src/curves/result.js";
import { curvesJson, resultJson } from "../../src/report/json.js";
import { parseCurves } from "../../src/report/parse.js";
import { sweep } from "./sweep.js";

const result = sweep({ responses: ["spin:xy:z", "charge:xy"], temperatureK: [0, 300], levels: 21 });
const text = curvesJson(result);

/** The same content with every object's keys reversed. */
function reversed(item: unknown): unknown {
  if (Array.isArray(item)) return item.map(reversed);
  if (item === null || typeof item !== "object") return item;
  return Object.fromEntries(
    Object.entries(item)
      .reverse()
      .map(([key, value]) => [key, reversed(value)]),
  );
}

function faultOf(action: () => unknown): { kind: string; message: string } {
  try {
    action();
  } catch (error) {
    if (isFault(error)) return { kind: error.kind, message: error.message };
  }
  throw new Error("no Fault was thrown");
}

describe("curvesJson", () => {
  it("gives the same bytes whatever the order of keys", () => {
    expect(curvesJson(reversed(result) as CurvesResult)).toBe(text);
    expect(curvesJson(structuredClone(result))).toBe(text);
  });

  it("begins with the format, keeps a row of numbers on a line, writes null for NaN", () => {
    expect(text.startsWith('{\n  "format": "tidegauge.curves/1",\n  "version"')).toBe(true);
    expect(text.endsWith("}\n")).toBe(true);
    expect(text).not.toContain("NaN");
    const raw = JSON.parse(text) as { responses: { error: (number | null)[][] }[] };
    expect(raw.responses[0].error[0][20]).toBeNull();
    expect(text.split("\n")).toContain(`        [${result.responses[0].value[1].join(",")}],`.replace("],", "]"));
    expect(Object.keys(raw.responses[0])).toEqual([
      "name",
      "unit",
      "value",
      "error",
      "error_sampling",
      "error_model",
      "points",
    ]);
  });

  it("reads back to the same result", () => {
    expect(parseCurves(text)).toEqual(result);
    expect(curvesJson(parseCurves(text))).toBe(text);
    expect(parseCurves(`\ufeff${text}`)).toEqual(result);
  });

  it("keeps what a later version adds", () => {
    const later = { ...result, companions: { drude: [1, 2] } };
    expect(curvesJson(parseCurves(curvesJson(later)))).toBe(curvesJson(later));
  });
});

describe("resultJson", () => {
  it("agrees with JSON.stringify on any content of JSON", () => {
    fc.assert(
      fc.property(fc.dictionary(fc.string(), fc.jsonValue({ maxDepth: 3 })), (item) => {
        expect(JSON.parse(resultJson(item))).toEqual(JSON.parse(JSON.stringify(item)));
      }),
      { seed: 7 },
    );
  });
});

describe("parseCurves", () => {
  const broken = (change: (copy: CurvesResult) => void): string => {
    const copy = structuredClone(result);
    change(copy);
    return curvesJson(copy);
  };
  const cases: [string, string, RegExp][] = [
    ["not JSON", text.slice(0, 400), /^run\.json is not JSON: /],
    ["another document", "[]", /^run\.json is not a tidegauge result: the document: /],
    ["another format", text.replace("curves/1", "curves/9"), /format: /],
    ["a word for a number", text.replace('"bands": 18', '"bands": "18"'), /grid\.bands: /],
    [
      "a missing row",
      broken((copy) => copy.responses[1].error.pop()),
      /error of charge:xy has 1 rows, expected .* 2 temperatures/,
    ],
    [
      "a short row",
      broken((copy) => copy.states_per_eV[1].pop()),
      /states_per_eV, row 1, has 20 values, expected .* 21 levels/,
    ],
    ["an infinite level", broken((copy) => copy.level_eV.fill(Number.NaN, 3, 4)), /level_eV\.3: /],
  ];
  it.each(cases)("refuses %s and says where", (_, document, message) => {
    const fault = faultOf(() => parseCurves(document, "run.json"));
    expect(fault.kind).toBe("data");
    expect(fault.message).toMatch(message);
    expect(fault.message).not.toContain("\n");
  });
});
