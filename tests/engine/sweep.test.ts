// sweep.test.ts: from files to curves: does a sweep equal the literal Kubo sum, and keep the invariants that hold for any crystal?
import { describe, expect, it } from "vitest";
import type { CurvesResult, Table } from "../../src/curves/result.js";
import type { PointData } from "../../src/grid/writer.js";
import type { PointRef } from "../../src/kernel/kernel.js";
import { type SweepOptions, sweep, sweepOptions } from "../../src/studies/sweep.js";
import { literalCurvature } from "../kernel/points.js";
import { type Draft, randomDraft, regauged, sampleDraft, shifted, written } from "./grids.js";

const alone = { workers: 1 };
const boltzmannEvPerK = 8.617333262e-5; // CODATA 2022

const run = (draft: Draft, options: Partial<SweepOptions> = {}): Promise<CurvesResult> =>
  sweep(written(draft), sweepOptions.parse({ from: -1.5, to: 1.5, points: 31, method: "cells", ...options }), alone);

const largest = (table: Table): number => Math.max(...table.flat().map(Math.abs));

function differenceOf(a: Table, b: Table): number {
  expect(a.map((row) => row.length)).toEqual(b.map((row) => row.length));
  return Math.max(...a.flatMap((row, t) => row.map((value, i) => Math.abs(value - b[t][i]))));
}

/** Every curve of two results agrees to this part of its largest value. */
function expectSame(a: CurvesResult, b: CurvesResult, part: number): void {
  expect(a.responses.map(({ name }) => name)).toEqual(b.responses.map(({ name }) => name));
  for (const [i, response] of a.responses.entries()) {
    expect(largest(response.value)).toBeGreaterThan(0);
    const scale = part * Math.max(largest(response.value), largest(response.points));
    for (const table of ["value", "points", "error"] as const)
      expect(differenceOf(response[table], b.responses[i][table])).toBeLessThan(scale);
  }
  expect(differenceOf(a.electrons_per_cell, b.electrons_per_cell)).toBeLessThan(part * largest(a.electrons_per_cell));
  expect(differenceOf(a.states_per_eV, b.states_per_eV)).toBeLessThan(part * largest(a.states_per_eV));
}

/** The k point as the literal definition wants it; moments: spin x, y, z, valley. */
function pointRef({ energyEv, velocity, moments }: PointData): PointRef {
  const refs = (parts: readonly Float64Array[] = []) => parts.map((data) => ({ data, offset: 0 }));
  return {
    bands: energyEv.length,
    energyEv,
    energyOffset: 0,
    velocity: refs(velocity),
    moments: [...refs(moments.get("spin")), ...refs(moments.get("valley"))],
    hessian: undefined,
  };
}

/** Zone mean of sum_n f(E_n) Omega_n, literally. */
function literalMean(
  draft: Draft,
  [moment, flow, field]: readonly [number, 0 | 1 | 2, 0 | 1 | 2],
  levelEv: number,
  temperatureK: number,
): number {
  let sum = 0;
  for (const point of draft.points.map(pointRef)) {
    const omega = literalCurvature(point, { moment, flow, field }, { degenerateEv: 1e-5, broadenEv: 0 });
    for (const [band, energy] of point.energyEv.entries()) {
      const cold = energy <= levelEv ? 1 : 0;
      const f = temperatureK > 0 ? 1 / (1 + Math.exp((energy - levelEv) / (boltzmannEvPerK * temperatureK))) : cold;
      sum += f * omega[band];
    }
  }
  return sum / draft.points.length;
}

// e^2/hbar in S: e, h exact in the SI. Volumes by hand from the vectors of grids.ts.
const conductanceS = (2 * Math.PI * 1.602176634e-19 ** 2) / 6.62607015e-34;
const volumeA3 = 3 * (2.8 * 3.3 - 0.3 * 0.1) - 0.2 * (0.5 * 3.3 + 0.3 * 0.4) - 0.1 * (0.5 * 0.1 + 2.8 * 0.4);
const areaA2 = 3 * 2.8 - 0.2 * 0.5;

