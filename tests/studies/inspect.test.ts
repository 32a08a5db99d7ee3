// inspect.test.ts: does an inspection find what is known to be in a grid, every planted fault, and nothing else?
import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { buildSample } from "../../src/samples/catalogue.js";
import { reducedPoints } from "../../src/samples/symmetry.js";
import { writeSample } from "../../src/samples/write.js";
import { inspect, inspectOptions } from "../../src/studies/inspect.js";

const root = mkdtempSync(join(tmpdir(), "tidegauge-inspect-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));

const options = inspectOptions.parse({});
const haldane = join(root, "haldane");
writeSample(buildSample("haldane", { M: "0.1" }), {
  directory: haldane,
  divisions: [12, 12, 1],
  layout: { sha256: true },
});
const crystal = join(root, "crystal");
writeSample(buildSample("random", { bands: "4" }), {
  directory: crystal,
  divisions: [4, 5, 7],
  hessian: false,
  layout: { arrays: { velocity: { type: "complex64" }, "moments.spin": { unit: "half-hbar" } } },
});

let copies = 0;
/** A copy of the Haldane grid in which the numbers of one file are changed. */
function spoilt(file: string, change: (values: Float64Array) => void): string {
  const directory = join(root, `spoilt-${copies++}`);
  cpSync(haldane, directory, { recursive: true });
  const bytes = readFileSync(join(directory, file));
  const values = new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
  change(values);
  writeFileSync(join(directory, file), new Uint8Array(values.buffer));
  return directory;
}

const only = (directory: string, given = options) => inspect([directory], given).grids[0]!;

describe("a sound grid", () => {
  it("shows the gap and the corner of the band that Haldane's formula gives at K", () => {
    // F. D. M. Haldane, Phys. Rev. Lett. 61, 2015 (1988): at K, K' E = +-|M -+ 3 sqrt(3) t2 sin(phi)|; at the centre +-sqrt(9 t1^2 + M^2)
    const { contents, sound, faults_total } = only(haldane);
    expect({ sound, faults_total }).toEqual({ sound: true, faults_total: 0 });
    const half = 3 * Math.sqrt(3) * 0.1 - 0.1;
    expect(contents?.level?.gap_eV).toBeCloseTo(2 * half, 12);
    expect(contents!.band_range_eV[0]![1]).toBeCloseTo(-half, 12);
    expect(contents!.band_range_eV[1]![1]).toBeCloseTo(Math.sqrt(9 + 0.01), 12);
    expect(contents?.level).toMatchObject({ electrons_counted: 1, crossing_bands: [] });
    expect(contents?.cell_size).toBeCloseTo((3 * Math.sqrt(3)) / 2, 12); // hexagon of side 1
  });

  it("counts the bytes that its shapes say", () => {
    const { contents } = only(haldane);
    const bytes = Object.fromEntries(contents!.arrays.map((array) => [array.name, array.bytes]));
    expect(bytes).toEqual({ energy: 144 * 2 * 8, velocity: 144 * 3 * 4 * 16, hessian: 144 * 6 * 4 * 16 });
  });

  it("names types, units and moments as the manifest gives them, and what is worth knowing", () => {
    const { contents, warnings, sound } = only(crystal);
    expect(sound).toBe(true);
    const units = contents!.arrays.map(({ name, type, unit }) => [name, type, unit]);
    expect(units).toEqual([
      ["energy", "float64", "eV"],
      ["velocity", "complex64", "eV*angstrom"],
      ["moments.spin", "complex128", "half-hbar"],
      ["moments.orbital", "complex128", "hbar"],
    ]);
    // A spin of one half has no matrix element above one half of hbar, whatever the unit of the file.
    expect(contents!.arrays[2]!.largest).toBeLessThanOrEqual(0.5 + 1e-12);
    expect(warnings.join("\n")).toMatch(/32-bit numbers in velocity/);
    expect(warnings.join("\n")).toMatch(/no second derivative/);
    expect(warnings.join("\n")).toMatch(/4 x 5 x 7 contains no coarser regular mesh/);
  });

  it("checks digests only when asked", () => {
    expect(only(haldane).contents?.digests_checked).toBe(0);
    expect(only(haldane, { digests: true }).contents?.digests_checked).toBe(3);
  });
});

describe("a broken grid", () => {
  it("is reported with array, k point and band for each kind of fault", () => {
    const notFinite = only(spoilt("energy.f64", (values) => values.fill(Number.NaN, 7, 8)));
    expect(notFinite).toMatchObject({ sound: false, faults_total: 1 });
    expect(notFinite.faults[0]?.message).toMatch(/energy.*not finite.*k point 3 \(0, 3, 0\).*band 1/);
    expect(notFinite.contents?.level).toBeNull();

    const falling = only(spoilt("energy.f64", (values) => values.fill(-9, 2 * 17 + 1, 2 * 18)));
    expect(falling.faults[0]?.message).toMatch(/energy.*not ascending.*k point 17 \(1, 5, 0\)/);

    // element (0, 1) of v_y at k point 5
    const skew = only(spoilt("velocity.c128", (values) => values.fill(3, 5 * 24 + 8 + 2, 5 * 24 + 8 + 3)));
    expect(skew.faults[0]?.message).toMatch(/velocity y is not Hermitian at k point 5/);
    expect(skew.contents!.arrays[1]!.asymmetry).toBeGreaterThan(0.1);
  });

  it("keeps twenty faults and counts them all", () => {
    const { faults, faults_total } = only(spoilt("energy.f64", (values) => values.fill(Number.NaN)));
    expect([faults.length, faults_total]).toEqual([20, 144]);
  });

  it("fails the digests when one bit has changed, though the numbers are sound", () => {
    const changed = spoilt("energy.f64", (values) => {
      values[0]! -= 1e-12;
    });
    expect(only(changed).sound).toBe(true);
    expect(only(changed, { digests: true }).faults[0]?.message).toMatch(/energy.*SHA-256/);
  });

  it("of a symmetry-reduced grid: what is stored, counted as the whole mesh, and healthy", () => {
    const model = buildSample("haldane", { M: "0.1" });
    const directory = join(root, "reduced");
    const divisions = [12, 12, 1] as const;
    const reduced = reducedPoints(model, { ...model, divisions, offset: [0, 0, 0] });
    writeSample(model, { directory, divisions, reduced });
    const [a, b] = [only(directory), only(haldane)];
    expect(a.contents).toMatchObject({ points: 144, reduced: { stored: reduced.points.length, operations: 12 } });
    expect(b.contents?.reduced).toBeNull();
    expect(a.contents?.level?.electrons_counted).toBeCloseTo(b.contents?.level?.electrons_counted ?? 0, 12);
    expect(a.contents?.band_range_eV.flat()).toEqual(
      b.contents?.band_range_eV.flat().map((energy) => expect.closeTo(energy, 12)),
    );
    expect(a.health?.findings).toEqual(b.health?.findings);
  });

  it("that cannot be opened does not hide the next grid", () => {
    const { grids } = inspect([join(root, "nothing"), haldane], options);
    expect(grids.map(({ sound, contents }) => [sound, contents !== null])).toEqual([
      [false, false],
      [true, true],
    ]);
  });

  it("is told when the stated level does not hold the stated electrons", () => {
    const directory = spoilt("energy.f64", () => {});
    const path = join(directory, "bandgrid.json");
    const manifest = JSON.parse(readFileSync(path, "utf8"));
    writeFileSync(path, JSON.stringify({ ...manifest, level: { unit: "eV", fermi: 0, electrons: 1.5 } }));
    expect(only(directory).health?.findings).toMatchObject([
      {
        id: "level",
        message: expect.stringMatching(/disagree/),
        evidence: expect.stringMatching(/holds 1 electrons per cell.*stated are 1\.5/),
      },
    ]);
    writeFileSync(path, JSON.stringify({ ...manifest, level: { unit: "hartree", fermi: 5 } }));
    expect(only(directory).warnings.join("\n")).toMatch(/outside all bands/);
  });
});
