// bad-input.test.ts: does bad data end `inspect` and `sweep` with status 3, one line and a cure, and touch no earlier result?
import { execFileSync } from "node:child_process";
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { faultCases } from "../grid/fault-cases.js";
import { layDown } from "../grid/handmade.js";
import { type Finished, runCommand } from "../tooling/command.js";
import { runInProcess } from "../tooling/in-process.js";

const root = mkdtempSync(join(tmpdir(), "tidegauge-bad-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));
let count = 0;
const fresh = (): string => join(root, String(count++));

const resultFiles = ["curves.csv", "curves.json", "curves.svg", "inspect.json"];

/** A directory with earlier results, each holding its own name. */
function earlierResults(): string {
  const directory = fresh();
  mkdirSync(directory);
  for (const name of resultFiles) writeFileSync(join(directory, name), name);
  return directory;
}

function expectUntouched(directory: string): void {
  expect(readdirSync(directory).sort()).toEqual(resultFiles);
  for (const name of resultFiles) expect(readFileSync(join(directory, name), "utf8")).toBe(name);
}

/** Status 3; what and where on one line, the cure on a second, no control character and no trace. */
function expectRefusal({ status, stderr }: Finished): void {
  expect(status, stderr).toBe(3);
  expect(stderr).toMatch(/^tidegauge: [^\n]+\n {2}[^\n]+[.?]\n$/);
  expect(stderr).not.toMatch(/(?!\n)\p{Cc}|\bat .*\.[jt]s:\d|an error of the program/u);
}

const commands: readonly (readonly string[])[] = [
  ["inspect", "GRID"],
  ["inspect", "GRID", "--json"],
  ["sweep", "GRID", "--workers", "1", "--points", "11", "--method", "cells"],
  ["sweep", "GRID", "--workers", "1", "--points", "11", "--method", "points", "--json"],
];

async function expectRefusedEverywhere(grid: string, message?: RegExp): Promise<void> {
  for (const words of commands) {
    const args = words.map((word) => (word === "GRID" ? grid : word));
    const out = earlierResults();
    const refused = await runInProcess([...args, "--out", out]);
    expectRefusal(refused);
    if (message !== undefined) expect(refused.stderr).toMatch(message);
    if (words[0] === "sweep") expect(refused.stdout).toBe("");
    expectUntouched(out);
    const nowhere = fresh();
    await runInProcess([...args, "--out", nowhere]);
    expect(() => readdirSync(nowhere)).toThrow();
  }
}

describe("each kind of bad grid", () => {
  it("is one of at least 80", () => {
    expect(new Set(faultCases.map(([name]) => name)).size).toBeGreaterThanOrEqual(80);
  });

  it.each(faultCases)("%s", async (_, spoil) => {
    await expectRefusedEverywhere(layDown(spoil));
  });

  it("a sound grid is none of them", async () => {
    const grid = layDown();
    for (const words of commands) {
      const done = await runInProcess(words.map((word) => (word === "GRID" ? grid : word)));
      expect(done.status, done.stderr).toBe(0);
    }
  });
});

describe("what is no grid at all", () => {
  const cases: [name: string, make: (path: string) => void, message: RegExp][] = [
    ["a name of nothing", () => {}, /no such file/],
    ["a file", (path) => writeFileSync(path, "x"), /not a directory/],
    ["an empty directory", (path) => mkdirSync(path), /bandgrid\.json/],
    ["a link to nothing", (path) => symlinkSync(`${path}-gone`, path), /no such file/],
    ["a link to itself", (path) => symlinkSync(path, path), /cannot be opened/],
    [
      "a directory as manifest",
      (path) => mkdirSync(join(path, "bandgrid.json"), { recursive: true }),
      /bandgrid\.json/,
    ],
    [
      "a pipe as manifest",
      (path) => {
        mkdirSync(path);
        execFileSync("mkfifo", [join(path, "bandgrid.json")]);
      },
      /not a regular file/,
    ],
    [
      "a manifest that is a link to nothing",
      (path) => {
        mkdirSync(path);
        symlinkSync("gone", join(path, "bandgrid.json"));
      },
      /bandgrid\.json/,
    ],
    [
      "an earlier result in place of a manifest",
      (path) => {
        mkdirSync(path);
        writeFileSync(join(path, "bandgrid.json"), JSON.stringify({ format: "tidegauge.curves/1", job: {} }));
      },
      /format/,
    ],
  ];
  it.each(cases)("%s", async (_, make, message) => {
    const path = fresh();
    make(path);
    await expectRefusedEverywhere(path, message);
  });

  it("a name that would move the cursor", async () => {
    await expectRefusedEverywhere(`${fresh()}\u001b[2J\rgone`, /no such file/);
  });
});

describe("one bad grid among good ones", () => {
  it("is named; the good ones are shown, and no file is written", async () => {
    const [good, bad] = [layDown(), layDown((draft) => delete draft.files["spin.c128"])];
    const out = earlierResults();
    const refused = await runInProcess(["inspect", good, bad, "--out", out]);
    expectRefusal(refused);
    expect(refused.stdout).toContain(`${good}: sound`);
    expect(refused.stderr).toContain(bad);
    expectUntouched(out);
  });
});

describe("the built command", () => {
  const some = ["NaN in a velocity", "a short file", "deep nesting", "a link out of the directory"];
  it.each(faultCases.filter(([name]) => some.includes(name)))("%s, in a process of its own", async (_, spoil) => {
    const grid = layDown(spoil);
    for (const words of [
      ["inspect", grid],
      ["sweep", grid, "--workers", "2"],
    ]) {
      const out = earlierResults();
      const signal = { name: "SIGKILL", afterMs: 20_000 } as const;
      expectRefusal(await runCommand([...words, "--out", out], { signal }));
      expectUntouched(out);
    }
  });
});
