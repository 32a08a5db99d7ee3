// faults.test.ts: every kind of bad input gives one clear line with path, finding and what was expected.
import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { openGrid, openReader, wantAll } from "../../src/grid/reader.js";
import { faultCases, field } from "./fault-cases.js";
import { type Draft, layDown } from "./handmade.js";
import { scratchDirectory } from "./make.js";

it.each(faultCases)("%s", (_, spoil, message) => {
  const directory = layDown(spoil);
  let caught: unknown;
  try {
    const grid = openGrid(directory);
    const reader = openReader(grid, wantAll(grid));
    try {
      reader.read(0, grid.facts.points);
    } finally {
      reader.close();
    }
  } catch (error) {
    caught = error;
  }
  if (!isFault(caught)) throw caught ?? new Error("nothing was thrown");
  expect(caught.kind).toBe("data");
  expect(caught.message).toMatch(message);
  for (const line of [caught.message, caught.cure]) {
    expect(line).not.toMatch(/[\u0000-\u001f\u007f-\u009f\u2028\u2029]/);
    expect(line.length).toBeLessThan(400);
  }
  expect(caught.cure).toMatch(/[.?]$/);
});

it("names the nearest known field as the cure", () => {
  const cure = (spoil: (draft: Draft) => void): string => {
    try {
      openGrid(layDown(spoil));
    } catch (error) {
      if (isFault(error)) return error.cure;
    }
    return "";
  };
  expect(cure(field("mesh.ofset", [0, 0, 0]))).toBe('Did you mean "offset"?');
  expect(cure(field("arrays.velocity.unit", "eV*A"))).toBe('Did you mean "eV*angstrom"?');
  expect(cure(field("arrays.moments.spin.knd", 1))).toBe('Did you mean "kind"?');
  expect(cure(field("zzzzzzzz", 1))).toMatch(/Remove it/);
});

it("refuses what is no directory, or has no manifest", () => {
  const directory = layDown();
  expect(() => openGrid(join(directory, "nowhere"))).toThrow(/no such file/);
  expect(() => openGrid(join(directory, "energy.f64"))).toThrow(/not a directory/);
  expect(() => openGrid(scratchDirectory())).toThrow(/bandgrid\.json" cannot be opened: there is no such file/);
  const piped = scratchDirectory();
  execFileSync("mkfifo", [join(piped, "bandgrid.json")]);
  expect(() => openGrid(piped)).toThrow(/not a regular file/);
});
