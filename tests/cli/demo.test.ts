// demo.test.ts: does the demo run from end to end, tell its story from its own numbers, write its page, and own up to its limits?
import { spawnSync } from "node:child_process";
import { readdirSync, readFileSync, rmSync } from "node:fs";
import { join } from "node:path";
import { afterAll, expect, it } from "vitest";
import { repository } from "../tooling/build-once.js";
import { freshDirectory } from "../tooling/command.js";

const directory = freshDirectory();
afterAll(() => rmSync(directory, { recursive: true, force: true }));

it("is told on a small mesh: the quantised layer, the metal beside its dense values, cautions, pictures", () => {
  const quick = [directory, "6", "--method", "cells"];
  const run = spawnSync(process.execPath, [join(repository, "data", "demo", "run.mjs"), ...quick], {
    encoding: "utf8",
  });
  expect(run.status, run.stdout + run.stderr).toBe(0);
  // Haldane, Phys. Rev. Lett. 61, 2015 (1988): a Hall quantum in the gap.
  expect(run.stdout).toMatch(/charge:xy in the gap: -1\.0000\d* e\^2\/h.*Agrees\./);
  expect(run.stdout).toMatch(/\d+ of 12 values lie within two bars of the dense ones/);
  expect(run.stdout).toMatch(/As it comes, vadholmium has spin:hall -?\d+ \+- \d+/);
  for (const caution of ["Intrinsic part only", "Rigid band", "screening number"])
    expect(run.stdout).toContain(caution);
  for (const name of ["haldane-curves", "vadholmium-curves"]) {
    expect(readdirSync(join(directory, name)).sort()).toEqual(["curves.csv", "curves.json", "curves.svg"]);
    expect(readFileSync(join(directory, name, "curves.svg"), "utf8")).toMatch(/^<svg /);
  }
  expect(readFileSync(join(directory, "page", "report.html"), "utf8")).toMatch(/^<!doctype html>/);
});

it("promises in package.json what is there: npm run demo", () => {
  const { scripts } = JSON.parse(readFileSync(join(repository, "package.json"), "utf8"));
  expect(scripts.demo).toBe("node data/demo/run.mjs");
});
