// reduced.test.ts: is a symmetry-reduced grid checked before it is believed, and read as the mesh that it stands for?
import { spawnSync } from "node:child_process";
import { existsSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { verifyDigests } from "../../src/grid/fingerprint.js";
import type { Triple } from "../../src/grid/grid.js";
import { createKeeper } from "../../src/grid/kept.js";
import { packGrid } from "../../src/grid/pack.js";
import { openGrid, openReader, wantAll } from "../../src/grid/reader.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { reducedPoints } from "../../src/samples/symmetry.js";
import { writeSample } from "../../src/samples/write.js";
import { buildOnce } from "../tooling/build-once.js";
import { field } from "./fault-cases.js";
import { bytesOf, contents, type Draft, layDown } from "./handmade.js";
import { matrixAt, scratchDirectory } from "./make.js";
import { fourfold, reducedCases, threePoints } from "./reduced-cases.js";

buildOnce();

const bin = join(import.meta.dirname, "..", "..", "bin", "tidegauge.js");
const spoilt = (spoil: (draft: Draft) => void): string =>
  layDown((draft) => {
    threePoints(draft);
    spoil(draft);
  });

function faultOf(directory: string) {
  try {
    const grid = openGrid(directory);
    const reader = openReader(grid, wantAll(grid));
    reader.read(0, grid.facts.points);
    reader.close();
  } catch (error) {
    if (isFault(error)) return error;
    throw error;
  }
  throw new Error("nothing was thrown");
}

describe("what is refused", () => {
  it.each(reducedCases)("%s", (_, spoil, message) => {
    const fault = faultOf(spoilt(spoil));
    expect(fault.kind).toBe("data");
    expect(fault.message).toMatch(message);
    expect(fault.message.length).toBeLessThan(400);
    expect(fault.cure).toMatch(/[.?]$/);
  });

  it.each(reducedCases.filter(([name]) => /group|missing star|finite|off the mesh/.test(name)))(
    "by the command, exit 3: %s",
    (_, spoil) => {
      const { status, stderr } = spawnSync(process.execPath, [bin, "sweep", spoilt(spoil)], { encoding: "utf8" });
      expect(status).toBe(3);
      expect(stderr.trim()).not.toContain("\n    at ");
    },
  );

  it("a patch that is itself reduced", () => {
    const directory = layDown((draft) => {
      threePoints(draft);
      field("mesh", undefined)(draft);
      field("patch", { divisions: [1, 1, 1], cells: "cells.i32" })(draft);
    });
    expect(faultOf(directory).message).toMatch(/this is a patch/);
  });
});

describe("an operation that the data do not have", () => {
  const model = buildSample("haldane", {});
  const divisions: Triple = [6, 6, 1];
  const facts = { ...model, divisions, offset: [0, 0, 0] as const };
  const right = reducedPoints(model, facts);

  it("is found where the points were reduced by the right group: weights or images do not fit", () => {
    const directory = join(scratchDirectory(), "grid");
    // Time reversal alone: Haldane's model breaks it, and k is no image of -k under the group that is left.
    const operations = right.operations.flatMap((each) => [each, { ...each, timeReversal: !each.timeReversal }]);
    expect(() => writeSample(model, { directory, divisions, reduced: { ...right, operations } })).toThrow(
      /its star makes 6 of 36 mesh points/,
    );
    expect(existsSync(directory)).toBe(false);
  });

  it("cannot be found where the points were reduced by it too: nothing stored contradicts it", () => {
    const wrong = reducedPoints(buildSample("haldane", { phi: "0" }), facts);
    expect(wrong.points.length).toBeLessThan(right.points.length);
    const directory = join(scratchDirectory(), "grid");
    expect(writeSample(model, { directory, divisions, reduced: wrong })?.facts.points).toBe(36);
  });
});

describe("a sound reduced grid", () => {
  it("gives every mesh point the matrices of its star's point, turned; conjugated and reversed under time reversal", () => {
    for (const timeReversal of [false, true]) {
      const directory = spoilt((draft) => {
        // The magnetic group: the quarter turns come with time reversal.
        field(
          "symmetry",
          fourfold.map((each, i) => ({ ...each, timeReversal: timeReversal && i % 2 === 1 })),
        )(draft);
      });
      const grid = openGrid(directory);
      expect(grid.facts.points).toBe(4);
      const reader = openReader(grid, wantAll(grid));
      const block = reader.read(0, 4);
      const numbers = contents();
      // Stored point 1, (0, 1/2), makes mesh point 2, (1/2, 0): by the quarter turn or its inverse, which are one up to a half turn.
      const at = (file: string, axis: number) => numbers[file].subarray(8 * (3 + axis), 8 * (4 + axis));
      const turned = (matrix: Float64Array, sign: number) =>
        matrix.map((x, i) => (timeReversal ? -1 : 1) * sign * (timeReversal && i % 2 === 1 ? -x : x) + 0);
      for (const [file, matrices] of [
        ["velocity.c128", block.velocity],
        ["spin.c128", block.moments.get("spin")],
      ] as const) {
        const found = [0, 1, 2].map((axis) => matrixAt(matrices?.[axis], 2, 4, 2).map((x) => x + 0));
        // x' = -y, y' = x, z' = z of the quarter turn; both signs of its inverse.
        const sign = found[1][0] * turned(at(file, 0), 1)[0] > 0 ? 1 : -1;
        expect(found[0]).toEqual(turned(at(file, 1), -sign));
        expect(found[1]).toEqual(turned(at(file, 0), sign));
        expect(found[2]).toEqual(turned(at(file, 2), 1));
      }
      expect([...block.energyEv.subarray(4, 6)]).toEqual([...block.energyEv.subarray(2, 4)]);
      reader.close();
    }
  });

  it("may have its points in single precision, in any zone, and in the order of another language", () => {
    const directory = spoilt((draft) => {
      const { point } = draft.manifest.arrays;
      draft.files["point.f64"] = bytesOf(Float32Array.of(0, 1, -0.5, 1, -1.5, 2.5, 0, 0, 0));
      Object.assign(point, { type: "float32", axes: ["direction", "k"] });
    });
    expect(openGrid(directory).facts.storedFlat).toEqual(Int32Array.of(0, 1, 3));
  });

  it("reads the same in blocks of any size, refuses points beyond the mesh, and packs into the full grid bit by bit", async () => {
    const model = buildSample("luttinger", {});
    const [directory, packed] = ["reduced", "full"].map((name) => join(scratchDirectory(), name));
    const divisions: Triple = [4, 4, 4];
    const offset: Triple = [0.5, 0.5, 0.5];
    const reduced = reducedPoints(model, { ...model, divisions, offset });
    const grid = writeSample(model, { directory, divisions, offset, reduced });
    if (grid === undefined) throw new Error("not written");
    expect(grid.facts.storedFlat?.length).toBeLessThan(10);
    const full = await packGrid(grid, packed, { full: true });
    expect(full.unfolding).toBeUndefined();
    const numbersOf = (from: typeof grid, step: number): number[] => {
      const reader = openReader(from, wantAll(from));
      const out: number[] = [];
      for (let first = 0; first < 64; first += step) {
        const { energyEv, velocity, moments, hessian } = reader.read(first, step);
        out.push(...energyEv.subarray(0, 4 * step));
        for (let i = 0; i < step; i++)
          for (const matrix of [...velocity, ...(moments.get("spin") ?? []), ...(hessian ?? [])])
            out.push(...matrixAt(matrix, i, step, 4));
      }
      reader.close();
      return out.map((x) => x + 0);
    };
    for (const step of [1, 16]) expect(numbersOf(grid, step)).toEqual(numbersOf(full, step));
    const reader = openReader(grid, wantAll(grid));
    expect(() => reader.read(60, 5)).toThrow(/the grid holds 0 to 63/);
    expect(() => reader.read(-1, 1)).toThrow(/the grid holds 0 to 63/);
    reader.close();
  });

  it("has digests of points and weights compared, too", () => {
    const directory = spoilt(field("arrays.weight.sha256", "0".repeat(64)));
    expect(() => verifyDigests(openGrid(directory))).toThrow(/arrays\.weight: file "weight\.f64" has SHA-256/);
  });

  it("is replaced by its like, files of points and weights included", () => {
    const model = buildSample("kane-mele", {});
    const directory = join(scratchDirectory(), "grid");
    const divisions: Triple = [4, 4, 1];
    const reduced = reducedPoints(model, { ...model, divisions, offset: [0, 0, 0] });
    for (const repeat of [0, 1]) {
      writeSample(model, { directory, divisions, reduced, tags: { repeat } });
      expect(JSON.parse(readFileSync(join(directory, "bandgrid.json"), "utf8")).tags).toEqual({ repeat });
    }
    writeSample(model, { directory, divisions });
    expect(openGrid(directory).unfolding).toBeUndefined();
    expect(existsSync(join(directory, "weight.f64"))).toBe(false);
  });
});

describe("stored points that are kept", () => {
  it("are read once while there is room, and the same with room for one", () => {
    const directory = spoilt(() => {});
    const grid = { ...openGrid(directory), unfolding: undefined };
    const reads: number[] = [];
    const reader = openReader({ ...grid, facts: { ...grid.facts, points: 3 } }, wantAll(grid));
    const counted = {
      ...reader,
      read: (first: number, count: number) => {
        reads.push(first);
        return reader.read(first, count);
      },
    };
    const order = [0, 1, 2, 1, 0, 0, 2];
    const energies = (mostBytes: number): number[] => {
      const pointOf = createKeeper(counted, mostBytes);
      return order.map((index) => pointOf(index).energyEv[1]);
    };
    const ample = energies(1e6);
    expect(reads).toEqual([0, 1, 2]);
    expect(energies(0)).toEqual(ample);
    expect(reads.slice(3)).toEqual([0, 1, 2, 1, 0, 2]);
    reader.close();
  });
});
