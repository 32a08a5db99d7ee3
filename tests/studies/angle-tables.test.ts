// angle-tables.test.ts: are resistivities and tables of measurements read as written, and is what is wrong told with file, line and column?
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import type { GridFacts } from "../../src/grid/grid.js";
import { parseTable } from "../../src/studies/csv-table.js";
import { judged } from "../../src/studies/judgement.js";
import { readMeasurements, singleResistivity, tableResistivity } from "../../src/studies/measurements.js";
import { parseResistivity, resistivityUnit } from "../../src/studies/resistivity.js";

const crystal = { periodic: 3 } as const;
const facts = {
  periodic: 3,
  vectorsA: [
    [4, 0, 0],
    [0, 4, 0],
    [0, 0, 4],
  ],
  electronsPerBand: 1,
  moments: [{ name: "spin", directions: 3, kind: "axial", underTimeReversal: "odd", unit: "hbar" }],
} as unknown as GridFacts;
const responses = [{ name: "spin:hall", carrier: "spin", unit: "(hbar/e) S/cm" }];
const folder = mkdtempSync(join(tmpdir(), "tables-"));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function refusal(act: () => unknown): string {
  try {
    act();
  } catch (error) {
    if (isFault(error)) return `${error.message} | ${error.cure}`;
    throw error;
  }
  return "no refusal";
}

const measured = (text: string) => {
  const path = join(folder, "m.csv");
  writeFileSync(path, text);
  return readMeasurements(path, { facts, responses, temperatureK: 77 });
};

describe("a resistivity", () => {
  it("is read with its unit and its error in any of the usual forms", () => {
    const cases: [string, number, number][] = [
      ["10.6 uohm cm", 10.6e-8, 0],
      ["10.6(2) uohm cm", 10.6e-8, 0.2e-8],
      ["10.60(25)\u00b5\u03a9cm", 10.6e-8, 0.25e-8],
      ["10.6 +- 0.2 micro-ohm cm", 10.6e-8, 0.2e-8],
      ["1.06e-7 ohm m", 1.06e-7, 0],
      ["106\u00b13 nohm*m", 1.06e-7, 3e-9],
      ["0.3 mohm.cm", 3e-6, 0],
    ];
    for (const [text, value, error] of cases) {
      const read = parseResistivity(text);
      expect({ text, sheet: read.sheet }).toEqual({ text, sheet: false });
      expect(read.value / value).toBeCloseTo(1, 12);
      expect(Math.abs(read.error - error)).toBeLessThan(1e-20);
    }
    expect(parseResistivity("120(5) ohm")).toEqual({ value: 120, error: 5, sheet: true });
    expect(resistivityUnit("kohm/sq")).toEqual({ factor: 1000, sheet: true });
    for (const text of ["10.6", "uohm cm", "-3 uohm cm", "0 ohm m", "10.6 S/cm", "1,06 uohm cm", ""])
      expect(refusal(() => parseResistivity(text))).toMatch(/is no resistivity \| Write a positive number and a unit/);
  });

  it("of a sheet does not fit a crystal, nor one of bulk a layer", () => {
    expect(refusal(() => singleResistivity("120 ohm", crystal))).toContain("a sheet resistance, for a crystal");
    expect(refusal(() => singleResistivity("1 uohm cm", { periodic: 2 }))).toContain(
      "a resistivity of bulk, for a layer",
    );
  });

  it("against temperature: rows in any order, semicolons, comments, straight lines between, ends held", () => {
    const text = "\ufeff# a film\nT_K ; rho [uohm cm]; error\n300;11;0.3\n\n10;1;0.1\n";
    const source = tableResistivity(parseTable(text, "r.csv"), crystal);
    expect(source.rows.map((row) => row.temperature_K)).toEqual([10, 300]);
    expect(source.at(155).value).toBeCloseTo(6e-8, 20);
    expect(source.at(155).error).toBeCloseTo(0.2e-8, 20);
    expect([source.at(0).value, source.at(1000).value]).toEqual([1e-8, 11e-8].map((x) => expect.closeTo(x, 20)));
  });
});

