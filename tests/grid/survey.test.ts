// survey.test.ts: a scan collects what is wrong, finds ranges, and keeps within its memory on files of gigabytes.
import { closeSync, openSync, statSync, truncateSync, writeFileSync, writeSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openGrid, openReader, pointsPerBlock } from "../../src/grid/reader.js";
import { surveyGrid } from "../../src/grid/survey.js";
import { energyAt, layDown, manifest } from "./handmade.js";
import { scratchDirectory } from "./make.js";

describe("surveyGrid", () => {
  it("finds ranges and nothing wrong in a good grid", () => {
    const grid = openGrid(layDown());
    const steps: number[] = [];
    const survey = surveyGrid(grid, (done, total) => steps.push(done / total));
    expect(survey).toMatchObject({
      points: 4,
      bytes: grid.facts.bytes,
      findings: [],
      findingsTotal: 0,
      stopped: undefined,
    });
    expect(survey.bandRanges).toEqual(
      [0, 1].map((band) => ({ lowestEv: energyAt(0, band), highestEv: energyAt(3, band) })),
    );
    expect([survey.lowestEv, survey.highestEv]).toEqual([energyAt(0, 0), energyAt(3, 1)]);
    expect(survey.arrays.map(({ name, bytes, files }) => [name, bytes, files])).toEqual([
      ["energy", 64, 1],
      ["velocity", 768, 1],
      ["moments.spin", 768, 1],
    ]);
    expect(survey.arrays[1].asymmetry.deviation).toBe(0);
    expect(survey.arrays[1].largest).toBe(4211);
    expect(steps.at(-1)).toBe(1);
  });

  it("collects faults with array, k point and bands, up to a cap, and measures the worst asymmetry", () => {
    const grid = openGrid(
      layDown(({ files }) => {
        files["energy.f64"].writeDoubleLE(Number.NaN, 0);
        files["energy.f64"].writeDoubleLE(-5, 8 * 5);
        // velocity y at point 2, bra 1, ket 0: real part off by 30
        const at = 8 * (2 * 24 + 8 + 4);
        files["velocity.c128"].writeDoubleLE(files["velocity.c128"].readDoubleLE(at) + 30, at);
        files["spin.c128"].writeDoubleLE(Number.POSITIVE_INFINITY, 8 * 7);
      }),
    );
    const survey = surveyGrid(grid);
    expect(
      survey.findings.map(({ array, problem, point, bands, component }) => ({
        array,
        problem,
        point,
        bands,
        component,
      })),
    ).toEqual([
      { array: "energy", problem: "not finite", point: 0, bands: [0], component: undefined },
      { array: "energy", problem: "not ascending", point: 2, bands: [0, 1], component: undefined },
      { array: "velocity", problem: "not Hermitian", point: 2, bands: [0, 1], component: 1 },
      { array: "moments.spin", problem: "not finite", point: 0, bands: [1, 1], component: 0 },
    ]);
    expect(survey.findings[1].mesh).toEqual([1, 0, 0]);
    const { asymmetry } = survey.arrays[1];
    expect(asymmetry).toMatchObject({ deviation: 30, point: 2, component: "y" });
    expect(asymmetry.relative).toBeCloseTo(30 / 3111, 12);
    const capped = surveyGrid(grid, undefined, 1);
    expect([capped.findings.length, capped.findingsTotal]).toEqual([1, 4]);
    expect(survey.bandRanges[0].lowestEv).toBe(energyAt(1, 0));
  });

  it("says why it stopped when a file shrinks under it", () => {
    const directory = layDown();
    const grid = openGrid(directory);
    truncateSync(join(directory, "velocity.c128"), 100);
    expect(surveyGrid(grid).stopped).toMatch(/ends at byte 100/);
  });
});

