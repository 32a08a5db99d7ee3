// csv.test.ts: curves.csv has the promised columns, keeps every number and loads where it is said to load.
import { describe, expect, it } from "vitest";
import { curvesColumns, curvesCsv } from "../../src/report/csv.js";
import { pythonWith, runPython } from "./python.js";
import { sweep } from "./sweep.js";

const python = pythonWith("numpy") ?? "";
const run = (script: string, input: string): unknown => JSON.parse(runPython(python, script, input));

describe("curvesCsv", () => {
  const result = sweep({ responses: ["spin:xy:z", "charge:xy"], temperatureK: [0, 300], levels: 41 });
  const text = curvesCsv(result);
  const rows = text.split("\n").map((line) => line.split(","));

  it("has the promised columns, the unit in the heading", () => {
    expect(rows[0]).toEqual([
      "temperature_K",
      "level_eV",
      "absolute_eV",
      "electrons_per_cell",
      "doping_per_cell",
      "doping_per_cm3",
      "states_per_eV",
      "spin:xy:z [(hbar/e) S/cm]",
      "spin:xy:z error",
      "charge:xy [S/cm]",
      "charge:xy error",
    ]);
    expect(curvesColumns({ ...result, doping_density_unit: "per_cm2" })[5]).toBe("doping_per_cm2");
  });

  it("has the Mott integrals after the responses, and last the Drude weight, where the result holds them", () => {
    const [spin, charge] = result.responses;
    const table = (value: number) => result.temperature_K.map(() => result.level_eV.map(() => value));
    const full = {
      ...result,
      responses: [spin, { ...charge, thermal: { unit: "A/(m K)", value: table(3), error: table(4) } }],
      drude: [{ name: "drude:xx", unit: "(S/m)/s", value: table(5), error: table(6) }],
    };
    expect(curvesColumns(full).slice(11)).toEqual([
      "charge:xy thermal [A/(m K)]",
      "charge:xy thermal error",
      "drude:xx [(S/m)/s]",
      "drude:xx error",
    ]);
    expect(curvesCsv(full).split("\n")[30].split(",").slice(11)).toEqual(["3", "4", "5", "6"]);
  });

  it("has one row per temperature and level, temperature outermost, and reads back to the same doubles", () => {
    expect(rows).toHaveLength(1 + 2 * 41 + 1);
    for (const [t, e] of [
      [0, 0],
      [0, 17],
      [1, 3],
      [1, 30],
    ]) {
      const row = rows[1 + 41 * t + e].map(Number);
      expect(row[0]).toBe(result.temperature_K[t]);
      expect(row[1]).toBe(result.level_eV[e]);
      expect(row[2]).toBeCloseTo(result.reference_eV + result.level_eV[e], 11);
      expect(row[5]).toBe(result.doping_density[t][e]);
      expect(row[7]).toBe(result.responses[0].value[t][e]);
      expect(row[10]).toBe(result.responses[1].error[t][e]);
    }
  });

  it("writes NaN where a bar could not be estimated, never an empty cell, and no comment lines", () => {
    expect(rows[41][8]).toBe("NaN");
    expect(text).not.toMatch(/,,|,\n/);
    expect(text).not.toContain("#");
  });

  it("keeps a heading from being a formula, a second row or a quotation that never ends", () => {
    const odd = sweep({ levels: 2 });
    odd.responses[0].name = '=HYPERLINK("x"),\nnext';
    const [first] = curvesCsv(odd).split("\n");
    expect(first.endsWith('"HYPERLINK(""x""), next [(hbar/e) S/cm]","HYPERLINK(""x""), next error"')).toBe(true);
  });

  it.skipIf(python === "")("loads with numpy.genfromtxt by name and with numpy.loadtxt", () => {
    const script = `
import sys, io, json, numpy as np
text = sys.stdin.read()
d = np.genfromtxt(io.StringIO(text), names=True, delimiter=',')
p = np.loadtxt(io.StringIO(text), delimiter=',', skiprows=1)
print(json.dumps([list(d.dtype.names), len(d), float(d['level_eV'][40]), repr(float(d['spinxyz_hbare_Scm'][7])),
  int(np.isnan(d['spinxyz_error']).sum()), list(p.shape), int(np.isnan(p).sum())]))`;
    const missing = result.responses[0].error.flat().filter(Number.isNaN).length;
    const [names, length, level, value, nans, shape, allNans] = run(script, text) as unknown[];
    expect(new Set(names as string[]).size).toBe(11);
    expect([length, level, Number(value), nans]).toEqual([82, 2, result.responses[0].value[0][7], missing]);
    expect([shape, allNans]).toEqual([[82, 11], missing]);
  });

  it.skipIf(python === "")("loads with Python's csv module", () => {
    const script = `
import sys, csv, json
r = list(csv.DictReader(sys.stdin))
print(json.dumps([len(r), r[5]['spin:xy:z [(hbar/e) S/cm]'], str(float(r[40]['spin:xy:z error']))]))`;
    expect(run(script, text)).toEqual([82, String(result.responses[0].value[0][5]), "nan"]);
  });
});