describe("a table that is wrong", () => {
  const head = "temperature_K,resistivity [uohm cm],error";
  const table = (text: string) => () => tableResistivity(parseTable(text, "r.csv"), crystal);
  const cases: [string, string][] = [
    ["", "r.csv: holds no rows"],
    [head, "r.csv: holds no rows"],
    ["10,1,0\n300,11,0", "r.csv, line 1: numbers where the headings should be"],
    [`${head}\n10,1,0\n300,eleven,0`, 'r.csv, line 3, column 2 ("resistivity [uohm cm]"): "eleven" is no number'],
    [
      `${head}\n10,1,0\n300,,0`,
      'r.csv, line 3, column 2 ("resistivity [uohm cm]"): expected a positive number, found ""',
    ],
    [`${head}\n10,-1,0`, "r.csv, line 2, column 2"],
    [`${head}\n10,1,0\n300,11`, "r.csv, line 3: 2 cells, expected 3 as in the headings"],
    [`${head}\n10;1,5;0`, "r.csv, line 2: 4 cells, expected 3"],
    [`${head}\n,1,0`, 'r.csv, line 2, column 1 ("temperature_K"): "" is no temperature in kelvin'],
    [`${head}\n-5,1,0`, '"-5" is no temperature in kelvin'],
    [`${head}\n10,1,0\n10,2,0`, "r.csv: two resistivities at 10 K"],
    ["temperature_K,resistivity\n10,1", 'r.csv, line 1, column 2 ("resistivity"): the unit is missing'],
    ["temperature_K,resistivity [S/cm]\n10,1", '"S/cm" is no unit of resistivity'],
    ["temperature [C],resistivity [ohm m]\n10,1", 'r.csv, line 1, column 1 ("temperature [C]"): not in kelvin'],
    ["T,rho [ohm m],resistivity [ohm m]\n10,1,1", 'columns "rho [ohm m]" and "resistivity [ohm m]" mean the same'],
    ["kelvin,rho [ohm m]\n10,1", 'r.csv, line 1: no column "temperature_K" (found "kelvin", "rho [ohm m]")'],
    [`${head}\n10,"1,0`, "r.csv: is not CSV"],
  ];
  for (const [text, expected] of cases)
    it(`says so: ${expected}`, () => {
      expect(refusal(table(text))).toContain(expected);
    });
});

describe("measured values", () => {
  it("in (hbar/2e) S/cm are half the number in (hbar/e) S/cm; empty cells are not known", () => {
    const [first, second] = measured(
      "label,value [(hbar/2e) S/cm],error,rho [uohm cm]\nA,4000,200,20\nB,3000,,\n".replace(",\n", ",30\n"),
    );
    expect(first).toMatchObject({
      line: 2,
      label: "A",
      response: "spin:hall",
      temperatureK: 77,
      value: 2000,
      error: 100,
    });
    expect(first.resistivity).toBeCloseTo(2e-7, 18);
    expect(second).toMatchObject({ value: 1500, error: Number.NaN, residual: Number.NaN });
  });

  it("as angles, plain or in percent", () => {
    expect(measured("angle [%],angle error\n4.2,0.1\n")[0]).toMatchObject({
      kind: "angle",
      value: expect.closeTo(0.042, 14),
      error: expect.closeTo(0.001, 14),
    });
  });

  it("are refused without a unit (a factor of two), of another kind, or of a response that is not computed", () => {
    expect(refusal(() => measured("value\n1\n"))).toContain('line 1, column 1 ("value"): the unit is missing');
    expect(refusal(() => measured("value [ohm]\n1\n"))).toContain('unit "ohm" does not fit spin');
    expect(refusal(() => measured("value [S/cm],response\n1,x\n"))).toContain(
      'line 2, column 2 ("response"): "x" is not computed here',
    );
    expect(refusal(() => measured("response\nspin:hall\n"))).toContain('no column "value [(hbar/e) S/cm]"');
    expect(refusal(() => measured("value [(hbar/e) S/cm],angle\n1,1\n"))).toContain('both "value" and "angle"');
    expect(refusal(() => measured("value [(hbar/e) S/cm]\n,\n"))).toContain("line 2: 2 cells");
  });
});

describe("judgement of a measured value", () => {
  const curve = { levelEv: [-0.2, -0.1, 0, 0.1, 0.2], value: [80, 90, 100, 120, 150], error: [1, 1, 1, 1, 1] };
  const of = (value: number, error = 2) => judged({ value, error, intrinsic: 100, intrinsicError: 1 }, curve);

  it("agrees within two bars of both; else names the nearest level that gives it; else by how much it is off", () => {
    expect(of(104)).toMatchObject({ verdict: "agrees" });
    expect(of(96)).toMatchObject({ verdict: "agrees" });
    expect(of(130)).toMatchObject({ verdict: "level", shift_eV: expect.closeTo(0.1 + 0.1 / 3, 12) });
    expect(of(91)).toMatchObject({ verdict: "level", shift_eV: expect.closeTo(-0.09, 12) });
    expect(of(154)).toMatchObject({ verdict: "level", shift_eV: 0.2 });
    expect(of(300)).toEqual({ verdict: "larger", shift_eV: null, factor: 2 });
    expect(of(40)).toEqual({ verdict: "smaller", shift_eV: null, factor: 0.5 });
    expect(of(-100)).toMatchObject({ verdict: "sign" });
  });

  it("takes a value without an error as known to 10%", () => {
    expect(of(120, Number.NaN)).toMatchObject({ verdict: "agrees" });
    expect(of(130, Number.NaN)).toMatchObject({ verdict: "level" });
  });
});
