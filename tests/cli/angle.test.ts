// angle.test.ts: does `tidegauge angle` give the angle that a pocket calculator gives, and say what measured values are likely to be?
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import type { AngleResult } from "../../src/studies/angle-result.js";
import { runCommand } from "../tooling/command.js";
import { runInProcess } from "../tooling/in-process.js";

const folder = mkdtempSync(join(tmpdir(), "angle-"));
const [metal, layer] = [join(folder, "metal"), join(folder, "layer")];
afterAll(() => rmSync(folder, { recursive: true, force: true }));
beforeAll(async () => {
  await runInProcess(["sample", "metal", "--mesh", "4", "4", "4", "--out", metal, "--quiet"]);
  await runInProcess(["sample", "rashba", "--mesh", "24", "24", "--set", "box=3", "--out", layer, "--quiet"]);
}, 60_000);

const words = (args: readonly (string | number)[]): string[] => {
  return ["angle", ...args.map(String), "--method", "points", "--workers", "1", "--quiet"];
};
const run = (...args: (string | number)[]) => runInProcess(words(args));

async function result(...args: (string | number)[]): Promise<AngleResult> {
  const { status, stdout } = await run(...args, "--json");
  expect(status).toBe(0);
  return JSON.parse(stdout) as AngleResult;
}

function file(name: string, text: string): string {
  const path = join(folder, name);
  writeFileSync(path, text);
  return path;
}

describe("of a crystal", () => {
  it("is twice the number in (hbar/e) S/cm times the resistivity in ohm cm, in whatever unit the response is told", async () => {
    // A response of 2000 (hbar/e) S/cm at 10.6 uohm cm gives 2 * 2000 * 10.6e-6 = 0.0424.
    const window = ["--points", "5", "--shift", "0.1"] as const;
    for (const unit of ["(hbar/e) S/cm", "(hbar/2e) S/m"]) {
      const found = await result(metal, "--resistivity", "10.6(2) uohm cm", "--unit", unit, ...window);
      expect(found.responses.map(({ name }) => name)).toEqual(["spin:hall", "orbital:hall"]);
      for (const { rows, unit: told } of found.responses) {
        const [{ temperature_K, conductivity, angle, angle_error: bar, conductivity_error: own }] = rows;
        const inPerCm = told === "(hbar/e) S/cm" ? conductivity : conductivity / 200;
        const ownPerCm = told === "(hbar/e) S/cm" ? own : own / 200;
        expect(temperature_K).toBe(300);
        expect(angle / (2 * inPerCm * 10.6e-6)).toBeCloseTo(1, 10);
        expect(bar / (2 * Math.hypot(ownPerCm * 10.6e-6, inPerCm * 0.2e-6))).toBeCloseTo(1, 10);
      }
    }
    const charge = await result(metal, "--resistivity", "1 uohm cm", "--response", "charge:xy", ...window);
    expect(charge.responses[0].multiplier).toBe(1);
  });

  it("comes with tau = 1 / (resistivity times the Drude weight), the response and weight being those of `sweep`", async () => {
    const found = await result(metal, "--resistivity", "5e-8 ohm m", "--response", "spin:xy:z", "--points", 5);
    const asked = ["--from", "-0.2", "--to", "0.2", "--points", "5", "--temperature", "300", "--response", "spin:xy:z"];
    const { stdout } = await runInProcess([
      "sweep",
      metal,
      ...asked,
      "--method",
      "points",
      "--workers",
      "1",
      "--json",
      "--quiet",
    ]);
    const curves = JSON.parse(stdout) as CurvesResult;
    const weight = (curves.drude ?? []).reduce((sum, { value }) => sum + value[0][2] / 3, 0);
    const [row] = found.scattering;
    expect(found.responses[0].rows[0].conductivity).toBe(curves.responses[0].value[0][2]);
    expect(row.drude / weight).toBeCloseTo(1, 12);
    expect(row.tau_fs * 1e-15 * weight * 5e-8).toBeCloseTo(1, 12);
    expect(row.hbar_over_tau_eV * row.tau_fs).toBeCloseTo(0.6582119569, 9);
    // Some angstroms per femtosecond: Fermi velocities of metals are about 1e6 m/s, which is 1 nm/fs.
    expect(row.mean_free_path_nm / row.tau_fs).toBeGreaterThan(0.1);
    expect(row.mean_free_path_nm / row.tau_fs).toBeLessThan(3);
  });

  it("against temperature follows the file, and measured values are judged and written beside the intrinsic ones", async () => {
    const resistivities = file("r.csv", "temperature_K,resistivity [uohm cm]\n10,0.5\n150,1.2\n300,2.4\n");
    const one = await result(metal, "--resistivity", "1 uohm cm", "--temperature", 150, "--points", 5);
    const { conductivity } = one.responses[0].rows[0];
    const rows = [1, 1.02, 30, -30].map((part) => `${conductivity * part},${Math.abs(conductivity) / 50},150`);
    const values = file("m.csv", `value [(hbar/e) S/cm],error,temperature_K\n${rows.join("\n")}\n`);
    const out = join(folder, "out");
    const asked = [metal, "--resistivity-file", resistivities, "--measured", values, "--points", 5, "--out", out];
    const found = await result(...asked);
    expect(found.responses[0].rows.map((row) => [row.temperature_K, row.resistivity])).toEqual([
      [10, expect.closeTo(0.5e-8, 20)],
      [150, expect.closeTo(1.2e-8, 20)],
      [300, expect.closeTo(2.4e-8, 20)],
    ]);
    expect(found.notes).toContain("below 20 K the intrinsic response is taken as at 20 K");
    expect(found.measured.map(({ verdict }) => verdict).slice(0, 3)).toEqual(["agrees", "agrees", "larger"]);
    expect(["sign", "larger"]).toContain(found.measured[3].verdict);
    expect(readdirSync(out).sort()).toEqual(["angle.csv", "angle.json", "angle.svg", "measured.csv"]);
    expect(readFileSync(join(out, "angle.csv"), "utf8").split("\n")).toHaveLength(1 + 2 * 3 + 1);
    expect(readFileSync(join(out, "angle.svg"), "utf8")).toMatch(/^<svg [\s\S]*<\/svg>\n$/);
    // The result is its own job.
    const again = await result(metal, "--job", join(out, "angle.json"));
    expect(again).toEqual(found);
    const { stdout } = await runCommand(words(asked));
    expect(stdout).toMatch(/At 300 K the intrinsic spin Hall angle is /);
    expect(stdout).toMatch(/look for impurity scattering/);
    expect(stdout).toContain("intrinsic only, rigid band");
  });

  it("of measured angles fits a series: constant angle is told from constant conductivity", async () => {
    const rhos = [5, 10, 20, 40];
    const angles = file("a.csv", `angle,resistivity [uohm cm]\n${rhos.map((rho) => `0.02,${rho}`).join("\n")}\n`);
    const sigmas = file(
      "s.csv",
      `value [(hbar/e) S/cm],resistivity [uohm cm]\n${rhos.map((rho) => `500,${rho}`).join("\n")}\n`,
    );
    const of = (path: string) => result(metal, "--resistivity", "5 uohm cm", "--measured", path, "--points", 5);
    const [skew] = (await of(angles)).series;
    expect(skew.constant).toBe("angle");
    expect(skew.angle).toBeCloseTo(0.02, 12);
    expect(skew.scaling?.skew_angle).toBeCloseTo(0.02, 10);
    expect(Math.abs(skew.scaling?.intrinsic ?? 1)).toBeLessThan(1e-6);
    const [still] = (await of(sigmas)).series;
    expect(still.constant).toBe("conductivity");
    expect(still.scaling?.intrinsic).toBeCloseTo(500, 8);
  });
});

