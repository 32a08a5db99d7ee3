// reduced.test.ts: is a symmetry-reduced grid checked before it is believed, and read as the mesh that it stands for?
import { spawnSync } from "node:child_process";
import { existsSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import type { Triple } from "../../src/grid/grid.js";
import { createKeeper } from "../../src/grid/kept.js";
import { packGrid } from "../../src/grid/pack.js";
import { openGrid, openReader, wantAll } from "../../src/grid/reader.js";
import { productOf, type Rows } from "../../src/grid/symmetry.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { reducedPoints } from "../../src/samples/symmetry.js";
import { writeSample } from "../../src/samples/write.js";
import { buildOnce } from "../tooling/build-once.js";
import { type FaultCase, field } from "./fault-cases.js";
import { bytesOf, contents, type Draft, layDown } from "./handmade.js";
import { matrixAt, scratchDirectory } from "./make.js";

buildOnce();

const bin = join(import.meta.dirname, "..", "..", "bin", "tidegauge.js");
const one: Rows = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];
/** A quarter turn about z, and what it makes. */
const quarter: Rows = [
  [0, -1, 0],
  [1, 0, 0],
  [0, 0, 1],
];
const half = productOf(quarter, quarter);
const entry = (rotation: Rows, timeReversal = false) => ({ rotation, timeReversal });
const fourfold = [one, quarter, half, productOf(half, quarter)].map((rotation) => entry(rotation));

/** The handmade grid, 2 x 2 x 1 on a cubic cell, with three of its points: the fourfold axis makes (1/2, 0) of (0, 1/2). */
function threePoints(draft: Draft): void {
  const { manifest, files } = draft;
  for (const [name, numbers] of Object.entries(contents()))
    files[name] = bytesOf(numbers.slice(0, (numbers.length / 4) * 3));
  files["point.f64"] = bytesOf(Float64Array.of(0, 0, 0, 0, 0.5, 0, 0.5, 0.5, 0));
  files["weight.f64"] = bytesOf(Float64Array.of(0.25, 0.5, 0.25));
  manifest.points = 3;
  manifest.symmetry = structuredClone(fourfold);
  manifest.arrays.point = { files: "point.f64", type: "float64", axes: ["k", "direction"] };
  manifest.arrays.weight = { files: "weight.f64", type: "float64", axes: ["k"] };
}

const write =
  (file: string, ...numbers: number[]) =>
  (draft: Draft) => {
    draft.files[file] = bytesOf(Float64Array.from(numbers));
  };

const [cos, sin] = [Math.cos(0.3), Math.sin(0.3)];

