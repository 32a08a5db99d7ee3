// pack-facts.test.ts: what do the headers of .npy files tell a description that leaves it out, and what do they contradict?
import { mkdirSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { npyHeader } from "../../src/grid/npy.js";
import { openManifest } from "../../src/grid/open.js";
import { completeFacts } from "../../src/grid/pack-facts.js";
import { openReader, viewOf, wantAll } from "../../src/grid/reader.js";
import { bytesOf, contents, energyAt, type Loose, manifest, velocityAt } from "./handmade.js";
import { scratchDirectory } from "./make.js";

/** A directory with the handmade numbers as .npy, k spelled out as (2, 2, 1), and the shortest description of them. */
function shortest(): { directory: string; facts: Loose } {
  const directory = scratchDirectory();
  const save = (name: string, type: string, shape: number[]): void => {
    const numbers = contents()[`${name}.${type === "<f8" ? "f64" : "c128"}`];
    writeFileSync(join(directory, `${name}.npy`), Buffer.concat([npyHeader(type, shape), bytesOf(numbers)]));
  };
  save("energy", "<f8", [2, 2, 1, 2]);
  save("velocity", "<c16", [2, 2, 1, 3, 2, 2]);
  save("spin", "<c16", [4, 3, 2, 2]);
  const { lattice, electronsPerBand, level } = manifest();
  const arrays = {
    energy: { files: "energy.npy", unit: "eV" },
    velocity: { files: join(directory, "velocity.npy"), unit: "eV*angstrom" },
    moments: { spin: { files: "../*/spin.npy", unit: "hbar" } },
  };
  arrays.moments.spin.files = `../${directory.split("/").at(-1)}/spin.npy`;
  return { directory, facts: { lattice, electronsPerBand, level, arrays } };
}

function opened({ directory, facts }: ReturnType<typeof shortest>) {
  const path = join(directory, "facts.json");
  writeFileSync(path, JSON.stringify(facts));
  const { source, inferred } = completeFacts(path);
  return { grid: openManifest(source), inferred };
}

const messageOf = (spoil: (draft: ReturnType<typeof shortest>) => void): string => {
  const draft = shortest();
  spoil(draft);
  try {
    opened(draft);
  } catch (error) {
    if (error instanceof Error) return error.message;
  }
  return "nothing was thrown";
};

describe("a description", () => {
  it("may leave out what the headers tell; its files may lie anywhere", () => {
    const { grid, inferred } = opened(shortest());
    expect(grid.facts).toMatchObject({ divisions: [2, 2, 1], offset: [0, 0, 0], bands: 2, points: 4, hessian: "none" });
    const block = openReader(grid, wantAll(grid)).read(0, 4);
    for (let point = 0; point < 4; point++) {
      for (const band of [0, 1]) expect(block.energyEv[2 * point + band]).toBe(energyAt(point, band));
      for (const axis of [0, 1, 2]) {
        const [velocity, spin] = [block.velocity[axis], block.moments.get("spin")?.[axis]];
        if (velocity === undefined || spin === undefined) throw new Error("not read");
        const [re, im] = velocityAt(point, axis, 1, 0);
        expect(viewOf(velocity, 4, 2).get(point, 1, 0, 0)).toBe(re);
        expect(viewOf(velocity, 4, 2).get(point, 1, 0, 1)).toBe(im);
        expect(viewOf(spin, 4, 2).get(point, 1, 0, 0)).toBe(re / 8000);
      }
    }
    expect(inferred).toEqual([
      "arrays.energy: type float64 (from the header of energy.npy); indices k, band (assumed)",
      "arrays.velocity: type complex128 (from the header of velocity.npy); indices k, direction, bra, ket (assumed)",
      "arrays.moments.spin: type complex128 (from the header of spin.npy); indices k, direction, bra, ket (assumed)",
      "bands: 2 (from the shape (2, 2, 1, 2) of energy.npy)",
      "mesh.divisions: 2, 2, 1 (from the shape (2, 2, 1, 2) of energy.npy); mesh.offset: 0, 0, 0 (assumed)",
    ]);
  });

  it("that is a whole manifest is taken as it stands, and nothing is inferred", () => {
    const draft = shortest();
    const files = contents();
    for (const [name, numbers] of Object.entries(files)) writeFileSync(join(draft.directory, name), bytesOf(numbers));
    draft.facts = manifest();
    const { grid, inferred } = opened(draft);
    expect(inferred).toEqual([]);
    expect(grid.facts).toMatchObject({ title: "by hand", hessian: "free-electron", points: 4 });
  });

  it("keeps what it states: offset, title, big-endian files", () => {
    const draft = shortest();
    draft.facts.mesh = { offset: [0.5, 0, 0] };
    const swapped = Buffer.from(bytesOf(contents()["energy.f64"])).swap64();
    writeFileSync(join(draft.directory, "energy.npy"), Buffer.concat([npyHeader(">f8", [2, 2, 1, 2]), swapped]));
    const { grid, inferred } = opened(draft);
    expect(grid.facts.offset).toEqual([0.5, 0, 0]);
    expect(inferred.join()).not.toMatch(/offset/);
    expect(openReader(grid, { velocity: [], moments: [], hessian: false }).read(3, 1).energyEv[1]).toBe(energyAt(3, 1));
  });

  it("of a layer may spell out k as (n1, n2)", () => {
    const draft = shortest();
    draft.facts.lattice.periodic = 2;
    const save = (name: string, type: string, shape: number[], from: string): void =>
      writeFileSync(join(draft.directory, name), Buffer.concat([npyHeader(type, shape), bytesOf(contents()[from])]));
    save("energy.npy", "<f8", [2, 2, 2], "energy.f64");
    save("velocity.npy", "<c16", [2, 2, 3, 2, 2], "velocity.c128");
    expect(opened(draft).grid.facts).toMatchObject({ divisions: [2, 2, 1], bands: 2, periodic: 2 });
  });

  it("of a scalar moment may have an index of size 1 for its direction, or none", () => {
    for (const shape of [
      [4, 2, 2],
      [4, 1, 2, 2],
      [2, 2, 1, 1, 2, 2],
    ]) {
      const draft = shortest();
      const numbers = contents()
        ["spin.c128"].subarray(0, 32)
        .map((x, i) => (i % 2 === 0 && ((i >> 1) % 4) % 3 === 0 ? x : 0));
      writeFileSync(join(draft.directory, "layer.npy"), Buffer.concat([npyHeader("<c16", shape), bytesOf(numbers)]));
      draft.facts.arrays.moments.layer = { files: "layer.npy", unit: "1", kind: "scalar" };
      const { grid } = opened(draft);
      const want = { velocity: [], moments: [{ name: "layer", direction: 0 }], hessian: false };
      const layer = openReader(grid, want).read(0, 4).moments.get("layer")?.[0];
      if (layer === undefined) throw new Error("not read");
      expect(viewOf(layer, 4, 2).get(3, 1, 1, 0)).toBe(numbers[30]);
    }
  });

  it("may give the files of every component, with k first as ever", () => {
    const draft = shortest();
    const whole = contents()["velocity.c128"];
    for (const [axis, name] of ["x", "y", "z"].entries()) {
      const rows = [0, 1, 2, 3].map((k) => whole.subarray(24 * k + 8 * axis, 24 * k + 8 * axis + 8));
      const numbers = Float64Array.from(rows.flatMap((row) => [...row]));
      writeFileSync(
        join(draft.directory, `v${name}.npy`),
        Buffer.concat([npyHeader("<c16", [4, 2, 2]), bytesOf(numbers)]),
      );
    }
    draft.facts.arrays.velocity.files = { x: "vx.npy", y: "vy.npy", z: "vz.npy" };
    const { grid } = opened(draft);
    const block = openReader(grid, { velocity: [1], moments: [], hessian: false }).read(0, 4);
    const velocity = block.velocity[1];
    if (velocity === undefined) throw new Error("not read");
    expect(viewOf(velocity, 4, 2).get(2, 0, 1, 0)).toBe(velocityAt(2, 1, 0, 1)[0]);
  });
});

describe("a description is refused", () => {
  const set = (path: string, value: unknown) => (draft: { facts: Loose }) => {
    const steps = path.split(".");
    const last = steps.pop() ?? "";
    let here = draft.facts;
    for (const step of steps) here = here[step];
    if (value === undefined) delete here[last];
    else here[last] = value;
  };
  const npy =
    (name: string, type: string, shape: number[], order = "False") =>
    (draft: { directory: string }) => {
      const header = npyHeader(type, shape)
        .toString("latin1")
        .replace("'fortran_order': False", `'fortran_order': ${order}`);
      const bytes = Buffer.from(header.replace(/ \n$/, order === "True" ? "  \n" : " \n"), "latin1");
      writeFileSync(join(draft.directory, name), Buffer.concat([bytes, bytesOf(contents()["energy.f64"])]));
    };

  it.each<[string, (draft: ReturnType<typeof shortest>) => void, RegExp]>([
    ["without a lattice", set("lattice", undefined), /^facts\.json: lattice is missing/],
    ["with an unknown field", set("band", 2), /^facts\.json: band is not a field of the format/],
    ["with no unit", set("arrays.velocity.unit", undefined), /arrays\.velocity\.unit is missing/],
    ["with a unit of something else", set("arrays.velocity.unit", "eV"), /arrays\.velocity\.unit is "eV"/],
    [
      "that contradicts the header's type",
      set("arrays.velocity.type", "complex64"),
      /says type "<c16"; expected "<c8"/,
    ],
    ["that contradicts the header's shape", set("bands", 3), /says shape \(2, 2, 1, 2\); expected \(4, 3\)/],
    ["with another mesh", set("mesh", { divisions: [1, 2, 2] }), /says shape \(2, 2, 1, 2\); expected \(4, 2\)/],
    ["with whole numbers", npy("energy.npy", "<i8", [2, 2, 1, 2]), /holds numbers of type "<i8"; expected f4 or f8/],
    ["with too few indices", npy("energy.npy", "<f8", [8]), /has the shape \(8\); expected the indices k, band/],
    ["with i1 running fastest", npy("energy.npy", "<f8", [2, 2, 1, 2], "True"), /in Fortran order, so i1 runs fastest/],
    [
      "with a file that is not there",
      set("arrays.energy.files", "no.npy"),
      /"no\.npy" cannot be read: there is no such/,
    ],
    ["with a directory for a file", set("arrays.energy.files", "."), /is a directory, not a regular file/],
    ["with a list of odd things", set("arrays.energy.files", [1, {}]), /arrays\.energy\.files/],
    ["with arrays that are no object", set("arrays", 7), /^facts\.json: arrays is 7/],
    ["with null for an array", set("arrays.energy", null), /^facts\.json: arrays\.energy is null/],
    [
      "with a patch",
      set("patch", { divisions: [2, 2, 2], cells: "c.i32" }),
      /patch cannot be packed from a description/,
    ],
    ["with patches", set("patches", ["patch-01"]), /patches cannot be packed from a description/],
  ])("%s", (_, spoil, message) => {
    expect(messageOf(spoil)).toMatch(message);
  });

  it("when raw numbers leave out their type or the bands", () => {
    const raw = (draft: ReturnType<typeof shortest>): void => {
      writeFileSync(join(draft.directory, "energy.f64"), bytesOf(contents()["energy.f64"]));
      draft.facts.arrays.energy.files = "energy.f64";
    };
    expect(messageOf(raw)).toMatch(/^facts\.json: (bands|arrays\.energy\.type) is missing/);
  });

  it("when it is no file, no JSON, or no object", () => {
    const directory = scratchDirectory();
    expect(() => completeFacts(join(directory, "none.json"))).toThrow(/there is no such file/);
    mkdirSync(join(directory, "d.json"));
    expect(() => completeFacts(join(directory, "d.json"))).toThrow(/is not a regular file/);
    for (const [text, message] of [
      ["{", /not JSON/],
      ["[]", /it is \[\], not an object/],
      ['{"bands": 1, "bands": 2}', /twice/],
    ] as const) {
      writeFileSync(join(directory, "facts.json"), text);
      expect(() => completeFacts(join(directory, "facts.json"))).toThrow(message);
    }
  });
});
