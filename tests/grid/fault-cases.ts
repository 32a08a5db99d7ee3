// fault-cases.ts: which kinds of bad band grid are there? Shared by the tests of the reader and of the command line.
import { execFileSync } from "node:child_process";
import { linkSync, mkdirSync, symlinkSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { npyHeader } from "../../src/grid/npy.js";
import { bytesOf, contents, type Draft } from "./handmade.js";
import { scratchDirectory } from "./make.js";

/** What is wrong, how a sound grid is spoilt, and what the message must say. */
export type FaultCase = [name: string, spoil: (draft: Draft) => void, message: RegExp];

/** Puts `value` in place of the manifest's field at `path`; undefined removes it. */
export const field = (path: string, value: unknown) => (draft: Draft) => {
  const steps = path.split(".");
  const last = steps.pop() ?? "";
  let here = draft.manifest;
  for (const step of steps) here = here[step];
  if (value === undefined) delete here[last];
  else here[last] = value;
};

const number = (file: string, index: number, value: number) => (draft: Draft) => {
  draft.files[file].writeDoubleLE(value, 8 * index);
};

const outside = (): string => {
  const path = join(scratchDirectory(), "outside.f64");
  writeFileSync(path, bytesOf(contents()["energy.f64"]));
  return path;
};

const split = (draft: Draft, ...cuts: number[]) => {
  const whole = draft.files["velocity.c128"];
  delete draft.files["velocity.c128"];
  [0, ...cuts].forEach((start, part) => {
    draft.files[`v-${part + 1}.c128`] = whole.subarray(start, cuts[part] ?? whole.length);
  });
  draft.manifest.arrays.velocity.files = "v-*.c128";
};

const npy = (descr: string, shape: number[]) => (draft: Draft) => {
  draft.files["energy.npy"] = Buffer.concat([npyHeader(descr, shape), draft.files["energy.f64"]]);
  draft.manifest.arrays.energy.files = "energy.npy";
};

const text = (value: string | Buffer) => (draft: Draft) => {
  draft.text = value;
};

const json = (draft: Draft) => JSON.stringify(draft.manifest);

/** One of each kind of bad band grid: text, fields, files, .npy, numbers. */
export const faultCases: FaultCase[] = [
  // the manifest's text
  ["no JSON", text('{\n"format": }'), /^bandgrid\.json is not JSON: Unexpected token/],
  ["JSON that ends early", text('{"format"'), /not JSON/],
  ["an empty manifest", text(""), /not JSON/],
  ["a list in place of an object", text("[]"), /the manifest is \[\]: it must be an object/],
  [
    "NaN",
    (draft) => {
      draft.text = json(draft).replace('"fermi":0.5', '"fermi":NaN');
    },
    /not JSON/,
  ],
  ["no UTF-8", text(Buffer.from([0x7b, 0xff, 0x7d])), /not UTF-8/],
  ["deep nesting", text("[".repeat(100_000)), /nested deeper than 32/],
  [
    "a key twice",
    (draft) => {
      draft.text = json(draft).replace('"bands":2', '"bands":2,"b\\u0061nds":3');
    },
    /names "bands" twice/,
  ],
  [
    "__proto__",
    (draft) => {
      draft.text = json(draft).replace('"bands":2', '"bands":2,"__proto__":{}');
    },
    /__proto__/,
  ],
  ["a huge manifest", text(" ".repeat(4 * 1024 * 1024 + 1)), /4194305 bytes/],
  [
    "a number that overflows",
    (draft) => {
      draft.text = json(draft).replace('"fermi":0.5', '"fermi":1e999');
    },
    /level\.fermi .*finite number/,
  ],
  // fields
  ["another format", field("format", "bandgrid/2"), /format is "bandgrid\/2": it must be "bandgrid\/1"/],
  ["an unknown field", field("mesh.ofset", [0, 0, 0]), /mesh\.ofset is not a field.*divisions, offset/],
  ["an unknown field with control characters", field("a\n\u001b[31mb", 1), /"a\\n\\u001b\[31mb" is not a field/],
  [
    "a misspelt field",
    (draft) => {
      draft.manifest.latice = draft.manifest.lattice;
      delete draft.manifest.lattice;
    },
    /latice is not a field.*lattice.*\(and 1 more\)/,
  ],
  ["no lattice", field("lattice", undefined), /lattice is missing/],
  [
    "an unknown length unit",
    field("lattice.unit", "Angstrom"),
    /lattice\.unit is "Angstrom": it must be "angstrom" or "bohr" or "nm"/,
  ],
  [
    "two lattice vectors",
    field("lattice.vectors", [
      [1, 0, 0],
      [0, 1, 0],
    ]),
    /lattice\.vectors.*length is at least 3/,
  ],
  [
    "a flat lattice",
    field("lattice.vectors", [
      [1, 0, 0],
      [0, 1, 0],
      [1, 1, 0],
    ]),
    /span no volume/,
  ],
  ["one periodic direction", field("lattice.periodic", 1), /lattice\.periodic is 1: it must be 3 or 2/],
  [
    "a tilted layer",
    (draft) => {
      field("lattice.periodic", 2)(draft);
      field("lattice.vectors", [
        [2, 0, 0],
        [0, 2, 0],
        [0.1, 0, 2],
      ])(draft);
    },
    /not normal/,
  ],
  [
    "a thick layer",
    (draft) => {
      field("lattice.periodic", 2)(draft);
      field("mesh.divisions", [2, 1, 2])(draft);
    },
    /mesh\.divisions\[2\] is 2/,
  ],
  ["no divisions", field("mesh.divisions", [0, 2, 2]), /mesh\.divisions\[0\] is 0: it must be at least 1/],
  ["half a division", field("mesh.divisions", [1.5, 2, 2]), /mesh\.divisions\[0\] is 1\.5: it must be a whole number/],
  [
    "more points than can be counted",
    field("mesh.divisions", [2 ** 30, 2 ** 30, 2]),
    /more k points than can be counted/,
  ],
  ["more bytes than can be counted", field("mesh.divisions", [2 ** 30, 2 ** 22, 1]), /cannot be counted in bytes/],
  ["an offset of 1", field("mesh.offset", [0, 1, 0]), /mesh\.offset\[1\] is 1: it must lie in \[0, 1\)/],
  ["no mesh", field("mesh", undefined), /mesh is missing/],
  ["no bands", field("bands", 0), /bands is 0/],
  ["too many bands", field("bands", 1e6), /bands is 1000000: it must be at most 13000/],
  ["three electrons per band", field("electronsPerBand", 3), /electronsPerBand is 3: it must be 1 or 2/],
  ["no level", field("level", { unit: "eV" }), /neither fermi nor electrons/],
  ["too many electrons", field("level.electrons", 2.5), /level\.electrons is 2\.5.*= 2/],
  ["negative electrons", field("level.electrons", -1), /level\.electrons is -1/],
  ["a text as level", field("level.fermi", "6"), /level\.fermi is "6": it must be a finite number/],
  ["no velocity", field("arrays.velocity", undefined), /arrays\.velocity is missing/],
  [
    "complex energies",
    field("arrays.energy.type", "complex128"),
    /arrays\.energy\.type is "complex128": eigenvalues are real/,
  ],
  [
    "an unknown type",
    field("arrays.energy.type", "float16"),
    /arrays\.energy\.type is "float16".*"float32" or "float64"/,
  ],
  [
    "an energy unit for velocities",
    field("arrays.velocity.unit", "eV"),
    /arrays\.velocity\.unit is "eV": .*"eV\*angstrom"/,
  ],
  [
    "an axis twice",
    field("arrays.velocity.axes", ["k", "bra", "bra", "ket"]),
    /arrays\.velocity\.axes .*each of .* once/,
  ],
  ["an axis too few", field("arrays.velocity.axes", ["k", "bra", "ket"]), /arrays\.velocity\.axes/],
  ["an unknown axis", field("arrays.energy.axes", ["k", "bands"]), /arrays\.energy\.axes\[1\] is "bands"/],
  [
    "an unknown byte order",
    field("arrays.energy.byteOrder", "middle"),
    /byteOrder is "middle": it must be "little" or "big"/,
  ],
  [
    "an unknown word for the hessian",
    field("arrays.hessian", "free"),
    /arrays\.hessian is "free": it must be "free-electron"/,
  ],
  [
    "an unknown field in a hessian",
    field("arrays.hessian", {
      files: "h",
      type: "complex128",
      axes: ["k", "pair", "bra", "ket"],
      unit: "eV*angstrom^2",
      kind: 1,
    }),
    /arrays\.hessian\.kind is not a field/,
  ],
  [
    "a moment's name with a colon",
    (draft) => {
      draft.manifest.arrays.moments["a:b"] = draft.manifest.arrays.moments.spin;
    },
    /arrays\.moments\."a:b" is not a name/,
  ],
  [
    "a moment called charge",
    (draft) => {
      draft.manifest.arrays.moments = { charge: draft.manifest.arrays.moments.spin };
    },
    /charge/,
  ],
  ["a tag that is a list", field("tags", { a: [1] }), /tags\.a is \[1\]/],
  [
    "a digest that is none",
    field("arrays.energy.sha256", "abc"),
    /arrays\.energy\.sha256 is "abc": it must be 64 hexadecimal digits/,
  ],
  ["too few digests", field("arrays.energy.sha256", []), /sha256 holds 0 digests for 1 files/],
  // patches, and parts of a symmetry-reduced grid
  [
    "a patch",
    field("patch", { divisions: [2, 2, 2], cells: "cells.i32" }),
    /this is a patch: it replaces some cells of a parent's mesh/,
  ],
  ["patches", field("patches", ["patch-01"]), /patches: "patch-01" cannot be read/],
  [
    "points without a symmetry",
    field("points", 2),
    /points makes it a symmetry-reduced grid, but symmetry, arrays\.point, arrays\.weight are missing/,
  ],
  [
    "a symmetry without points",
    field("symmetry", [
      {
        rotation: [
          [1, 0, 0],
          [0, 1, 0],
          [0, 0, 1],
        ],
        timeReversal: true,
      },
    ]),
    /symmetry makes it a symmetry-reduced grid, but points, arrays\.point, arrays\.weight are missing/,
  ],
  [
    "weights without points",
    field("arrays.weight", { files: "w", type: "float64", axes: ["k"] }),
    /arrays\.weight makes it a symmetry-reduced grid, but points, symmetry, arrays\.point are missing/,
  ],
  // files
  [
    "a missing file",
    (draft) => {
      delete draft.files["spin.c128"];
    },
    /arrays\.moments\.spin: file "spin\.c128" cannot be read: there is no such file/,
  ],
  ["a pattern without a match", field("arrays.velocity.files", "w-*.c128"), /no file matches "w-\*\.c128"/],
  ["a hostile pattern", field("arrays.velocity.files", "*a*a*a*a*a*a*a*b"), /more than 4 stars/],
  ["an absolute path", field("arrays.energy.files", "/etc/passwd"), /absolute path/],
  ["a path with ..", field("arrays.energy.files", "a/../../energy.f64"), /leads out/],
  ["a pattern with ..", field("arrays.energy.files", "../*/energy.f64"), /leads out/],
  ["a zero byte in a name", field("arrays.energy.files", "a\0b"), /zero byte/],
  [
    "a link out of the directory",
    (draft) => {
      symlinkSync(outside(), join(draft.directory, "link"));
      field("arrays.energy.files", "link")(draft);
    },
    /link that leads out/,
  ],
  [
    "a linked directory",
    (draft) => {
      symlinkSync(join(outside(), ".."), join(draft.directory, "away"));
      field("arrays.energy.files", "away/outside.f64")(draft);
    },
    /link that leads out/,
  ],
  [
    "links in a circle",
    (draft) => {
      symlinkSync("loop", join(draft.directory, "loop"));
      field("arrays.energy.files", "loop")(draft);
    },
    /circle/,
  ],
  [
    "a directory as a file",
    (draft) => {
      mkdirSync(join(draft.directory, "energies"));
      field("arrays.energy.files", "energies")(draft);
    },
    /is a directory/,
  ],
  ["the grid's own directory", field("arrays.energy.files", "."), /"\."/],
  [
    "a pipe",
    (draft) => {
      execFileSync("mkfifo", [join(draft.directory, "pipe")]);
      field("arrays.energy.files", "pipe")(draft);
    },
    /a pipe/,
  ],
  [
    "a device",
    (draft) => {
      symlinkSync("/dev/zero", join(draft.directory, "zero"));
      field("arrays.energy.files", "zero")(draft);
    },
    /leads out/,
  ],
  [
    "a file twice in one array",
    field("arrays.energy.files", ["energy.f64", "energy.*"]),
    /"energy\.f64" is named twice/,
  ],
  [
    "a file in two arrays",
    field("arrays.moments.spin.files", "velocity.c128"),
    /arrays\.moments\.spin: file "velocity\.c128" is named twice/,
  ],
  [
    "two names of one file",
    (draft) => {
      writeFileSync(join(draft.directory, "a.c128"), draft.files["spin.c128"]);
      linkSync(join(draft.directory, "a.c128"), join(draft.directory, "b.c128"));
      field("arrays.moments.spin.files", ["a.c128", "b.c128"])(draft);
    },
    /"a\.c128" and "b\.c128" are one file/,
  ],
  [
    "a short file",
    (draft) => {
      draft.files["energy.f64"] = draft.files["energy.f64"].subarray(0, 60);
    },
    /"energy\.f64" holds 60 bytes.*expected 64 \(4 k x 2 band x 8 bytes\), so 4 are missing/,
  ],
  [
    "a long file",
    (draft) => {
      draft.files["energy.f64"] = Buffer.concat([draft.files["energy.f64"], Buffer.alloc(8)]);
    },
    /so 8 are too many/,
  ],
  [
    "an empty file",
    (draft) => {
      draft.files["energy.f64"] = Buffer.alloc(0);
    },
    /holds 0 bytes/,
  ],
  ["a point cut in two", (draft) => split(draft, 200), /file "v-1\.c128" holds 200 bytes.*k points of 192 bytes/],
  ["an empty part", (draft) => split(draft, 192, 192), /file "v-2\.c128" holds 0 bytes/],
  [
    "a missing part",
    (draft) => {
      split(draft, 192, 384);
      delete draft.files["v-2.c128"];
    },
    /2 files hold 3 k points; expected 4, so 1 are missing/,
  ],
  [
    "a part too many",
    (draft) => {
      split(draft, 192, 384);
      draft.files["v-9.c128"] = draft.files["v-1.c128"];
    },
    /so 1 are too many/,
  ],
  // .npy
  ["another type in .npy", npy("<f4", [4, 2]), /type "<f4"; expected "<f8"/],
  ["another byte order in .npy", npy(">f8", [4, 2]), /type ">f8"; expected "<f8"/],
  ["another shape in .npy", npy("<f8", [2, 4]), /shape \(2, 4\); expected \(4, 2\) = \(k, band\)/],
  ["a flat shape in .npy", npy("<f8", [8]), /shape \(8\); expected \(4, 2\)/],
  [
    "a .npy without its mark",
    (draft) => {
      draft.files["energy.npy"] = draft.files["energy.f64"];
      field("arrays.energy.files", "energy.npy")(draft);
    },
    /does not begin with the mark/,
  ],
  [
    "a .npy cut short",
    (draft) => {
      npy("<f8", [4, 2])(draft);
      draft.files["energy.npy"] = draft.files["energy.npy"].subarray(0, 150);
    },
    /holds 22 bytes of numbers/,
  ],
  // numbers
  [
    "NaN in energies",
    number("energy.f64", 3, NaN),
    /^energy is not finite at k point 1 \(0, 1, 0\), band 1 \(file "energy\.f64"\)/,
  ],
  ["an infinite energy", number("energy.f64", 0, -Infinity), /energy is not finite at k point 0 \(0, 0, 0\), band 0/],
  [
    "falling energies",
    number("energy.f64", 6, 20),
    /energy is not ascending at k point 3 \(1, 1, 0\), bands 0, 1.*20 eV is followed by 12\.8/,
  ],
  [
    "NaN in a velocity",
    number("velocity.c128", 24 + 16 + 2, NaN),
    /velocity z is not finite at k point 1 \(0, 1, 0\), bands 0, 1/,
  ],
  [
    "an infinite imaginary part",
    number("velocity.c128", 7, Infinity),
    /velocity x is not finite at k point 0 \(0, 0, 0\), bands 1, 1/,
  ],
  [
    "a velocity that is not Hermitian",
    number("velocity.c128", 48 + 8 + 3, 5),
    /velocity y is not Hermitian at k point 2 \(1, 0, 0\), bands 0, 1.*allowed is 3\.11e-3/,
  ],
  [
    "a diagonal that is not real",
    number("spin.c128", 1, 1e-3),
    /moments\.spin x is not Hermitian at k point 0 \(0, 0, 0\), bands 0, 0/,
  ],
  ["a wrong byte order", field("arrays.energy.byteOrder", "big"), /energy is not/],
];