const cases: FaultCase[] = [
  [
    "a list that is no group",
    field("symmetry", fourfold.slice(0, 3)),
    /symmetry is no group: symmetry\[2\] after symmetry\[1\] is not in the list/,
  ],
  ["no operation at all", field("symmetry", []), /symmetry lacks the identity/],
  ["no identity", field("symmetry", fourfold.slice(1)), /symmetry lacks the identity/],
  ["time reversal alone", field("symmetry", [entry(one, true)]), /symmetry lacks the identity/],
  ["an operation twice", field("symmetry", [...fourfold, fourfold[2]]), /symmetry\[4\] is symmetry\[2\] once more/],
  [
    "a rotation that stretches",
    field("symmetry.1.rotation", [
      [0, -1.001, 0],
      [1, 0, 0],
      [0, 0, 1],
    ]),
    /symmetry\[1\]\.rotation is not orthogonal/,
  ],
  [
    "a rotation in another basis",
    field("symmetry.1.rotation", [
      [1, 1, 0],
      [0, 1, 0],
      [0, 0, 1],
    ]),
    /symmetry\[1\]\.rotation is not orthogonal/,
  ],
  [
    "a rotation of another lattice",
    field("symmetry.1.rotation", [
      [cos, -sin, 0],
      [sin, cos, 0],
      [0, 0, 1],
    ]),
    /symmetry\[1\] does not map the lattice to itself/,
  ],
  [
    "a rotation of two rows",
    field("symmetry.1.rotation", [
      [1, 0, 0],
      [0, 1, 0],
    ]),
    /symmetry\[1\]\.rotation/,
  ],
  [
    "a rotation with a text",
    field("symmetry.1.rotation", [
      ["1", 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ]),
    /symmetry\[1\]\.rotation\[0\]\[0\] is "1"/,
  ],
  [
    "a misspelt field of an operation",
    field("symmetry.1.timereversal", true),
    /symmetry\[1\]\.timereversal is not a field/,
  ],
  [
    "a group that does not keep the mesh",
    field("mesh.offset", [0.25, 0, 0]),
    /point 0 \(0, 0, 0\), or its image under symmetry\[0\], is no point of the mesh/,
  ],
  [
    "an image off the mesh",
    (draft) => {
      field("mesh.divisions", [2, 4, 1])(draft);
      write("point.f64", 0, 0, 0, 0, 0.25, 0, 0.5, 0.5, 0)(draft);
      write("weight.f64", 0.125, 0.25, 0.625)(draft);
    },
    /image under symmetry\[1\], is no point of the mesh/,
  ],
  [
    "a point off the mesh",
    write("point.f64", 0, 0, 0, 0, 0.4, 0, 0.5, 0.5, 0),
    /point 1 \(0, 0\.4, 0\), or its image under symmetry\[0\], is no point of the mesh/,
  ],
  [
    "a point that is no number",
    write("point.f64", 0, 0, 0, 0, NaN, 0, 0.5, 0.5, 0),
    /arrays\.point of point 1 is not a finite number/,
  ],
  ["an infinite weight", write("weight.f64", 0.25, Infinity, 0.25), /arrays\.weight of point 1 is not a finite number/],
  [
    "two points of one star",
    write("point.f64", 0, 0, 0, 0, 0.5, 0, 0.5, 0, 0),
    /points 1 and 2 \(0\.5, 0, 0\) are images of each other/,
  ],
  [
    "one point twice",
    write("point.f64", 0, 0, 0, 0, 0, 1, 0.5, 0.5, 0),
    /points 0 and 1 \(0, 0, 1\) are images of each other/,
  ],
  [
    "weights that count mesh points",
    write("weight.f64", 1, 2, 1),
    /point 0 \(0, 0, 0\) has weight 1; its star makes 1 of 4 mesh points, 0\.25/,
  ],
  ["equal weights", write("weight.f64", 1 / 3, 1 / 3, 1 / 3), /point 0 .* has weight 0\.333/],
  [
    "a missing star",
    (draft) => {
      for (const [name, bytes] of Object.entries(draft.files))
        draft.files[name] = bytes.subarray(0, (bytes.length / 3) * 2);
      draft.manifest.points = 2;
    },
    /the stars of the 2 points leave out 1 of the 4 mesh points, the first of flat index 3/,
  ],
  [
    "a subgroup, as if an operation had been forgotten",
    field("symmetry", [fourfold[0], fourfold[2]]),
    /point 1 .* has weight 0\.5; its star makes 1 of 4/,
  ],
  [
    "a mesh that no file could fill",
    field("mesh.divisions", [2 ** 20, 2 ** 20, 2 ** 10]),
    /3 points under 4 operations make at most 12 of the 1125899906842624 mesh points/,
  ],
  [
    "half a million operations",
    field(
      "symmetry",
      Array.from({ length: 500_000 }, () => 1),
    ),
    /symmetry|bytes/,
  ],
  ["points that are not those of the files", field("points", 4), /holds 72 bytes.*expected 96/],
  ["no points", field("points", 0), /points is 0/],
  [
    "no weights",
    field("arrays.weight", undefined),
    /points, symmetry, arrays\.point make it a symmetry-reduced grid, but arrays\.weight is missing/,
  ],
  ["no group", field("symmetry", undefined), /but symmetry is missing/],
  [
    "weights with a direction",
    field("arrays.weight.axes", ["k", "direction"]),
    /arrays\.weight\.axes .*must hold each of \["k"\] once/,
  ],
  [
    "points with bands",
    field("arrays.point.axes", ["k", "band"]),
    /arrays\.point\.axes .*must hold each of \["k","direction"\] once/,
  ],
  ["complex points", field("arrays.point.type", "complex128"), /arrays\.point\.type is "complex128"/],
  ["points in 1/angstrom", field("arrays.point.unit", "1/angstrom"), /arrays\.point\.unit is "1\/angstrom"/],
  [
    "points in a file of another array",
    field("arrays.point.files", "energy.f64"),
    /"energy\.f64" holds 48 bytes.*expected 72|named twice/,
  ],
  [
    "a number of a stored point that is not finite",
    write("energy.f64", 0, 1, 2, NaN, 4, 5),
    /energy is not finite at k point 1 \(0, 1, 0\), band 1/,
  ],
];

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
  it.each(cases)("%s", (_, spoil, message) => {
    const fault = faultOf(spoilt(spoil));
    expect(fault.kind).toBe("data");
    expect(fault.message).toMatch(message);
    expect(fault.message.length).toBeLessThan(400);
    expect(fault.cure).toMatch(/[.?]$/);
  });

  it.each(cases.filter(([name]) => /group|missing star|finite|off the mesh/.test(name)))(
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
