// grids.test.ts: do `sample` and `inspect` work together as a person would use them, with the agreed files and statuses?
import { existsSync, readFileSync, rmSync, truncateSync } from "node:fs";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { freshDirectory, runCommand } from "../tooling/command.js";
import { runInProcess } from "../tooling/in-process.js";

const root = freshDirectory();
afterAll(() => rmSync(root, { recursive: true, force: true }));
const at = (name: string): string => join(root, name);

describe("tidegauge sample", () => {
  it("lists every model with its parameters, as text and as JSON", async () => {
    const text = await runCommand(["sample", "--list"]);
    expect(text).toMatchObject({ status: 0, stderr: "" });
    const json = JSON.parse((await runCommand(["sample", "--list", "--json"])).stdout);
    expect(json.samples.length).toBeGreaterThan(5);
    for (const { name, source, parameters } of json.samples) {
      expect(text.stdout).toMatch(new RegExp(`^${name}: `, "m"));
      expect(source.length).toBeGreaterThan(10);
      for (const parameter of parameters) expect(text.stdout).toContain(`\n  ${parameter.name} `);
    }
  });

  it("writes a model on the mesh that is asked for", async () => {
    const args = [
      "sample",
      "haldane",
      "--mesh",
      "6",
      "4",
      "--offset",
      "0.5",
      "0.25",
      "--set",
      "M=0.3",
      "t2=0",
      "--out",
      at("h-2"),
    ];
    const { status, stderr, stdout } = await runCommand([...args, "--json"]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
    expect(JSON.parse(stdout)).toMatchObject({ points: 24, bands: 2, divisions: [6, 4, 1], offset: [0.5, 0.25, 0] });
    const manifest = JSON.parse(readFileSync(join(at("h-2"), "bandgrid.json"), "utf8"));
    expect(manifest.mesh).toEqual({ divisions: [6, 4, 1], offset: [0.5, 0.25, 0] });
    expect(manifest.title).toContain("M = 0.3");
  });

  it("refuses what is wrong in two lines that say what would be right", async () => {
    const cases: [string[], RegExp][] = [
      [["haldan", "--out", at("x")], /no sample "haldan".*\n.*"haldane"/],
      [["haldane", "--set", "N=1", "--out", at("x")], /no parameter "N"/],
      [["haldane", "--set", "M", "--out", at("x")], /--set M: expected NAME=VALUE/],
      [["haldane", "--set", "M=big", "--out", at("x")], /M of sample haldane is "big", expected a finite number/],
      [["haldane", "--mesh", "0", "4", "--out", at("x")], /--mesh 0: expected a whole number of at least 1/],
      [["metal", "--mesh", "4", "4", "--out", at("x")], /--mesh 4 4: metal is a crystal/],
      [["haldane", "--offset", "1", "0", "--out", at("x")], /--offset 1: expected numbers from 0 to below 1/],
      [["haldane"], /--out is missing/],
      [[], /no model is named/],
    ];
    for (const [args, message] of cases) {
      const { status, stdout, stderr } = await runInProcess(["sample", ...args]);
      expect({ args, status, stdout }).toEqual({ args, status: 2, stdout: "" });
      expect(stderr).toMatch(/^tidegauge: .*\n {2}.*\n$/);
      expect(stderr).toMatch(message);
    }
    expect(existsSync(at("x"))).toBe(false);
  });
});

describe("tidegauge inspect", () => {
  it("takes patterns, in natural order, and prints one JSON document", async () => {
    await runCommand(["sample", "haldane", "--mesh", "2", "2", "--out", at("h-10")]);
    const { status, stdout } = await runCommand(["inspect", at("h-*"), at("h-2"), "--json"]);
    expect(status).toBe(0);
    const { grids } = JSON.parse(stdout);
    expect(grids.map((grid: { directory: string }) => grid.directory)).toEqual([at("h-2"), at("h-10")]);
  });

  it("ends with 3 when a file is cut short, and says which", async () => {
    await runCommand(["sample", "haldane", "--mesh", "2", "2", "--out", at("cut")]);
    truncateSync(join(at("cut"), "velocity.c128"), 100);
    const { status, stdout, stderr } = await runCommand(["inspect", at("cut"), at("h-2")]);
    expect(status).toBe(3);
    expect(stderr).toMatch(/^tidegauge: .*cut: .*velocity.*100 bytes.*\n {2}.*\n$/);
    expect(stdout).toMatch(/velocity.*100 bytes/s);
    expect(stdout).toContain(`${at("h-2")}: sound`);
  });

  it("writes inspect.json into --out and is silent about it with --quiet", async () => {
    const { status, stderr } = await runCommand(["inspect", at("h-2"), "--out", at("report"), "--quiet"]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
    expect(JSON.parse(readFileSync(join(at("report"), "inspect.json"), "utf8")).format).toBe("tidegauge.inspect/1");
  });

  it("ends with 2 for a pattern without a match and 3 for a name without a grid", async () => {
    expect(await runCommand(["inspect", at("none-*")])).toMatchObject({ status: 2, stdout: "" });
    expect(await runCommand(["inspect", at("none")])).toMatchObject({
      status: 3,
      stderr: expect.stringContaining("no such file"),
    });
  });

  it("keeps a hostile title from reaching the terminal's controls", async () => {
    const path = join(at("h-10"), "bandgrid.json");
    const manifest = JSON.parse(readFileSync(path, "utf8"));
    const { writeFileSync } = await import("node:fs");
    writeFileSync(
      path,
      JSON.stringify({ ...manifest, title: "a\u001b]0;b\u0007\u009bc", tags: { "x\u001b": "y\u001b" } }),
    );
    for (const args of [
      ["inspect", at("h-10")],
      ["inspect", at("h-10"), "--json"],
    ]) {
      const { stdout } = await runCommand(args);
      expect(stdout).not.toMatch(/(?!\n)\p{Cc}/u);
    }
  });
});
