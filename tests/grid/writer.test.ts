// writer.test.ts: a band grid appears whole or not at all, and nothing of anybody else is overwritten.
import { existsSync, mkdirSync, readdirSync, readFileSync, symlinkSync, writeFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { describe, expect, it } from "vitest";
import { fileDigest, verifyDigests } from "../../src/grid/fingerprint.js";
import { openGrid, openReader } from "../../src/grid/reader.js";
import { createGridWriter, type GridDescription, type GridLayout } from "../../src/grid/writer.js";
import { layDown } from "./handmade.js";
import { description, pointsOf, scratchDirectory, writeRandom } from "./make.js";

function write(directory: string, grid: GridDescription = description, layout: GridLayout = {}) {
  const writer = createGridWriter(directory, grid, layout);
  for (const point of pointsOf(grid, 8)) writer.add(point);
  return writer.finish();
}

describe("a writer", () => {
  it("leaves nothing under the name before the end, and nothing beside it after", () => {
    const directory = join(scratchDirectory(), "deep", "grid");
    const writer = createGridWriter(directory, description);
    const points = pointsOf(description);
    for (const point of points) {
      expect(existsSync(directory)).toBe(false);
      writer.add(point);
    }
    expect(writer.written()).toBe(12);
    expect(() => writer.add(points[0])).toThrow(/no more can be added/);
    writer.finish();
    expect(readdirSync(dirname(directory))).toEqual(["grid"]);
    expect(readdirSync(directory).sort()).toEqual([
      "bandgrid.json",
      "energy.f64",
      "hessian.c128",
      "moment-layer.c128",
      "moment-spin.c128",
      "velocity.c128",
    ]);
    writer.discard();
    expect(existsSync(join(directory, "bandgrid.json"))).toBe(true);
    expect(() => writer.finish()).toThrow();
  });

  it("removes everything on discard, and refuses to finish early", () => {
    const directory = join(scratchDirectory(), "grid");
    const writer = createGridWriter(directory, description, { arrays: { velocity: { pieces: 3 } } });
    writer.add(pointsOf(description)[0]);
    expect(() => writer.finish()).toThrow(/1 of 12 k points were written/);
    writer.discard();
    expect(readdirSync(dirname(directory))).toEqual([]);
    expect(() => writer.add(pointsOf(description)[0])).toThrow();
  });

  it("writes the same bytes for the same input", () => {
    const [first, second] = [writeRandom(), writeRandom()];
    for (const name of readdirSync(first.directory)) {
      expect(readFileSync(join(first.directory, name)).equals(readFileSync(join(second.directory, name)))).toBe(true);
    }
    expect(first.grid.facts.sha256).toBe(second.grid.facts.sha256);
  });

  it("replaces an earlier band grid of its own, and an empty directory, also through a link", () => {
    const { directory, grid } = writeRandom();
    const next = write(directory);
    expect(next.facts.sha256).not.toBe(grid.facts.sha256);
    expect(readdirSync(dirname(directory))).toEqual(["grid"]);
    const empty = scratchDirectory();
    const link = join(scratchDirectory(), "link");
    symlinkSync(empty, link);
    write(link);
    expect(openGrid(empty).facts.points).toBe(12);
  });

  it("keeps an earlier band grid when the new one fails", () => {
    const { directory, grid } = writeRandom();
    const writer = createGridWriter(directory, description);
    const bad = pointsOf(description)[0];
    bad.energyEv[1] = Number.NaN;
    expect(() => {
      for (let point = 0; point < 12; point++) writer.add(bad);
    }).toThrow(/energy is not finite at k point 0/);
    writer.discard();
    expect(openGrid(directory).facts.sha256).toBe(grid.facts.sha256);
    expect(readdirSync(dirname(directory))).toEqual(["grid"]);
  });

  it.each([
    ["a file", (path: string) => writeFileSync(path, "x"), /is not a directory/],
    ["a dangling link", (path: string) => symlinkSync("nowhere", path), /leads nowhere/],
    [
      "a directory with other things",
      (path: string) => {
        mkdirSync(path);
        writeFileSync(join(path, "thesis.tex"), "x");
      },
      /is not empty, and is not a band grid/,
    ],
    [
      "a band grid with other things",
      (path: string) => writeFileSync(join(write(path).facts.directory, "notes"), "x"),
      /"notes"/,
    ],
    [
      "a damaged band grid",
      (path: string) => writeFileSync(join(write(path).facts.directory, "energy.f64"), "x"),
      /cannot be read/,
    ],
  ])("refuses to write over %s", (_, make, message) => {
    const parent = scratchDirectory();
    const directory = join(parent, "grid");
    make(directory);
    expect(() => createGridWriter(directory, description)).toThrow(message);
    expect(readdirSync(parent)).toEqual(["grid"]);
  });

  it("refuses to write over a band grid of somebody else", () => {
    const directory = layDown();
    expect(() => createGridWriter(directory, description)).toThrow(/is a band grid that this program did not write/);
    expect(openGrid(directory).facts.points).toBe(4);
  });

  it.each<[string, GridDescription, GridLayout, RegExp]>([
    ["no level", { ...description, fermiEv: undefined, electrons: undefined }, {}, /neither fermi nor electrons/],
    ["a level that is no number", { ...description, fermiEv: Number.NaN }, {}, /level\.fermi/],
    [
      "a flat lattice",
      {
        ...description,
        vectorsA: [
          [1, 0, 0],
          [0, 1, 0],
          [1, 1, 0],
        ],
      },
      {},
      /span no volume/,
    ],
    ["an unknown array", description, { arrays: { velocities: {} } }, /no array velocities/],
    ["an unknown unit", description, { arrays: { energy: { unit: "hbar" } } }, /energy has no unit hbar/],
    ["complex energies", description, { arrays: { energy: { type: "complex64" } } }, /energies are real/],
    ["a missing axis", description, { arrays: { velocity: { axes: ["k", "bra", "ket"] } } }, /velocity has the axes/],
    ["too many files", description, { arrays: { velocity: { pieces: 13 } } }, /shared out to 13 files/],
  ])("refuses %s and leaves nothing behind", (_, grid, layout, message) => {
    const parent = scratchDirectory();
    expect(() => createGridWriter(join(parent, "grid"), grid, layout)).toThrow(message);
    expect(readdirSync(parent)).toEqual([]);
  });

  it("refuses points that do not fit the description", () => {
    const writer = createGridWriter(join(scratchDirectory(), "grid"), description, { blockBytes: 1 });
    const [point] = pointsOf(description);
    expect(() => writer.add({ ...point, moments: new Map() })).toThrow(
      /moments\.spin of a k point must be 3 arrays of 18/,
    );
    expect(() => writer.add({ ...point, energyEv: new Float64Array(2) })).toThrow(
      /energy of a k point must be 1 arrays of 3/,
    );
    expect(() =>
      writer.add({ ...point, velocity: point.velocity.map((matrix) => matrix.map((x, i) => x + i)) }),
    ).toThrow(/velocity x is not Hermitian at k point 0/);
    writer.discard();
    const real = createGridWriter(join(scratchDirectory(), "grid"), description, {
      arrays: { velocity: { type: "float64" } },
      blockBytes: 1,
    });
    expect(() => real.add(point)).toThrow(/velocity at k point 0 is not real/);
    real.discard();
  });
});

describe("digests", () => {
  it("are written on request, agree, and notice a changed byte", () => {
    const { directory, grid } = writeRandom({ sha256: true, arrays: { velocity: { pieces: 3 } } });
    expect(verifyDigests(grid)).toBe(7);
    const path = join(directory, "velocity-2.c128");
    const bytes = readFileSync(path);
    bytes[17] ^= 1;
    writeFileSync(path, bytes);
    expect(() => verifyDigests(openGrid(directory))).toThrow(/arrays\.velocity: file "velocity-2\.c128" has SHA-256/);
    expect(openGrid(directory).facts.sha256).not.toBe(grid.facts.sha256);
    expect(verifyDigests(writeRandom().grid)).toBe(0);
  });

  it("agree with the published digest of three letters", () => {
    // FIPS 180-2, appendix B.1: SHA-256 of "abc".
    const path = join(scratchDirectory(), "abc");
    writeFileSync(path, "abc");
    expect(fileDigest("a", { path, name: "abc" })).toBe(
      "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad",
    );
  });
});

describe("single components", () => {
  const small = { ...description, hessian: "none" as const };
  // 70 bands: one matrix has 78 kB, so that unwanted ones are skipped also where k is slowest.
  const large: GridDescription = { ...small, divisions: [3, 1, 1], bands: 70, electrons: 1, moments: [] };
  const orders = [
    ["k", "direction", "bra", "ket"],
    ["direction", "k", "bra", "ket"],
    ["direction", "k", "ket", "bra"],
    ["k", "bra", "ket", "direction"],
    ["bra", "direction", "k", "ket"],
    ["bra", "k", "direction", "ket"],
  ] as const;
  it.each([small, large].flatMap((grid) => orders.map((axes) => ({ grid, axes, bands: grid.bands }))))(
    "are those of the whole: $bands bands, $axes",
    ({ grid, axes }) => {
      const made = writeRandom({ arrays: { velocity: { axes, pieces: 2 } } }, grid);
      for (const velocity of [[0], [1], [2], [0, 2], [2, 1]]) {
        const reader = openReader(made.grid, { velocity, moments: [], hessian: false });
        const block = reader.read(1, 2);
        for (const axis of velocity) {
          const matrices = block.velocity[axis];
          if (matrices === undefined) throw new Error("not read");
          for (let index = 0; index < 2; index++) {
            const start = matrices.offset + index * matrices.stride;
            const got = matrices.data.subarray(start, start + 2 * grid.bands ** 2);
            expect(
              Buffer.from(got.slice().buffer).equals(Buffer.from(made.points[1 + index].velocity[axis].buffer)),
            ).toBe(true);
          }
        }
        reader.close();
      }
    },
  );
});