describe("the plain mesh sum is the literal Kubo formula", () => {
  const cases = [
    ["charge:xy", [-1, 0, 1]],
    ["charge:yx", [-1, 1, 0]],
    ["spin:xy:z", [2, 0, 1]],
    ["spin:yx:x", [0, 1, 0]],
    ["valley:xy", [3, 0, 1]],
  ] as const;

  for (const [periodic, electronsPerBand] of [
    [3, 1],
    [2, 1],
    [3, 2],
  ] as const)
    it(`periodic ${periodic}, ${electronsPerBand} electrons per band: 0 and 300 K, value and points, to 1e-10`, async () => {
      const divisions = periodic === 3 ? ([4, 3, 5] as const) : ([8, 6, 1] as const);
      const draft = randomDraft({ divisions, bands: 5, seed: 3, periodic, electronsPerBand });
      const asked = cases.filter(([name]) => electronsPerBand === 1 || !name.startsWith("spin"));
      const response = asked.map(([name]) => name);
      const plain = await run(draft, { response, method: "points" });
      const cells = await run(draft, { response, method: "cells" });
      for (const [r, [name, product]] of asked.entries()) {
        const prefactor = periodic === 3 ? (conductanceS / volumeA3) * 1e8 : (2 * Math.PI) / areaA2;
        const factor = prefactor * electronsPerBand * (name.startsWith("charge") ? -1 : 1);
        const scale = largest(plain.responses[r].value);
        for (const [t, temperature] of [0, 300].entries())
          for (const [i, level] of plain.level_eV.entries()) {
            const exact = factor * literalMean(draft, product, 0.1 + level, temperature);
            expect(Math.abs(plain.responses[r].value[t][i] - exact)).toBeLessThan(1e-10 * scale);
            expect(Math.abs(cells.responses[r].points[t][i] - exact)).toBeLessThan(1e-10 * scale);
          }
      }
    });

  it("also where a block of memory holds one k point alone (200 bands)", async () => {
    const draft = randomDraft({ divisions: [2, 2, 1], bands: 200, seed: 5, periodic: 2 });
    const result = await run(draft, { response: ["charge:xy"], method: "points", points: 2, temperature: [0] });
    for (const [i, level] of result.level_eV.entries()) {
      const exact = ((-2 * Math.PI) / areaA2) * literalMean(draft, [-1, 0, 1], 0.1 + level, 0);
      expect(result.responses[0].value[0][i] / exact).toBeCloseTo(1, 9);
    }
  });
});

describe("gauge freedom", () => {
  const response = ["charge:hall", "spin:hall", "spin:xy:z", "spin:yy:x"];

  for (const method of ["points", "cells"] as const) {
    it(`${method}: phases of single bands change nothing`, async () => {
      const draft = randomDraft({ divisions: [4, 4, 4], bands: 6, seed: 11 });
      expectSame(await run(draft, { response, method }), await run(regauged(draft, 1), { response, method }), 1e-9);
    });

    it(`${method}: unitary mixing of the twofold bands of a crystal with time reversal and inversion changes nothing`, async () => {
      const draft = sampleDraft("random", { seed: "4", bands: "6", symmetry: "both" }, [6, 6, 6]);
      const asked = { response: ["spin:hall", "spin:xy:z", "orbital:hall"], method };
      expectSame(await run(draft, asked), await run(regauged(draft, 2), asked), 1e-9);
    });
  }

  // Symmetry holds bands together at isolated k points (3-fold p states at the centre of a cubic zone): their slopes within the
  // set are those of the basis that the file happens to hold.
  async function mixedSets(method: "points" | "cells"): Promise<void> {
    for (const together of [2, 3]) {
      const draft = randomDraft({ divisions: [4, 4, 4], bands: 6, seed: 12, together });
      expectSame(await run(draft, { response, method }), await run(regauged(draft, 3), { response, method }), 1e-9);
    }
  }

  it("points: unitary mixing within exactly degenerate sets of any velocity changes nothing", () =>
    mixedSets("points"));

  // A known fault of `cells`: it spreads each band of a set by its own diagonal slope, which depends on the basis.
  it("cells: unitary mixing within exactly degenerate sets of any velocity changes nothing", () => mixedSets("cells"));
});