describe("of a layer", () => {
  it("takes a sheet resistance: theta = 2 sigma (e^2/h) R with sigma in e/2pi", async () => {
    const asked = ["--response", "spin:xy:z", "--temperature", "600", "--points", "5", "--shift", "0.1"];
    const found = await result(layer, "--resistivity", "1.5 kohm", ...asked);
    expect(found.resistivity_unit).toBe("ohm");
    const [{ conductivity, angle }] = found.responses[0].rows;
    expect(angle / (2 * conductivity * (1500 / 25812.80745))).toBeCloseTo(1, 8);
    const bulk = await run(layer, "--resistivity", "10 uohm cm", ...asked);
    expect(bulk).toMatchObject({ status: 2, stdout: "" });
    expect(bulk.stderr).toContain("Give the sheet resistance of one layer");
  });
});

describe("of an insulator", () => {
  it("says that a resistivity tells nothing of scattering in a gap", async () => {
    const grid = join(folder, "insulator");
    await runInProcess(["sample", "haldane", "--mesh", "12", "12", "--out", grid, "--quiet"]);
    const { status, stdout } = await run(grid, "--resistivity", "30 kohm", "--response", "charge:xy", "--points", "5");
    expect(status).toBe(0);
    expect(stdout).toContain("Caution: the Drude weight is next to nothing");
    expect(stdout).toMatch(/charge:xy .* n\/a$/m);
  });
});

describe("wrong usage and data", () => {
  it("end with two lines and status 2 or 3, before anything is computed", async () => {
    const bad = file("bad.csv", "temperature_K,resistivity [uohm cm]\n10,1\n300,x\n");
    const cases: [number, string, string[]][] = [
      [2, "no resistivity is given", []],
      [2, "is no resistivity", ["--resistivity", "ten"]],
      [
        2,
        "both --resistivity and --resistivity-file are given",
        ["--resistivity", "1 ohm m", "--resistivity-file", bad],
      ],
      [3, 'bad.csv, line 3, column 2 ("resistivity [uohm cm]"): "x" is no number', ["--resistivity-file", bad]],
      [2, "--measured nothing.csv cannot be read", ["--resistivity", "1 ohm m", "--measured", "nothing.csv"]],
      [2, "does not hold level shifts", ["--resistivity", "1 ohm m", "--from", "-0.1"]],
      [2, "--shift", ["--resistivity", "1 ohm m", "--shift", "x"]],
    ];
    for (const [status, told, args] of cases) {
      const ended = await run(metal, ...args);
      expect({ told, status: ended.status, stdout: ended.stdout }).toEqual({ told, status, stdout: "" });
      expect(ended.stderr).toContain(told);
      expect(ended.stderr.trimEnd().split("\n")).toHaveLength(2);
    }
  });
});
