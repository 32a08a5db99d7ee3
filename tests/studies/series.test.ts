// series.test.ts: are grids ordered by their tag, peaks followed to the nearest doping, and wrong families refused by name?
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { followPeaks } from "../../src/studies/series-peaks.js";
import type { SeriesResult } from "../../src/studies/series-result.js";
import { orderedByTag, seriesTag, type TaggedGrid } from "../../src/studies/series-tag.js";
import { answer, sampled, scratchDirectory } from "../published/runs.js";
import { runCommand } from "../tooling/command.js";

const grid = (name: string, tags: Record<string, string | number | boolean>): TaggedGrid => ({ name, facts: { tags } });

function refusal(run: () => unknown): string {
  try {
    run();
  } catch (error) {
    if (isFault(error)) return `${error.kind}: ${error.message}`;
  }
  return "not refused";
}

describe("the tag", () => {
  const family = [grid("b", { strain: 1, xi: 2, who: "x" }), grid("a", { strain: -1, xi: 2, who: "y" })];

  it("is the only numeric one that differs, and orders the grids", () => {
    expect(seriesTag(family, undefined)).toBe("strain");
    expect(orderedByTag(family, "strain").map(({ grid: { name } }) => name)).toEqual(["a", "b"]);
  });

  it("is refused by name where it is missing, no number, doubled, or one of several", () => {
    expect(refusal(() => orderedByTag(family, "who"))).toBe('data: b has no numeric tag "who" (it has strain, xi)');
    expect(refusal(() => orderedByTag(family, "xi"))).toBe("data: b and a both have xi = 2");
    expect(refusal(() => seriesTag([grid("a", {}), grid("b", {})], undefined))).toContain("no numeric tag");
    const several = [grid("a", { x: 1, y: 1 }), grid("b", { x: 2, y: 2 })];
    expect(refusal(() => seriesTag(several, undefined))).toBe("usage: several tags differ from grid to grid: x, y");
    expect(seriesTag(several, "y")).toBe("y");
  });
});

describe("peaks", () => {
  const peak = (doping: number, value: number, width = 0.3) => ({
    doping_per_cell: doping,
    level_eV: doping,
    value,
    width_eV: width,
  });

  it("that cross in height keep their tracks; a new one begins its own, one that ends leaves gaps", () => {
    const [a1, b1] = [peak(0, 10), peak(0.5, 8)];
    const [a2, b2] = [peak(0.1, 8), peak(0.6, 11)];
    const [b3, c3] = [peak(0.65, 12), peak(-0.9, 1)];
    expect(
      followPeaks([
        [a1, b1],
        [b2, a2],
        [b3, c3],
      ]),
    ).toEqual([
      [b1, b2, b3],
      [a1, a2, null],
      [null, null, c3],
    ]);
  });

  it("of the other sign, or farther than they are wide, are others", () => {
    expect(followPeaks([[peak(0, 10)], [peak(0, -10)]])).toHaveLength(2);
    expect(followPeaks([[peak(0, 10)], [peak(0.4, 10)]])).toHaveLength(2);
  });
});

describe("the command", () => {
  it("compares strained holes at one concentration, in the order of the tag", async () => {
    const mesh = [6, 6, 6];
    const names = [];
    for (const ezz of [0.005, -0.005]) names.push(await sampled("luttinger", { mesh, set: { ezz } }));
    const window = ["--from", -0.2, "--to", 0.05, "--points", 51, "--method", "cells", "--response", "spin:xy:z"];
    const dopings = ["--doping", -3e19, "--doping-unit", "per_cm3"];
    const result = (await answer(["series", ...names, ...window, ...dopings])) as SeriesResult;
    expect(result.format).toBe("tidegauge.series/1");
    expect(result.tag).toBe("ezz");
    expect(result.members.map(({ tag }) => tag)).toEqual([-0.005, 0.005]);
    const [{ points }] = result.responses[0].at_dopings;
    for (const point of points) {
      expect(point.doping_density / -3e19).toBeCloseTo(1, 9);
      expect(point.value).toBeGreaterThan(0);
    }
    const out = scratchDirectory();
    const told = await runCommand(
      ["series", ...names, "--points", "51", "--method", "points", "--out", out].map(String),
    );
    expect(told.status).toBe(0);
    expect(told.stdout).toMatch(/2 grids ordered by ezz: -0.005/);
    const csv = readFileSync(join(out, "series.csv"), "utf8").trimEnd().split("\n");
    expect(new Set(csv.map((row) => row.split(",").length)).size).toBe(1);
    expect(readFileSync(join(out, "series.svg"), "utf8")).toContain("2 grids along ezz");
    const doubled = await runCommand(["series", names[0], await sampled("luttinger", { mesh, set: { ezz: 0.005 } })]);
    expect([doubled.status, doubled.stdout]).toEqual([2, ""]);
  });
});