describe("what holds for any crystal", () => {
  it("with the level above all bands every state is occupied, and no interband response is left", async () => {
    for (const method of ["points", "cells"] as const)
      for (const electronsPerBand of [1, 2] as const) {
        const draft = randomDraft({ divisions: [4, 4, 4], bands: 6, seed: 13, electronsPerBand });
        // Slopes of up to 1 eV A spread a band by up to 2 eV in a cell of these meshes.
        const window = { from: -9, to: 9, points: 61, response: ["charge:xy", "valley:hall"], method };
        const result = await run(draft, window);
        for (const row of result.electrons_per_cell) {
          expect(Math.abs(row[0])).toBeLessThan(1e-12);
          expect(row[60]).toBeCloseTo(6 * electronsPerBand, 11);
        }
        for (const { value } of result.responses)
          for (const row of value) {
            expect(Math.abs(row[0])).toBeLessThan(1e-12 * largest(value));
            expect(Math.abs(row[60])).toBeLessThan(1e-10 * largest(value));
          }
        // At 0 K hats of one level step, or exact steps: they add up to 1 between any two levels.
        const states = result.states_per_eV[0].reduce((sum, perEv) => sum + perEv * 0.3, 0);
        expect(states).toBeCloseTo(6 * electronsPerBand, 10);
      }
  });

  it("counting the mesh from another origin changes nothing, error bars included", async () => {
    for (const method of ["points", "cells"] as const)
      for (const [divisions, by] of [
        [
          [4, 6, 4],
          [1, 4, 3],
        ],
        [
          [6, 9, 1],
          [5, 2, 0],
        ],
      ] as const) {
        const periodic = divisions[2] === 1 ? 2 : 3;
        const draft = randomDraft({ divisions, bands: 4, seed: 14, periodic });
        const asked = { response: ["charge:xy", "spin:hall", "valley:yx"], method };
        expectSame(await run(draft, asked), await run(shifted(draft, by), asked), 1e-11);
      }
  });

  it("time reversal: no charge Hall response, where the spin Hall response is not small", async () => {
    for (const periodic of ["3", "2"] as const)
      for (const method of ["points", "cells"] as const) {
        const parameters = { seed: "7", bands: "6", symmetry: "time-reversal", periodic };
        const draft = sampleDraft("random", parameters, periodic === "3" ? [6, 6, 6] : [16, 16, 1]);
        const unit = "hbar/e S/cm";
        const result = await run(draft, { response: ["charge:xy", "charge:hall", "spin:hall"], method, unit });
        const scale = largest(result.responses[2].value);
        expect(scale).toBeGreaterThan(1);
        for (const { value, points } of result.responses.slice(0, 2))
          expect(Math.max(largest(value), largest(points))).toBeLessThan(1e-9 * scale);
      }
  });

  it("time reversal and inversion: the charge curvature vanishes at every k, the spin Hall response does not", async () => {
    const draft = sampleDraft("random", { seed: "8", bands: "4", symmetry: "both" }, [6, 6, 6]);
    const result = await run(draft, { response: ["charge:all", "spin:hall"], method: "cells" });
    const scale = largest(result.responses[9].value);
    expect(scale).toBeGreaterThan(1);
    for (const { value } of result.responses.slice(0, 9)) expect(largest(value)).toBeLessThan(1e-9 * scale);
  });

  it("charge responses are odd under exchange of flow and field, and vanish on the diagonal", async () => {
    const draft = randomDraft({ divisions: [4, 4, 4], bands: 5, seed: 15 });
    const { responses } = await run(draft, { response: ["charge:all"], method: "cells" });
    const tableOf = (pair: string): Table => responses.find(({ name }) => name === `charge:${pair}`)?.value ?? [];
    const scale = largest(tableOf("xy"));
    for (const [pair, swapped] of ["xx xx", "yy yy", "xy yx", "yz zy", "zx xz"].map((pairs) => pairs.split(" ")))
      expect(
        differenceOf(
          tableOf(pair),
          tableOf(swapped).map((row) => row.map((value) => 0 - value)),
        ),
      ).toBeLessThan(1e-11 * scale);
  });

  it("spin:hall is the mean of its components; S/m and hbar/2e scale value, error and points alike", async () => {
    const draft = randomDraft({ divisions: [4, 4, 4], bands: 4, seed: 16 });
    const result = await run(draft, { response: ["spin:hall", "spin:all"] });
    const tableOf = (name: string): Table => result.responses.find((response) => response.name === name)?.value ?? [];
    const parts = ["xy:z", "yz:x", "zx:y", "yx:z", "zy:x", "xz:y"].map((name) => tableOf(`spin:${name}`));
    const mean = parts[0].map((row, t) =>
      row.map((_, i) => parts.reduce((sum, part, p) => sum + (p < 3 ? part[t][i] : -part[t][i]), 0) / 6),
    );
    expect(differenceOf(tableOf("spin:hall"), mean)).toBeLessThan(1e-12 * largest(parts[0]));
    const doubled = await run(draft, { response: ["spin:hall"], unit: "hbar/2e S/m" });
    expect(doubled.responses[0].unit).toBe("(hbar/2e) S/m");
    for (const table of ["value", "points", "error"] as const) {
      const scaled = result.responses[0][table].map((row) => row.map((value) => 200 * value));
      expect(differenceOf(doubled.responses[0][table], scaled)).toBeLessThan(1e-12 * largest(scaled));
    }
  });

  it("300 K is the convolution of 0 K with -df/dE (cells, fine levels)", async () => {
    const draft = sampleDraft("random", { seed: "9", bands: "4" }, [6, 6, 6]);
    const result = await run(draft, { from: -2, to: 2, points: 2001, response: ["charge:xy", "spin:hall"] });
    const thermal = 300 * boltzmannEvPerK;
    for (const { value } of result.responses)
      for (const i of [600, 1000, 1234, 1400]) {
        const convolved = value[0].reduce((sum, cold, j) => {
          const x = ((j - i) * 0.002) / thermal;
          return sum + (cold * 0.002) / thermal / (4 * Math.cosh(x / 2) ** 2);
        }, 0);
        expect(Math.abs(value[1][i] - convolved)).toBeLessThan(1e-3 * largest([value[1]]));
      }
  });
});

