// converge.test.ts: does the command say what it found, in words, files and exit status, and refuse what it cannot compare?
import { existsSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { beforeAll, describe, expect, it } from "vitest";
import type { ConvergeResult } from "../../src/studies/converge-result.js";
import { scratchDirectory } from "../grid/make.js";
import { runInProcess } from "../tooling/in-process.js";

const place = scratchDirectory();
const grid = (name: string): string => join(place, name);
const window = ["--from", "-1", "--to", "1", "--points", "21", "--workers", "1", "--temperature", "600"];
const asked = ["--response", "charge:xy", ...window];
const run = (...words: string[]) => runInProcess(["converge", ...words]);

beforeAll(async () => {
  for (const [name, ...words] of [
    ["h12", "haldane", "--mesh", "12", "12"],
    ["h20", "haldane", "--mesh", "20", "20"],
    ["h13", "haldane", "--mesh", "13", "13"],
    ["other", "kane-mele", "--mesh", "10", "10"],
    ["none", "sp-square", "--mesh", "12", "12", "--set", "spin=explicit"],
  ])
    expect(await runInProcess(["sample", ...words, "--out", grid(name)])).toMatchObject({ status: 0 });
});

describe("one grid", () => {
  it("answers in words first, and writes three files", async () => {
    const out = join(place, "out");
    const { status, stdout } = await run(grid("h20"), ...asked, "--out", out);
    expect(status).toBe(0);
    expect(stdout).toMatch(/^Is 20\^2 dense enough for 1% of the largest value\? With refinement: yes/);
    expect(stdout).toContain("intrinsic only, rigid band");
    const result = JSON.parse(readFileSync(join(out, "converge.json"), "utf8")) as ConvergeResult;
    expect(result).toMatchObject({ format: "tidegauge.converge/1", job: { study: "converge" }, demanded: false });
    expect(result.meshes.map(({ divisions, shifts }) => [divisions[0], shifts])).toEqual([
      [20, 1],
      [10, 4],
      [5, 16],
      [4, 25],
    ]);
    const csv = readFileSync(join(out, "converge.csv"), "utf8").split("\n");
    expect(csv).toHaveLength(1 + 4 * 21 + 1);
    expect(readFileSync(join(out, "converge.svg"), "utf8")).toMatch(/^<svg [\s\S]*<\/svg>\n$/);
    // The job that the result holds runs again to the same bytes.
    const again = await run(grid("h20"), "--job", join(out, "converge.json"), "--workers", "1", "--json");
    expect(JSON.parse(again.stdout)).toEqual(result);
  });

  it("ends with 4 where a demanded accuracy is not reached, and says where; with 0 where it is", async () => {
    const strict = await run(grid("h12"), ...asked, "--method", "points", "--within", "0.1%");
    expect(strict.status).toBe(4);
    expect(strict.stderr).toMatch(/0\.1% is not reached on 12\^2: charge:xy at 600 K, -?\d/);
    expect(await run(grid("h20"), ...asked, "--within", "5%")).toMatchObject({ status: 0, stderr: "" });
  });

  it("calls zero what is zero by symmetry, and demands nothing of it", async () => {
    const { status, stdout } = await run(grid("none"), "--response", "spin:xy:z", ...window, "--within", "1%");
    expect(status).toBe(0);
    expect(stdout).toContain("spin:xy:z at 600 K: zero for all purposes");
  });

  it("says that nothing tells where the mesh contains no other and nothing is refined", async () => {
    const { status, stdout } = await run(grid("h13"), ...asked, "--method", "points", "--within", "1%");
    expect(status).toBe(4);
    expect(stdout).toContain("nothing tells between -1 and 1 eV");
  });
});

describe("a family", () => {
  it("is judged by its densest grid", async () => {
    const { stdout } = await run(grid("h12"), grid("h20"), ...asked, "--json");
    const result = JSON.parse(stdout) as ConvergeResult;
    expect(result.meshes.map(({ divisions }) => divisions[0])).toEqual([20, 12]);
    expect(result.grids).toHaveLength(2);
    const [dense, coarse] = result.responses[0].curves[0].meshes;
    expect(Math.max(...coarse.plain_off)).toBeGreaterThan(Math.max(...dense.plain_off));
  });

  it("refuses another lattice, and the same mesh twice", async () => {
    const lattice = await run(grid("h12"), grid("other"), ...asked);
    expect(lattice).toMatchObject({ status: 3 });
    expect(lattice.stderr).toContain("not one material on two meshes: ");
    expect(await run(grid("h12"), grid("h13"), grid("h20"), grid("none"), ...asked)).toMatchObject({ status: 3 });
  });
});

describe("wrong usage", () => {
  it("names the option", async () => {
    const outside = await run(grid("h12"), ...asked, "--level", "3");
    expect(outside).toMatchObject({ status: 2 });
    expect(outside.stderr).toContain("--level 3 lies outside the window");
    expect((await run(grid("h12"), ...asked, "--method", "cells")).status).toBe(2);
    expect(existsSync(join(place, "nothing"))).toBe(false);
  });
});
