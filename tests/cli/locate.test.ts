// locate.test.ts: does `tidegauge locate` answer as its help says: words, JSON, files, and refusals that name the option?
import { mkdtempSync, readdirSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { LocateResult } from "../../src/studies/locate-result.js";
import { runCommand } from "../tooling/command.js";

const root = mkdtempSync(join(tmpdir(), "locate-test-"));
const grid = join(root, "layer");

beforeAll(async () => {
  expect((await runCommand(["sample", "kane-mele", "--mesh", "6", "6", "--out", grid])).status).toBe(0);
}, 60_000);

afterAll(() => rmSync(root, { recursive: true, force: true }));

const rowsOf = (path: string): string[][] =>
  readFileSync(path, "utf8")
    .trim()
    .split("\n")
    .map((line) => line.split(","));

describe("tidegauge locate", () => {
  it("tells the answer in words and writes every file it names, equal for one worker and for two", async () => {
    // A rough refinement: what is tested here is the same at any accuracy.
    const rough = ["--accuracy", "50%", "--samples", "1000"];
    const place = ["--level", "0.3", "--map-points", "9", "--path", "0 0 / 0.5 0", "--cells", "5"];
    const words = ["locate", grid, ...place, ...rough];
    const [one, two] = [join(root, "one"), join(root, "two")];
    const run = await runCommand([...words, "--workers", "1", "--out", one]);
    expect(run.status).toBe(0);
    expect(run.stdout).toMatch(/of the zone makes 80% of/);
    expect(run.stdout).toMatch(/spin:xy:z is .* e\/2pi/);
    expect((await runCommand([...words, "--workers", "2", "--out", two])).status).toBe(0);
    const files = readdirSync(one);
    for (const name of files) {
      expect(run.stderr).toContain(name);
      expect(readFileSync(join(two, name), "utf8"), name).toBe(readFileSync(join(one, name), "utf8"));
    }
    expect(files.filter((name) => name.endsWith(".svg"))).toEqual(["locate-map.svg", "locate-path.svg"]);
    const result = JSON.parse(readFileSync(join(one, "locate.json"), "utf8")) as LocateResult;
    expect(result).toMatchObject({ format: "tidegauge.locate/1", level_eV: 0.3, temperature_K: 300 });
    expect(rowsOf(join(one, "locate-cells.csv"))).toHaveLength(1 + 5 * result.responses.length);
    expect(rowsOf(join(one, "locate-map.csv"))).toHaveLength(1 + 81);
    const pairs = rowsOf(join(one, "locate-pairs.csv")).filter(([name]) => name === "spin:xy:z");
    const sum = pairs.reduce((total, row) => total + Number(row[5]), 0);
    const spin = result.responses.find(({ name }) => name === "spin:xy:z");
    expect(sum).toBeCloseTo(spin?.value ?? Number.NaN, 12);
    // The job that the result embeds gives the result again.
    const again = await runCommand(["locate", grid, "--job", join(one, "locate.json"), "--json"]);
    expect(JSON.parse(again.stdout)).toEqual(result);
  }, 120_000);

  it("refuses what is no plane, no path and no single temperature, with status 2", async () => {
    const refused: readonly (readonly [string[], RegExp])[] = [
      [["--plane", "0 0 0 / 1 0 0 / 2 0 0"], /--plane .* is no plane/],
      [["--plane", "0 0 / x / 1 1"], /--plane .*"x" is no k point/],
      [["--path", "0 0"], /--path .* leads nowhere/],
      [["--temperature", "0", "300"], /--temperature .*one temperature/],
      [["--from", "0"], /--from/],
    ];
    for (const [words, message] of refused) {
      const { status, stdout, stderr } = await runCommand(["locate", grid, ...words]);
      expect({ words, status, stdout }).toEqual({ words, status: 2, stdout: "" });
      expect(stderr).toMatch(message);
    }
  }, 60_000);
});
