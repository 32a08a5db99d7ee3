// catalogue.test.ts: does the catalogue find, explain and refuse samples and parameters as a person needs it?
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { buildSample, defaultMesh, sampleCatalogue, sampleNamed } from "../../src/samples/catalogue.js";

function faultOf(run: () => unknown): { kind: string; message: string; cure: string } {
  try {
    run();
  } catch (error) {
    if (isFault(error)) return { kind: error.kind, message: error.message, cure: error.cure };
    throw error;
  }
  throw new Error("no fault");
}

describe("the catalogue", () => {
  it("lists every sample once, with a line of summary", () => {
    expect(sampleCatalogue.map((sample) => sample.name)).toMatchInlineSnapshot(`
      [
        "dirac",
        "haldane",
        "kane-mele",
        "rashba",
        "luttinger",
        "zincblende",
        "sp-square",
        "metal",
        "demo",
        "random",
      ]
    `);
    for (const { summary } of sampleCatalogue) expect(summary).toMatch(/^\S[^\n]{20,160}$/);
  });

  it.each(sampleCatalogue.map((sample) => [sample.name]))("builds %s from its defaults, also typed out", (name) => {
    const sample = sampleNamed(name);
    const typed = Object.entries(sample.parameters)
      .filter(([, parameter]) => parameter.default !== undefined)
      .map(([key, parameter]) => [key, String(parameter.default)] as const);
    const model = buildSample(name);
    const again = buildSample(name, Object.fromEntries(typed));
    expect(again.title).toBe(model.title);
    expect(model.at([0.1, 0.2, 0]).h).toEqual(again.at([0.1, 0.2, 0]).h);
    expect(model.fermiEv ?? model.electrons).toBeDefined();
    const { divisions, offset } = defaultMesh(name, model);
    if (model.periodic === 2) expect([divisions[2], offset[2]]).toEqual([1, 0]);
  });

  it("reads numbers, choices and whole numbers", () => {
    expect(buildSample("haldane", { M: "0.5" }).title).toContain("M = 0.5");
    expect(buildSample("sp-square", { spin: "pair" }).electronsPerBand).toBe(2);
    expect(buildSample("random", { bands: "8", periodic: "2" }).bands).toBe(8);
    expect(buildSample("metal", { a: "3.924", electrons: "10", xi: "0.55" }).electrons).toBe(10);
  });
});

describe("faults", () => {
  it("names the nearest sample", () => {
    const fault = faultOf(() => buildSample("haldan"));
    expect(fault.kind).toBe("usage");
    expect(fault.message).toBe('There is no sample "haldan".');
    expect(fault.cure).toContain('"haldane"');
  });

  it("names the nearest parameter", () => {
    const fault = faultOf(() => buildSample("haldane", { ph: "1" }));
    expect(fault.message).toContain('no parameter "ph"');
    expect(fault.cure).toContain('"phi"');
  });

  it("takes no inherited name for a parameter", () => {
    expect(faultOf(() => buildSample("haldane", { toString: "1" })).message).toContain("no parameter");
  });

  it.each([
    ["haldane", { t1: "much" }, "t1", "a finite number"],
    ["haldane", { t1: "" }, "t1", "a finite number"],
    ["haldane", { t1: "Infinity" }, "t1", "a finite number"],
    ["dirac", { box: "0" }, "box", "a number above 0"],
    ["random", { bands: "5" }, "bands", "an even number"],
    ["random", { bands: "2.5" }, "bands", "a whole number from 2 to 64"],
    ["random", { bands: "66" }, "bands", "a number at least 2 and at most 64"],
    ["random", { symmetry: "mirror" }, "symmetry", "one of none, time-reversal, inversion, both"],
  ])("says of %s %j what is expected", (name, parameters, key, expected) => {
    const fault = faultOf(() => buildSample(name, parameters as Record<string, string>));
    expect(fault.kind).toBe("usage");
    expect(fault.message).toContain(`Parameter ${key} of sample ${name}`);
    expect(fault.message).toContain(`expected ${expected}.`);
    expect(fault.cure).toContain("default");
  });

  it("lists the metals that come along", () => {
    const fault = faultOf(() => buildSample("metal", { file: "golt" }));
    expect(fault.message).toContain('no metal "golt"');
    expect(fault.cure).toContain("gold");
  });
});
