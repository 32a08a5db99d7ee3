// pack.test.ts: does a packed grid hold the numbers of what was packed, bit by bit, and appear whole or not at all?
import { existsSync, mkdirSync, readdirSync, readFileSync, truncateSync, writeFileSync } from "node:fs";
import { dirname, join } from "node:path";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { verifyDigests } from "../../src/grid/fingerprint.js";
import type { Block, MatrixBlock } from "../../src/grid/grid.js";
import { listPatch } from "../../src/grid/list-patch.js";
import { packGrid } from "../../src/grid/pack.js";
import { type Grid, openGrid, openReader, wantAll } from "../../src/grid/reader.js";
import { type ArrayLayout, createGridWriter, type GridLayout } from "../../src/grid/writer.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { reducedPoints } from "../../src/samples/symmetry.js";
import { writeSample } from "../../src/samples/write.js";
import { field } from "./fault-cases.js";
import { layDown } from "./handmade.js";
import { description, matrixAt, pointsOf, scratchDirectory, writeRandom } from "./make.js";

/** Every number of a grid in reading order: energies, then matrices by array and component, point by point. */
function allNumbers(grid: Grid): Float64Array[] {
  const reader = openReader(grid, wantAll(grid));
  const { points, bands } = grid.facts;
  const block: Block = reader.read(0, points);
  const of = (all: readonly (MatrixBlock | undefined)[]): Float64Array[] =>
    all.flatMap((matrix) => Array.from({ length: points }, (_, index) => matrixAt(matrix, index, points, bands)));
  const out = [
    Float64Array.from(block.energyEv),
    ...of(block.velocity),
    ...[...block.moments.values()].flatMap(of),
    ...of(block.hessian ?? []),
  ];
  reader.close();
  return out;
}

const bits = (grid: Grid): string =>
  Buffer.concat(allNumbers(grid).map((part) => Buffer.from(part.buffer))).toString("hex");
const fresh = (): string => join(scratchDirectory(), "packed");

const axesOf = (name: string, split: boolean): string[] => {
  if (name === "energy") return ["k", "band"];
  const component = name === "hessian" ? "pair" : "direction";
  return split && name !== "moments.layer" ? ["k", "bra", "ket"] : ["k", component, "bra", "ket"];
};
const unitsOf: Record<string, string[]> = {
  energy: ["eV", "meV", "hartree", "rydberg"],
  velocity: ["eV*angstrom", "hartree*bohr", "rydberg*bohr", "m/s"],
  "moments.spin": ["hbar", "half-hbar"],
  "moments.layer": ["1"],
  hessian: ["eV*angstrom^2", "hartree*bohr^2", "rydberg*bohr^2"],
};

/** Any layout of one array, split into components or not. */
const layoutOf = (name: string): fc.Arbitrary<ArrayLayout> =>
  fc.boolean().chain((wanted) => {
    const split = wanted && name !== "energy";
    return fc.record({
      type: name === "energy" ? fc.constantFrom("float32", "float64") : fc.constantFrom("complex64", "complex128"),
      axes: fc.shuffledSubarray(axesOf(name, split), { minLength: axesOf(name, split).length }),
      unit: fc.constantFrom(...unitsOf[name]),
      byteOrder: fc.constantFrom("little", "big"),
      container: fc.constantFrom("raw", "npy"),
      pieces: fc.constantFrom(1, 2, 12),
      split: fc.constant(split),
    }) as fc.Arbitrary<ArrayLayout>;
  });

