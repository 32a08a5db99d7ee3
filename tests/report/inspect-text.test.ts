// inspect-text.test.ts: does the text of an inspection say everything, stay within its width, and keep hostile titles in their line?
import { describe, expect, it } from "vitest";
import { inspectText } from "../../src/report/inspect-text.js";
import type { GridContents, InspectResult } from "../../src/studies/inspect-result.js";

const contents: GridContents = {
  title: "two\u001b[31m bands\nand a line",
  sha256: "0123456789abcdef0123456789abcdef",
  lattice_A: [
    [1, 0, 0],
    [0, 2, 0],
    [0, 0, 3],
  ],
  periodic: 3,
  cell_size: 6,
  divisions: [4, 6, 8],
  offset: [0.5, 0, 0],
  points: 192,
  reduced: null,
  bytes: 1_536_000,
  bands: 2,
  electrons_per_band: 2,
  moments: [{ name: "spin", directions: 3, kind: "axial", underTimeReversal: "odd", unit: "hbar" }],
  hessian: "free-electron",
  tags: { strain_percent: -0.5 },
  arrays: [
    {
      name: "energy",
      type: "float64",
      axes: ["k", "band"],
      unit: "eV",
      files: 1,
      bytes: 3072,
      largest: 0,
      asymmetry: 0,
      asymmetry_allowed: 0,
    },
  ],
  band_range_eV: [
    [-1, 0.5],
    [0.25, 2],
  ],
  level: {
    reference_eV: 0.3,
    origin: "the Fermi level stated by the grid",
    fermi_eV: 0.3,
    electrons: 2,
    electrons_counted: 2.01,
    crossing_bands: [0, 1],
    gap_eV: null,
  },
  digests_checked: 0,
  patches: [],
};

const result = (more: Partial<InspectResult["grids"][number]> = {}): InspectResult => ({
  format: "tidegauge.inspect/1",
  version: "0",
  job: {},
  grids: [{ directory: "a", sound: true, contents, faults: [], faults_total: 0, health: null, warnings: [], ...more }],
});

describe("the text of an inspection", () => {
  it("says how many points of a symmetry-reduced grid are stored", () => {
    const reduced = { ...contents, reduced: { stored: 30, operations: 16 } };
    expect(inspectText(result({ contents: reduced }), 200)).toMatch(
      /4 x 6 x 8, offset 0\.5 0 0: 192 k points, 30 of them stored with a group of 16 operations, 1\.54 MB/,
    );
  });

  it("is this page for a small sound grid", () => {
    expect(inspectText(result(), 80)).toMatchInlineSnapshot(`
      "a: sound; every number was read
        title              two [31m bands and a line
        cell               crystal, 6 A^3; a1 a2 a3 in A: (1,0,0) (0,2,0) (0,0,3)
        mesh               4 x 6 x 8, offset 0.5 0 0: 192 k points, 1.54 MB
        bands              2, two electrons each (spin-degenerate), from -1 to 2 eV
        level              0.3 eV (the Fermi level stated by the grid), crossed by
                           bands 0 to 1; 2.01 electrons per cell below it, stated are
                           2
        moments            spin (axial, odd under time reversal, hbar)
        second derivative  free electron, hbar^2/m_e on the diagonal (not stored)
        tags               strain_percent = -0.5
        fingerprint        0123456789abcdef

        array   type     axes, slowest first  unit  files     size  largest element  worst asymmetry
        energy  float64  k band               eV        1  3.07 kB

        band  lowest, eV  highest, eV
           0     -1.0000       0.5000
           1      0.2500       2.0000"
    `);
  });

  it("names a gap, and an unusable grid in two sentences", () => {
    const insulator = { ...contents, level: { ...contents.level!, crossing_bands: [], gap_eV: 1.25 } };
    expect(inspectText(result({ contents: insulator }))).toContain("in a gap of 1.25 eV");
    const faults = [{ message: "no manifest", cure: "Write one." }];
    const text = inspectText(result({ contents: null, sound: false, faults, faults_total: 1 }));
    expect(text).toBe("a: cannot be used\n  fault: no manifest. Write one.");
  });

  it("counts the faults that it does not show", () => {
    const faults = [{ message: "m", cure: "c" }];
    const text = inspectText(result({ sound: false, faults, faults_total: 1202 }));
    expect(text.split("\n")[0]).toBe("a: 1,202 faults");
    expect(text).toContain("and 1,201 more faults");
  });

  it("shows the bands about the level when there are many", () => {
    const ranges = Array.from({ length: 60 }, (_, band) => [band, band + 0.5]);
    const many = { ...contents, bands: 60, band_range_eV: ranges, level: { ...contents.level!, reference_eV: 40.2 } };
    const text = inspectText(result({ contents: many }));
    expect(text).toContain("(24 of 60 bands, those about the level)");
    expect(text).toMatch(/^ {2} {2}40 /m);
    expect(text).not.toMatch(/^ {2} {2}20 /m);
  });
});
