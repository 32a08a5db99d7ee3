// sweep-invariants.test.ts: does the sweep command keep what holds for any grid: workers, layouts, full bands, time reversal?
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import type { GridLayout } from "../../src/grid/writer.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { writeSample } from "../../src/samples/write.js";
import { methods, sampled, scratchDirectory, swept } from "../published/runs.js";
import { runCommand } from "../tooling/command.js";

const response = ["charge:all", "spin:hall", "spin:xy:z", "orbital:zx:y"];
const thermalEv = [0, 300 * 8.617333262e-5];
const largest = (table: readonly number[][]): number => Math.max(...table.flat().map(Math.abs));

describe("workers", () => {
  for (const method of methods)
    it(`${method}: one, two and three workers write the same bytes, and print them`, async () => {
      const grid = await sampled("random", { mesh: [8, 8, 8], set: { bands: 6, seed: 3 } });
      const files = ["curves.csv", "curves.json", "curves.svg"];
      const run = async (workers: number) => {
        const out = join(scratchDirectory(), "curves");
        const args = ["--response", ...response, "--method", method, "--workers", String(workers), "--out", out];
        const { status, stdout } = await runCommand(["sweep", grid, ...args, "--json", "--quiet"]);
        expect(status).toBe(0);
        return [stdout, ...files.map((name) => readFileSync(join(out, name), "utf8"))];
      };
      const [alone, ...more] = [await run(1), await run(2), await run(3)];
      expect(alone[2]).toBe(alone[0]);
      for (const text of alone) expect(text.length).toBeGreaterThan(5000);
      for (const other of more) for (const [i, text] of other.entries()) expect(text === alone[i]).toBe(true);
    });
});

describe("layouts", async () => {
  const model = buildSample("random", { bands: "4", seed: "5" });
  const written = (layout: GridLayout): string => {
    const directory = join(scratchDirectory(), "grid");
    writeSample(model, { directory, divisions: [6, 4, 4], layout });
    return directory;
  };
  const asked = { response, levels: [-2, 2, 41], thermalEv } as const;
  const canonical = written({});
  const big = { byteOrder: "big" } as const;
  const layouts: readonly [name: string, layout: GridLayout, part: number][] = [
    [
      "k last, ket before bra; hartree, bohr, meV and half-hbar",
      {
        arrays: {
          velocity: { axes: ["ket", "bra", "direction", "k"], unit: "hartree*bohr" },
          energy: { axes: ["band", "k"], unit: "meV" },
          "moments.spin": { unit: "half-hbar" },
        },
      },
      1e-12,
    ],
    [
      "velocities in m/s, energies in rydberg",
      { arrays: { velocity: { unit: "m/s" }, energy: { unit: "rydberg" } } },
      1e-12,
    ],
    [
      "most significant byte first, .npy, pieces, digests, small blocks",
      {
        arrays: {
          velocity: { ...big, container: "npy", pieces: 7 },
          energy: { ...big, pieces: 3 },
          "moments.spin": big,
          "moments.orbital": { container: "npy", pieces: 2 },
        },
        sha256: true,
        blockBytes: 50_000,
      },
      0,
    ],
  ];

  for (const method of methods) {
    const reference = await swept(canonical, { method, ...asked });
    for (const [name, layout, part] of layouts)
      it(`${method}: ${name}: ${part === 0 ? "the same bits" : "the same curves to 1e-12"}`, async () => {
        const result = await swept(written(layout), { method, ...asked });
        const groups = (r: CurvesResult) => [
          ...r.responses.map(({ value, points, error }) => [value, points, error]),
          ...[[r.electrons_per_cell], [r.states_per_eV]],
        ];
        const expected = groups(reference);
        // A response that vanishes by symmetry is measured by the others.
        const common = 1e-3 * Math.max(...reference.responses.map(({ value }) => largest(value)));
        for (const [g, group] of groups(result).entries()) {
          // By the peak of the curve or of its plain sum; the error too, which is a difference of curves.
          const peaks = expected[g].slice(0, 2).map(largest);
          const scale = Math.max(...peaks, g < reference.responses.length ? common : 0);
          for (const [i, table] of group.entries()) {
            if (part === 0) expect(table).toEqual(expected[g][i]);
            for (const [t, row] of table.entries())
              for (const [level, value] of row.entries())
                expect(Math.abs(value - expected[g][i][t][level])).toBeLessThanOrEqual(part * scale);
          }
        }
      });
  }
});

describe("what holds for any crystal", () => {
  it("far above the bands every state is full, below none is, and no interband response is left", async () => {
    for (const [name, bands, set] of [
      ["random", 4, { bands: 4, seed: 2 }],
      ["metal", 18, {}],
    ] as const) {
      const grid = await sampled(name, { mesh: [4, 4, 4], set });
      for (const method of methods) {
        const result = await swept(grid, {
          method,
          response: ["charge:xy", "spin:hall"],
          levels: [-60, 60, 7],
          thermalEv,
        });
        for (const t of [0, 1]) {
          expect(result.electrons_per_cell[t][0]).toBe(0);
          expect(Math.abs(result.electrons_per_cell[t][6] - bands)).toBeLessThan(1e-10);
          for (const { value } of result.responses) {
            expect(value[t][0]).toBe(0);
            expect(Math.abs(value[t][6])).toBeLessThan(1e-9);
          }
        }
      }
    }
  });

  it("time reversal: no anomalous Hall effect, while the spin Hall effect stays; without it, the other way about", async () => {
    const asked = { response: ["charge:xy", "charge:yz", "spin:hall"], levels: [-2, 2, 21], thermalEv } as const;
    for (const method of methods) {
      const kept = await sampled("random", { mesh: [6, 6, 6], set: { bands: 6, seed: 4, symmetry: "time-reversal" } });
      const broken = await sampled("random", { mesh: [6, 6, 6], set: { bands: 6, seed: 4, symmetry: "none" } });
      const [symmetric, free] = [await swept(kept, { method, ...asked }), await swept(broken, { method, ...asked })];
      const spin = largest(symmetric.responses[2].value);
      expect(spin).toBeGreaterThan(1);
      for (const charge of symmetric.responses.slice(0, 2)) expect(largest(charge.value)).toBeLessThan(1e-9 * spin);
      expect(largest(free.responses[0].value)).toBeGreaterThan(1);
    }
  });
});