describe("the stated accuracy", () => {
  it("has no error bar where the mesh contains no sub-mesh, and says so", async () => {
    const draft = randomDraft({ divisions: [3, 5, 7], bands: 3, seed: 17 });
    const result = await run(draft, { response: ["charge:xy"] });
    expect(result.responses[0].error.flat().every(Number.isNaN)).toBe(true);
    expect(result.notes.some((note) => note.startsWith("no error bar"))).toBe(true);
    expect(result.notes[0]).toBe("intrinsic only, rigid band");
  });

  it("one level gives what a window gives there", async () => {
    const draft = sampleDraft("random", { seed: "10", bands: "4" }, [6, 6, 6]);
    const response = ["charge:xy", "spin:hall"];
    for (const method of ["points", "cells"] as const) {
      const many = await run(draft, { response, method, from: -0.5, to: 0.5, points: 101 });
      const one = await run(draft, { response, method, from: 0, to: 0, points: 1 });
      for (const [r, { value }] of one.responses.entries())
        for (const t of [0, 1]) {
          const there = many.responses[r].value[t][50];
          // Coarser copies of the axis lie elsewhere: a spread is only known to 3 parts in 100 of its weight (boxes.test.ts).
          const slack = method === "points" ? 1e-10 : 0.03;
          expect(Math.abs(value[t][0] - there)).toBeLessThan(slack * largest(many.responses[r].value));
        }
    }
  });
});
