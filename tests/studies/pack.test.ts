// pack.test.ts: does a packed grid give the very curves of the grid that was packed, whatever its layout?
import { join } from "node:path";
import fc from "fast-check";
import { expect, it } from "vitest";
import type { ArrayLayout } from "../../src/grid/writer.js";
import { resultJson } from "../../src/report/json.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { writeSample } from "../../src/samples/write.js";
import { pack, packOptions } from "../../src/studies/pack.js";
import { sweep } from "../../src/studies/sweep.js";
import { sweepOptions } from "../../src/studies/sweep-plan.js";
import { description, scratchDirectory, writeRandom } from "../grid/make.js";

const small = { ...description, divisions: [2, 3, 2] as const };
const arrays = ["energy", "velocity", "moments.spin", "hessian"];
const axes = (name: string): string[] =>
  name === "energy" ? ["k", "band"] : ["k", name === "hessian" ? "pair" : "direction", "bra", "ket"];

const layout = (name: string): fc.Arbitrary<ArrayLayout> =>
  fc.record({
    type: name === "energy" ? fc.constantFrom("float32", "float64") : fc.constantFrom("complex64", "complex128"),
    axes: fc.shuffledSubarray(axes(name), { minLength: axes(name).length }),
    byteOrder: fc.constantFrom("little", "big"),
    container: fc.constantFrom("raw", "npy"),
    pieces: fc.constantFrom(1, 5),
    unit: fc.constantFrom(
      ...(
        {
          energy: ["eV", "rydberg"],
          velocity: ["eV*angstrom", "m/s"],
          "moments.spin": ["hbar", "half-hbar"],
          hessian: ["eV*angstrom^2", "hartree*bohr^2"],
        } as Record<string, string[]>
      )[name],
    ),
  }) as fc.Arbitrary<ArrayLayout>;

/** The curves of a grid, without its name and fingerprint. */
async function curves(directory: string, method: "points" | "refine"): Promise<string> {
  const options = {
    response: ["charge:xy", "spin:xy:z"],
    from: -1,
    to: 1,
    points: 5,
    temperature: [0, 300],
    method,
    accuracy: 0.2,
  };
  const { grid: _, ...rest } = await sweep(directory, sweepOptions.parse(options), { workers: 1 });
  return resultJson({ ...rest, job: {} });
}

it("gives identical curves from any layout, split or not", async () => {
  const layouts = fc.record(Object.fromEntries(arrays.map((name) => [name, layout(name)])));
  await fc.assert(
    fc.asyncProperty(layouts, fc.boolean(), async (chosen, split) => {
      const { directory } = writeRandom({ arrays: chosen }, small);
      const out = join(scratchDirectory(), "packed");
      await pack({ grid: directory }, out, packOptions.parse({ split }));
      expect(await curves(out, "points")).toBe(await curves(directory, "points"));
    }),
    { numRuns: 12 },
  );
}, 60_000);

it("gives identical refined curves", async () => {
  const form = { type: "complex64", byteOrder: "big", axes: ["direction", "ket", "k", "bra"] } as const;
  const layout = { arrays: { velocity: { ...form, unit: "m/s" }, energy: { unit: "rydberg" } } } as const;
  const directory = join(scratchDirectory(), "layer");
  writeSample(buildSample("kane-mele", {}), { directory, divisions: [6, 6, 1], layout });
  const out = join(scratchDirectory(), "packed");
  await pack({ grid: directory }, out, packOptions.parse({ split: true }));
  expect(await curves(out, "refine")).toBe(await curves(directory, "refine"));
});

it("says what was, what is, what it cost and what it means", async () => {
  const { directory } = writeRandom({ arrays: { velocity: { byteOrder: "big", pieces: 3 } } });
  const out = join(scratchDirectory(), "packed");
  const options = packOptions.parse({ precision: "single", split: true, check: true });
  const result = await pack({ grid: directory }, out, options);
  expect(result).toMatchObject({
    format: "tidegauge.pack/1",
    job: { study: "pack", precision: "single", split: true },
    directory: out,
    points: 12,
    bands: 3,
    source: { name: directory, kind: "grid", points: 12 },
    inferred: [],
    patches: [],
    notes: [
      "velocity, moments.spin, moments.layer, hessian: kept to 24 bits, about 7 digits; energies stay as they are",
    ],
    check: { sound: true, directory: out },
  });
  expect(result.arrays[1]).toEqual({
    name: "velocity",
    was: { type: "complex128", axes: axes("velocity"), byteOrder: "big", files: 3, bytes: 12 * 27 * 16 },
    is: { type: "complex64", axes: ["k", "bra", "ket"], byteOrder: "little", files: 3, bytes: 12 * 27 * 8 },
  });
  expect(result.bytes).toBe(12 * (3 * 8 + 13 * 9 * 8));
});