describe("packing", () => {
  it("gives the numbers of any layout back bit by bit, in canonical form, split or not", async () => {
    const layouts = fc.record(Object.fromEntries(Object.keys(unitsOf).map((name) => [name, layoutOf(name)])));
    await fc.assert(
      fc.asyncProperty(layouts, fc.boolean(), async (arrays, split) => {
        const { grid } = writeRandom({ arrays });
        const packed = await packGrid(grid, fresh(), { split });
        expect(bits(packed)).toBe(bits(grid));
        for (const [index, plan] of packed.arrays.entries()) {
          const splits = split && plan.components > 1;
          expect(plan.type).toBe(grid.arrays[index].type);
          expect(plan.axes).toEqual(axesOf(plan.name, splits));
          expect(plan.files).toHaveLength(splits ? plan.components : 1);
          expect(plan.byteOrder).toBe("little");
          // What is stored in double precision goes to canonical units.
          if (plan.type.endsWith("64") === (plan.role === "energy")) expect(plan.factor).toBe(1);
        }
        const { title, vectorsA, divisions, offset, fermiEv, electrons, moments, tags } = grid.facts;
        expect(packed.facts).toMatchObject({ title, vectorsA, divisions, offset, fermiEv, electrons, moments, tags });
      }),
      { numRuns: 30 },
    );
  }, 60_000);

  it("of a packed grid gives the same bytes again but for where they came from", async () => {
    const { grid } = writeRandom();
    const [once, twice] = [fresh(), fresh()];
    await packGrid(await packGrid(grid, once, {}), twice, {});
    for (const name of readdirSync(once).filter((each) => each !== "bandgrid.json"))
      expect(readFileSync(join(twice, name)).equals(readFileSync(join(once, name)))).toBe(true);
    expect(openGrid(once).provenance).toEqual({
      made: "by a test",
      packed: { from: grid.facts.sha256, writer: "tidegauge" },
      writer: "tidegauge",
    });
  });

  it("to single precision keeps energies and the nearest single of every matrix element; back to double changes nothing", async () => {
    const { grid, points } = writeRandom({ arrays: { velocity: { unit: "hartree*bohr" } } });
    const single = await packGrid(grid, fresh(), { precision: "single" });
    expect(single.arrays.map(({ type }) => type)).toEqual(["float64", ...Array(4).fill("complex64")]);
    const [energies, ...matrices] = allNumbers(single);
    expect(energies).toEqual(allNumbers(grid)[0]);
    const spin = allNumbers(grid).slice(1)[3 * points.length];
    expect(matrices[3 * points.length]).toEqual(spin.map(Math.fround));
    const double = await packGrid(single, fresh(), { precision: "double" });
    expect(double.arrays.map(({ type }) => type)).toEqual(["float64", ...Array(4).fill("complex128")]);
    expect(bits(double)).toBe(bits(single));
  });

  it.each([
    ["direction", "k", "bra", "ket"],
    ["k", "ket", "bra", "direction"],
    ["bra", "ket", "direction", "k"],
  ] as const)("takes the order %s %s %s %s, and without the direction when split", async (...order) => {
    const { grid } = writeRandom();
    for (const split of [false, true]) {
      const packed = await packGrid(grid, fresh(), { order, split, digests: true });
      expect(bits(packed)).toBe(bits(grid));
      expect(packed.arrays[1].axes).toEqual(split ? order.filter((axis) => axis !== "direction") : order);
      expect(verifyDigests(packed)).toBe(split ? 1 + 3 + 3 + 1 + 6 : 5);
    }
  });

  it("keeps to bounded memory: blocks of a few points give the same bytes", async () => {
    // 60 bands: a point of this description is 2.2 MB, so a 16 MB block holds 7 of the 12.
    const { grid } = writeRandom({}, { ...description, bands: 60, electrons: 20 });
    const told: number[] = [];
    const packed = await packGrid(grid, fresh(), {}, { onProgress: (done) => told.push(done) });
    expect(told.length).toBeGreaterThan(1);
    expect(told.at(-1)).toBe(12);
    expect(bits(packed) === bits(grid)).toBe(true);
  });
});

