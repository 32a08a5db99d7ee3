// files.test.ts: which files are found, in which order, how they join along k, and what a reader makes of layouts by hand.
import { mkdirSync, renameSync, symlinkSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { bohrA, hartreeEv } from "../../src/base/constants.js";
import { findFiles, naturalOrder } from "../../src/grid/files.js";
import { npyHeader } from "../../src/grid/npy.js";
import { openGrid, openReader, viewOf } from "../../src/grid/reader.js";
import { bands, bytesOf, type Draft, energyAt, layDown, points, velocityAt } from "./handmade.js";

/** Expects the closed form of handmade.ts, times `factor`. */
function expectForm(directory: string, factor = 1): void {
  const grid = openGrid(directory);
  const reader = openReader(grid, { velocity: [0, 1, 2], moments: [], hessian: false });
  const block = reader.read(0, points);
  for (let point = 0; point < points; point++) {
    for (let band = 0; band < bands; band++) {
      expect(block.energyEv[point * bands + band]).toBeCloseTo(energyAt(point, band), 12);
    }
    block.velocity.forEach((matrices, axis) => {
      if (matrices === undefined) throw new Error("not read");
      const view = viewOf(matrices, points, bands);
      for (let bra = 0; bra < bands; bra++) {
        for (let ket = 0; ket < bands; ket++) {
          const [re, im] = velocityAt(point, axis, bra, ket);
          expect(view.get(point, bra, ket, 0) / factor).toBeCloseTo(re, 9);
          expect(view.get(point, bra, ket, 1) / factor).toBeCloseTo(im, 9);
        }
      }
    });
  }
  reader.close();
}

describe("naturalOrder", () => {
  it("puts 2 before 10, and is an order", () => {
    const names = ["v-10", "v-2", "v-1", "part10/a", "part2/b", "v-02", "V-2"];
    expect([...names].sort(naturalOrder)).toEqual(["part2/b", "part10/a", "v-1", "v-02", "v-2", "V-2", "v-10"]);
    expect([...names].reverse().sort(naturalOrder)).toEqual([...names].sort(naturalOrder));
  });
});

describe("findFiles", () => {
  it("takes names, patterns, lists, links inside, and names that look like patterns", () => {
    const directory = layDown();
    mkdirSync(join(directory, "sub"));
    for (const name of ["w-10.f64", "w-9.f64", "sub/w-1.f64", "w[1].f64"]) writeFileSync(join(directory, name), name);
    symlinkSync("w-9.f64", join(directory, "x.f64"));
    const names = (files: string | string[]) => findFiles(directory, "a", files).map((file) => file.name);
    expect(names("w-*.f64")).toEqual(["w-9.f64", "w-10.f64"]);
    expect(names(["w-10.f64", "w-9.f64"])).toEqual(["w-9.f64", "w-10.f64"]);
    expect(names(["w-?.f64", "sub/*.f64"])).toEqual(["sub/w-1.f64", "w-9.f64"]);
    expect(names("**/w-1*.f64")).toEqual(["sub/w-1.f64", "w-10.f64"]);
    expect(names("w-[0-9].f64")).toEqual(["w-9.f64"]);
    expect(names("w[1].f64")).toEqual(["w[1].f64"]);
    expect(names("./w-9.f64")).toEqual(["w-9.f64"]);
    expect(names("x.f64")).toEqual(["x.f64"]);
    expect(() => names(["x.f64", "w-9.f64"])).toThrow(/are one file/);
  });
});

describe("layouts laid down by hand", () => {
  const cut = (draft: Draft, ...cuts: number[]) => {
    const whole = draft.files["velocity.c128"];
    delete draft.files["velocity.c128"];
    return [0, ...cuts].map((start, part) => whole.subarray(start, cuts[part] ?? whole.length));
  };

  it("the canonical one", () => {
    expectForm(layDown());
  });

  it("eleven would come after two: files joined along k in natural order", () => {
    expectForm(
      layDown((draft) => {
        const parts = cut(draft, 192, 384);
        const names = ["v-1", "v-2", "v-11"];
        names.forEach((name, part) => {
          draft.files[name] = parts[part];
        });
        draft.manifest.arrays.velocity.files = "v-*";
      }),
    );
  });

  it("a Fortran array v(bra, ket, direction, k) in stream output", () => {
    expectForm(
      layDown((draft) => {
        const numbers: number[] = [];
        for (let point = 0; point < points; point++) {
          for (let axis = 0; axis < 3; axis++) {
            for (let ket = 0; ket < bands; ket++) {
              for (let bra = 0; bra < bands; bra++) numbers.push(...velocityAt(point, axis, bra, ket));
            }
          }
        }
        draft.files["velocity.c128"] = bytesOf(Float64Array.from(numbers));
        draft.manifest.arrays.velocity.axes = ["k", "direction", "ket", "bra"];
      }),
    );
  });

  it("two files with k fastest, one of them .npy in Fortran order", () => {
    const part = (from: number, to: number) => {
      const numbers: number[] = [];
      for (let axis = 0; axis < 3; axis++) {
        for (let bra = 0; bra < bands; bra++) {
          for (let ket = 0; ket < bands; ket++) {
            for (let point = from; point < to; point++) numbers.push(...velocityAt(point, axis, bra, ket));
          }
        }
      }
      return bytesOf(Float64Array.from(numbers));
    };
    const directory = layDown((draft) => {
      // The first index of a Fortran-ordered shape runs fastest: (k, ket, bra, direction).
      const header = npyHeader("<c16", [3, bands, bands, 3]).toString("latin1").replace("False", "True ");
      draft.files["velocity.c128"] = part(0, 1);
      draft.files["velocity.npy"] = Buffer.concat([Buffer.from(header, "latin1"), part(1, 4)]);
      draft.manifest.arrays.velocity.files = ["velocity.c128", "velocity.npy"];
      draft.manifest.arrays.velocity.axes = ["direction", "bra", "ket", "k"];
    });
    expect(openGrid(directory).slowArrays).toEqual(["velocity"]);
    expectForm(directory);
  });

  it("big endian", () => {
    expectForm(
      layDown((draft) => {
        draft.files["velocity.c128"].swap64();
        draft.manifest.arrays.velocity.byteOrder = "big";
      }),
    );
  });

  it.each([
    ["hartree*bohr", hartreeEv * bohrA],
    ["rydberg*bohr", (hartreeEv / 2) * bohrA],
    // hbar in eV s times 1e10 angstrom per metre
    ["m/s", 6.582119569e-6],
  ])("velocities in %s", (unit, factor) => {
    expectForm(
      layDown((draft) => {
        draft.manifest.arrays.velocity.unit = unit;
      }),
      factor,
    );
  });

  it("lattice and level in other units", () => {
    const facts = openGrid(
      layDown((draft) => {
        draft.manifest.lattice.unit = "nm";
        draft.manifest.level = { unit: "hartree", fermi: 0.5 };
      }),
    ).facts;
    expect(facts.vectorsA[0]).toEqual([20, 0, 0]);
    expect(facts.fermiEv).toBeCloseTo(hartreeEv / 2, 12);
    expect(facts.electrons).toBeUndefined();
  });

  it("spin counted in halves of hbar is halved, a scalar moment may leave out its direction", () => {
    const directory = layDown((draft) => {
      const { moments } = draft.manifest.arrays;
      moments.spin.unit = "half-hbar";
      moments.layer = { files: "layer.f64", type: "float64", axes: ["k", "bra", "ket"], unit: "1", kind: "scalar" };
      draft.files["layer.f64"] = bytesOf(Float64Array.from({ length: 16 }, (_, i) => [1, 0.25, 0.25, -1][i % 4]));
    });
    const grid = openGrid(directory);
    expect(grid.facts.moments[1]).toEqual({
      name: "layer",
      directions: 1,
      kind: "scalar",
      underTimeReversal: "odd",
      unit: "1",
    });
    const moments = [
      { name: "spin", direction: 1 },
      { name: "layer", direction: 0 },
    ];
    const block = openReader(grid, { velocity: [], moments, hessian: false }).read(2, 2);
    const [x, y] = block.moments.get("spin") ?? [];
    expect(x).toBeUndefined();
    if (y === undefined) throw new Error("not read");
    expect(viewOf(y, 2, bands).get(1, 0, 1, 0)).toBeCloseTo(velocityAt(3, 1, 0, 1)[0] / 16000, 14);
    const scalar = block.moments.get("layer")?.[0];
    if (scalar === undefined) throw new Error("not read");
    expect(viewOf(scalar, 2, bands).get(1, 1, 0, 0)).toBe(0.25);
    expect(viewOf(scalar, 2, bands).get(1, 1, 0, 1)).toBe(0);
    expect(block.velocity).toEqual([undefined, undefined, undefined]);
    expect(block.hessian).toBeUndefined();
  });
});

describe("a reader", () => {
  it("refuses points and matrices that are not there", () => {
    const grid = openGrid(layDown());
    const want = { velocity: [0], moments: [], hessian: true };
    const reader = openReader(grid, want);
    expect(reader.read(0, 1).hessian).toBeUndefined();
    for (const [first, count] of [
      [-1, 1],
      [0, 0],
      [3, 2],
      [0.5, 1],
      [0, Number.NaN],
    ]) {
      expect(() => reader.read(first, count)).toThrow(/were asked for; the grid holds 0 to 3/);
    }
    expect(() => openReader(grid, { ...want, velocity: [3] })).toThrow(/direction 3 of velocity/);
    expect(() => openReader(grid, { ...want, moments: [{ name: "orbital", direction: 0 }] })).toThrow(
      /no moment "orbital"/,
    );
  });

  it("says so when a file shrinks while it is read", () => {
    const directory = layDown();
    const grid = openGrid(directory);
    const reader = openReader(grid, { velocity: [0], moments: [], hessian: false });
    writeFileSync(join(directory, "energy.f64"), Buffer.alloc(10));
    expect(() => reader.read(0, 4)).toThrow(/"energy\.f64" ends at byte 10; it had 64 bytes when the grid was opened/);
    renameSync(join(directory, "energy.f64"), join(directory, "gone"));
    const later = openReader(grid, { velocity: [0], moments: [], hessian: false });
    expect(() => later.read(0, 4)).toThrow(/cannot be read: there is no such file/);
  });

  it("hands out canonical data without copying", () => {
    const grid = openGrid(layDown());
    const block = openReader(grid, { velocity: [0, 2], moments: [], hessian: false }).read(0, 4);
    expect(block.velocity[0]).toMatchObject({ offset: 0, stride: 24 });
    expect(block.velocity[2]).toMatchObject({ offset: 16, stride: 24 });
    expect(block.velocity[0]?.data).toBe(block.velocity[2]?.data);
  });
});
