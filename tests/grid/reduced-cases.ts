// reduced-cases.ts: a small symmetry-reduced grid made by hand, and which ways there are to make it wrong.
import { productOf, type Rows } from "../../src/grid/symmetry.js";
import { type FaultCase, field } from "./fault-cases.js";
import { bytesOf, contents, type Draft } from "./handmade.js";

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
export const fourfold = [one, quarter, half, productOf(half, quarter)].map((rotation) => entry(rotation));

/** The handmade grid, 2 x 2 x 1 on a cubic cell, with three of its points: the fourfold axis makes (1/2, 0) of (0, 1/2). */
export function threePoints(draft: Draft): void {
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

/** What is wrong with the group, the points or the weights. */
export const reducedCases: FaultCase[] = [
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