describe("tolerances", () => {
  const relative = (type: string, factor: number) => {
    const grid = openGrid(
      layDown((draft) => {
        const { velocity } = draft.manifest.arrays;
        const bytes = draft.files["velocity.c128"];
        const values = Float64Array.from({ length: 96 }, (_, index) => bytes.readDoubleLE(8 * index));
        values[4] += factor * Math.max(...values.subarray(0, 8));
        velocity.type = type;
        draft.files["velocity.c128"] = Buffer.from((type === "complex64" ? Float32Array.from(values) : values).buffer);
      }),
    );
    return () => openReader(grid, { velocity: [0], moments: [], hessian: false }).read(0, 4);
  };
  it("is 1e-6 of the largest element for 64-bit numbers and 1e-4 for 32-bit ones", () => {
    expect(relative("complex128", 0.99e-6)).not.toThrow();
    expect(relative("complex128", 1.01e-6)).toThrow(/not Hermitian/);
    expect(relative("complex64", 0.99e-4)).not.toThrow();
    expect(relative("complex64", 1.01e-4)).toThrow(/not Hermitian/);
  });
  it("energies may fall by 1e-9 eV", () => {
    const fall = (size: number) => {
      const directory = layDown(({ files }) => {
        files["energy.f64"].writeDoubleLE(files["energy.f64"].readDoubleLE(0) - size, 8);
      });
      return () => openReader(openGrid(directory), { velocity: [], moments: [], hessian: false }).read(0, 1);
    };
    expect(fall(0.9e-9)).not.toThrow();
    expect(fall(1.1e-9)).toThrow(/not ascending/);
  });
});

describe("memory", () => {
  // 600^2 x 20 points of 8 bands: 22 GB of velocities in a sparse file that takes no room on the disk.
  const divisions = [600, 600, 20];
  const points = 600 * 600 * 20;
  const sparse = (axes: string[]) => {
    const directory = scratchDirectory();
    const text = manifest();
    text.mesh.divisions = divisions;
    text.bands = 8;
    text.level.electrons = 4;
    text.arrays.moments = {};
    text.arrays.velocity.axes = axes;
    for (const [name, bytes] of [
      ["energy.f64", 64 * points],
      ["velocity.c128", 3072 * points],
    ] as const) {
      const path = join(directory, name);
      closeSync(openSync(path, "w"));
      truncateSync(path, bytes);
      const handle = openSync(path, "r+");
      // A mark in the very last element, which is real: energy of band 7, or velocity (z, 7, 7) of the last point.
      writeSync(handle, Buffer.from(Float64Array.of(4.5).buffer), 0, 8, name === "energy.f64" ? bytes - 8 : bytes - 16);
      closeSync(handle);
    }
    writeFileSync(join(directory, "bandgrid.json"), JSON.stringify(text));
    return directory;
  };

  it.each([
    ["k first", ["k", "direction", "bra", "ket"], 60],
    ["k last", ["direction", "bra", "ket", "k"], 8],
    ["transposed", ["k", "direction", "ket", "bra"], 30],
  ])(
    "stays bounded on 22 GB, %s",
    (_, axes, blocks) => {
      const directory = sparse(axes);
      expect(statSync(join(directory, "velocity.c128")).size).toBe(3072 * points);
      const grid = openGrid(directory);
      const want = { velocity: [0, 1, 2], moments: [], hessian: false };
      const step = pointsPerBlock(grid, want, 8 * 1024 * 1024);
      const before = process.memoryUsage().rss;
      const reader = openReader(grid, want);
      for (let block = 0; block < blocks; block++) {
        reader.read(Math.floor((block * (points - step)) / blocks), step);
      }
      const block = reader.read(points - step, step);
      expect(block.energyEv[step * 8 - 1]).toBe(4.5);
      const last = block.velocity[2];
      expect(last?.data[last.offset + (step - 1) * last.stride + 126]).toBe(4.5);
      reader.close();
      expect((process.memoryUsage().rss - before) / 1024 ** 2).toBeLessThan(100);
    },
    60_000,
  );
});
