// shapes.ts: which slips in directions, lattice or order of the mesh turn velocities and steps into linear combinations of themselves?
import type { GridFacts, Triple } from "../grid/grid.js";
import { cross, dot, reciprocalVectors, type Vectors } from "../zone/lattice.js";

/** A slip: steps . matrix . stored velocity, times an unknown number, is the change of the energies. Rows of 3. */
export interface Shape {
  readonly kind: "as stated" | "axes" | "fractions" | "reciprocal" | "columns" | "mesh order";
  readonly matrix: readonly Triple[];
  readonly words: string;
  /** The same where the factor is negative; left out: `words`, and the sign is a slip besides. */
  readonly mirroredWords?: string;
  readonly cure: string;
}

type Rows = readonly Triple[];

const product = (a: Rows, b: Rows): Rows =>
  a.map((row) => [0, 1, 2].map((j) => row[0] * b[0][j] + row[1] * b[1][j] + row[2] * b[2][j]) as unknown as Triple);

const transposed = (a: Rows): Vectors =>
  [0, 1, 2].map((i) => [0, 1, 2].map((j) => a[j][i]) as unknown as Triple) as unknown as Vectors;

function inverse(rows: Vectors): Rows {
  const volume = dot(rows[0], cross(rows[1], rows[2]));
  const columns = [cross(rows[1], rows[2]), cross(rows[2], rows[0]), cross(rows[0], rows[1])];
  return transposed(columns.map((c) => c.map((x) => x / volume) as unknown as Triple));
}

const orders: readonly Triple[] = [
  [0, 1, 2],
  [1, 0, 2],
  [2, 1, 0],
  [0, 2, 1],
  [1, 2, 0],
  [2, 0, 1],
];

/** The overall sign is left to the factor. */
const signs: readonly Triple[] = [
  [1, 1, 1],
  [-1, 1, 1],
  [1, -1, 1],
  [1, 1, -1],
];

function axisShapes(periodic: 2 | 3): Shape[] {
  const shapes: Shape[] = [];
  for (const order of orders)
    for (const sign of signs) {
      if (periodic === 2 && (order[2] !== 2 || sign[2] < 0)) continue;
      const matrix = order.map((from, i) => [0, 1, 2].map((j) => (j === from ? sign[i] : 0)) as unknown as Triple);
      const names = (turn: 1 | -1): string =>
        order
          .slice(0, periodic)
          .map((from, i) => `${turn * sign[i] < 0 ? "-" : ""}${"xyz"[from]}`)
          .join(", ");
      const words = (turn: 1 | -1): string =>
        `the velocity's directions are permuted or mirrored: what is stored as ${names(turn)} belongs to x, y${periodic === 3 ? ", z" : ""}`;
      shapes.push({
        kind: "axes",
        matrix,
        words: words(1),
        mirroredWords: words(-1),
        cure: "Write the directions in the Cartesian axes of lattice.vectors, x first; or check that the mesh is written with i3 fastest.",
      });
    }
  return shapes.slice(1);
}

const identity: Rows = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];

/** Whether two matrices are the same up to a factor, in the plane for a layer. */
function alike(a: Rows, b: Rows, size: number): boolean {
  let [aa, ab, bb] = [0, 0, 0];
  for (let i = 0; i < size; i++)
    for (let j = 0; j < size; j++) {
      aa += a[i][j] * a[i][j];
      ab += a[i][j] * b[i][j];
      bb += b[i][j] * b[i][j];
    }
  return ab * ab > (1 - 1e-6) * aa * bb;
}

/** The slips that can be told apart on this lattice, simplest first. */
export function shapesOf({
  vectorsA,
  periodic,
  divisions,
}: Pick<GridFacts, "vectorsA" | "periodic" | "divisions">): Shape[] {
  const steps = reciprocalVectors(vectorsA);
  const back = inverse(steps);
  const perTurn = transposed(vectorsA).map((row) => row.map((x) => x / (2 * Math.PI)) as unknown as Triple);
  const all: Shape[] = [
    { kind: "as stated", matrix: identity, words: "", cure: "" },
    {
      kind: "reciprocal",
      matrix: product(back, vectorsA),
      words: "lattice.vectors are the reciprocal vectors b1, b2, b3, not the real ones",
      cure: "Give the real-space vectors a1, a2, a3.",
    },
    {
      kind: "fractions",
      matrix: perTurn,
      words: "the velocity is the derivative with respect to the fractions of b1, b2, b3, not to Cartesian k",
      cure: "Write dH/dk = (1/2 pi) sum_j a_j dH/df_j.",
    },
    {
      kind: "columns",
      matrix: product(back, reciprocalVectors(transposed(vectorsA))),
      words: "lattice.vectors stand in columns",
      cure: "Give a1, a2, a3 as rows.",
    },
    ...axisShapes(periodic),
    ...orders.slice(1).flatMap((order): Shape[] => {
      const same = order.every((from, j) => divisions[from] === divisions[j]);
      if (!same) return [];
      return [
        {
          kind: "mesh order",
          matrix: product(
            back,
            order.map((from) => steps[from]),
          ),
          words: `the points are in another order: the index along b1, b2, b3 is that of ${order.map((x) => `b${x + 1}`).join(", ")}`,
          cure: "Write the points with i3 fastest: flat index (i1 n2 + i2) n3 + i3.",
        },
      ];
    }),
  ];
  return all.filter((shape, i) => !all.slice(0, i).some((earlier) => alike(shape.matrix, earlier.matrix, periodic)));
}