describe("a grid whose components have files of their own", () => {
  it("is read without the files of components that are not asked for", async () => {
    const { grid } = writeRandom();
    const split = await packGrid(grid, fresh(), { split: true });
    const want = { velocity: [0, 1], moments: [{ name: "spin", direction: 2 }], hessian: false };
    const expected = openReader(grid, want).read(0, 12);
    for (const name of ["velocity-z", "moment-spin-x", "hessian-xy", "moment-layer"])
      truncateSync(join(split.facts.directory, `${name}.c128`));
    const found = openReader(split, want).read(0, 12);
    for (let point = 0; point < 12; point++) {
      for (const axis of [0, 1])
        expect(matrixAt(found.velocity[axis], point, 12, 3)).toEqual(matrixAt(expected.velocity[axis], point, 12, 3));
      const [a, b] = [found, expected].map(({ moments }) => matrixAt(moments.get("spin")?.[2], point, 12, 3));
      expect(a).toEqual(b);
    }
    expect(() => openReader(split, { ...want, velocity: [2] }).read(0, 1)).toThrow(/velocity-z.c128" ends at byte 0/);
    expect(() => openGrid(split.facts.directory)).toThrow(/"velocity-z.c128" holds 0 bytes/);
  });

  it("names the component's file where a number is wrong", async () => {
    const { grid } = writeRandom();
    const split = await packGrid(grid, fresh(), { split: true });
    const file = join(split.facts.directory, "velocity-y.c128");
    const bytes = readFileSync(file);
    bytes.writeDoubleLE(Number.NaN, 16 * 9 * 5);
    writeFileSync(file, bytes);
    const reader = openReader(openGrid(split.facts.directory), wantAll(split));
    expect(() => reader.read(4, 2)).toThrow(/velocity y is not finite at k point 5 .*"velocity-y\.c128"/);
  });

  const noDirection = ["k", "bra", "ket"];
  it.each<[string, unknown, string[], RegExp]>([
    ["a missing component", { x: "a", y: "b" }, noDirection, /arrays\.velocity\.files has x, y; expected x, y, z/],
    ["no component", {}, noDirection, /has no component; expected x, y, z/],
    ["a pair", { x: "a", y: "b", xy: "c" }, noDirection, /has x, y, xy; expected/],
    ["an unknown component", { x: "a", y: "b", w: "c" }, noDirection, /arrays\.velocity\.files\.w is not a field/],
    ["a direction among the axes", { x: "a", y: "b", z: "c" }, ["k", "direction", "bra", "ket"], /without direction/],
    ["one file twice", { x: "velocity.c128", y: "velocity.c128", z: "c" }, noDirection, /holds 768 bytes/],
    ["a file that is not there", { x: "a", y: "b", z: "c" }, noDirection, /arrays\.velocity\.files\.x: file "a"/],
    ["a path out", { x: "../a", y: "b", z: "c" }, noDirection, /leads out of the directory/],
  ])("is refused with %s", (_, files, axes, message) => {
    const directory = layDown((draft) => {
      field("arrays.velocity.files", files)(draft);
      field("arrays.velocity.axes", axes)(draft);
    });
    expect(() => openGrid(directory)).toThrow(message);
  });

  it("is refused for an array with one component, and with digests of another form", async () => {
    expect(() => openGrid(layDown(field("arrays.energy.files", { x: "energy.f64" })))).toThrow(/has one only/);
    const { grid } = writeRandom();
    const { directory } = (await packGrid(grid, fresh(), { split: true, digests: true })).facts;
    const path = join(directory, "bandgrid.json");
    const manifest = JSON.parse(readFileSync(path, "utf8"));
    manifest.arrays.velocity.sha256 = "0".repeat(64);
    writeFileSync(path, JSON.stringify(manifest));
    expect(() => openGrid(directory)).toThrow(/sha256 is not given for the same components/);
  });
});

/** Adds a patch of two cells to a grid of `description`; returns the grid with it. */
function withPatch(directory: string, name: string): Grid {
  const patch = { divisions: [2, 1, 2] as const, cells: Int32Array.from([7, 2]) };
  const writer = createGridWriter(join(directory, name), { ...description, title: "finer", patch });
  for (const point of pointsOf({ ...description, divisions: [2, 2, 2] }, 11)) writer.add(point);
  writer.finish();
  listPatch(directory, name);
  return openGrid(directory);
}

describe("what a grid has beside its arrays", () => {
  it("patches come along, in the form of the rest", async () => {
    const { directory } = writeRandom();
    const grid = withPatch(directory, "patch-01");
    const packed = await packGrid(grid, fresh(), { split: true });
    expect(packed.patches).toHaveLength(1);
    const [was, is] = [grid.patches[0], packed.patches[0]];
    expect(is.facts.patch).toEqual(was.facts.patch);
    expect(is.facts.title).toBe("finer");
    expect(is.arrays[1].files).toHaveLength(3);
    expect(bits(is)).toBe(bits(was));
    expect(bits({ ...packed, patches: [] })).toBe(bits({ ...grid, patches: [] }));
    await expect(packGrid(grid, packed.facts.directory, {})).rejects.toThrow(/has the patch "patch-01"/);
  });

  it("a symmetry-reduced grid stays so, or becomes the full mesh that its reader gives", async () => {
    const model = buildSample("haldane", {});
    const mesh = { divisions: [6, 6, 1] as const, offset: [0, 0, 0] as const };
    const reduced = reducedPoints(model, { ...model, ...mesh });
    const grid = writeSample(model, { directory: join(scratchDirectory(), "reduced"), ...mesh, reduced });
    if (grid === undefined) throw new Error("stopped");
    const stored = grid.arrays[0].points;
    expect(stored).toBeLessThan(36);
    const kept = await packGrid(grid, fresh(), { precision: "double" });
    expect(kept.arrays[0].points).toBe(stored);
    expect(bits(kept)).toBe(bits(grid));
    const full = await packGrid(grid, fresh(), { full: true });
    expect(full.arrays[0].points).toBe(36);
    expect(full.unfolding).toBeUndefined();
    expect(bits(full)).toBe(bits(grid));
  });
});

describe("a packing that does not come to its end", () => {
  const rejected = async (packing: Promise<unknown>): Promise<Error> =>
    packing.then(
      () => {
        throw new Error("it was packed");
      },
      (error) => error,
    );

  it("leaves nothing behind when interrupted", async () => {
    const { grid } = writeRandom();
    const to = fresh();
    const error = await rejected(packGrid(grid, to, {}, { signal: AbortSignal.abort() }));
    expect(isFault(error) && error.kind).toBe("interrupted");
    expect(readdirSync(dirname(to))).toEqual([]);
  });

  it("keeps the earlier grid when the numbers are bad, and says where they are", async () => {
    const to = fresh();
    await packGrid(writeRandom().grid, to, {});
    const before = openGrid(to).facts.sha256;
    const { directory, grid } = writeRandom();
    const bytes = readFileSync(join(directory, "velocity.c128"));
    bytes.writeDoubleLE(Number.NaN, bytes.length - 16);
    writeFileSync(join(directory, "velocity.c128"), bytes);
    const error = await rejected(packGrid(grid, to, { precision: "single" }));
    expect(error.message).toMatch(/^velocity z is not finite at k point 11 \(2, 1, 1\), bands 2, 2 \(file "velocity/);
    expect(openGrid(to).facts.sha256).toBe(before);
    expect(readdirSync(dirname(to))).toEqual(["packed"]);
  });

  it("refuses what stands at its place and is not its own, before reading", async () => {
    const { grid } = writeRandom();
    const taken = fresh();
    mkdirSync(taken);
    writeFileSync(join(taken, "thesis.tex"), "x");
    expect((await rejected(packGrid(grid, taken, {}))).message).toMatch(/is not empty, and is not a band grid/);
    expect(readdirSync(taken)).toEqual(["thesis.tex"]);
    const foreign = layDown();
    expect((await rejected(packGrid(grid, foreign, {}))).message).toMatch(/this program did not write/);
  });

  it("may replace the grid that it packs", async () => {
    const { directory, grid } = writeRandom({ arrays: { velocity: { pieces: 3, byteOrder: "big" } } });
    const before = bits(grid);
    const packed = await packGrid(grid, directory, {});
    expect(bits(packed)).toBe(before);
    expect(existsSync(join(directory, "velocity-1.c128"))).toBe(false);
    expect(readdirSync(dirname(directory))).toEqual(["grid"]);
  });

  it("says what to do where matrices are Hermitian to single precision only", async () => {
    const { directory } = writeRandom({ arrays: { velocity: { type: "complex64" } } });
    const file = join(directory, "velocity.c64");
    const bytes = readFileSync(file);
    // Real part of [0, 1] at the first point: off by 1e-5 of elements of order 1, legal for 32-bit numbers and not for 64-bit ones.
    bytes.writeFloatLE(bytes.readFloatLE(8) + 3e-5, 8);
    writeFileSync(file, bytes);
    const grid = openGrid(directory);
    const packed = await packGrid(grid, fresh(), {});
    expect(bits(packed)).toBe(bits(grid));
    const error = await rejected(packGrid(grid, fresh(), { precision: "double" }));
    expect(error.message).toMatch(/velocity x is not Hermitian at k point 0/);
    expect(isFault(error) && error.cure).toMatch(/leave the precision as it is/);
  });

  it("real symmetric matrices stay real numbers on disk", async () => {
    const arrays = {
      velocity: { type: "float64" },
      hessian: { type: "float32" },
    } as const satisfies GridLayout["arrays"];
    const { grid } = writeRandom({ arrays }, description, true);
    const packed = await packGrid(grid, fresh(), { precision: "single", split: true });
    expect(packed.arrays.map(({ type }) => type)).toEqual(["float64", "float32", "complex64", "complex64", "float32"]);
  });
});
