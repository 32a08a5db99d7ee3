// symmetry.ts: is a list of operations a group that maps the lattice to itself, and what does each do to k?
import { dataFault } from "../base/errors.js";
import type { Triple } from "./grid.js";
import type { Manifest } from "./manifest.js";

export type Rows = readonly [Triple, Triple, Triple];

/** A rotation (proper or not) in Cartesian axes, followed by time reversal where that is true. */
export interface Operation {
  readonly rotation: Rows;
  readonly timeReversal: boolean;
}

/** An operation with what it does to k in fractions of b1, b2, b3: f' = action f, whole numbers, time reversal's sign included. */
export interface KOperation extends Operation {
  readonly action: Rows;
}

/** Elements of rotations may be off by this much: they come from text. */
const roundOff = 1e-5;

const cure = "List every operation of the group once, rotations as orthogonal Cartesian matrices.";

const dot = (a: Triple, b: Triple): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

const built = (at: (i: 0 | 1 | 2, j: 0 | 1 | 2) => number): Rows =>
  ([0, 1, 2] as const).map((i) => ([0, 1, 2] as const).map((j) => at(i, j))) as unknown as Rows;

const column = (m: Rows, j: 0 | 1 | 2): Triple => [m[0][j], m[1][j], m[2][j]];

/** a b. */
export const productOf = (a: Rows, b: Rows): Rows => built((i, j) => dot(a[i], column(b, j)));

/** m v. */
export const applied = (m: Rows, v: Triple): Triple => [dot(m[0], v), dot(m[1], v), dot(m[2], v)];

/** 1 for a proper rotation, -1 for one with a reflection. */
export function determinant([a, b, c]: Rows): number {
  const [x, y, z] = [b[1] * c[2] - b[2] * c[1], b[2] * c[0] - b[0] * c[2], b[0] * c[1] - b[1] * c[0]];
  return a[0] * x + a[1] * y + a[2] * z;
}

/** The inverse of rows that span a volume. */
function inverseOf(m: Rows): Rows {
  const [a, b, c] = m;
  const cross = (u: Triple, v: Triple): Triple => [
    u[1] * v[2] - u[2] * v[1],
    u[2] * v[0] - u[0] * v[2],
    u[0] * v[1] - u[1] * v[0],
  ];
  const columns = [cross(b, c), cross(c, a), cross(a, b)];
  const volume = determinant(m);
  return built((i, j) => columns[j][i] / volume);
}

const isClose = (a: Rows, b: Rows): boolean =>
  a.every((row, i) => row.every((x, j) => Math.abs(x - b[i][j]) < roundOff));

const identity = built((i, j) => (i === j ? 1 : 0));

/** The same for equal operations of one lattice, and for no others. */
const keyOf = ({ action, timeReversal }: Pick<KOperation, "action" | "timeReversal">): string =>
  `${timeReversal} ${action.join(" ")}`;

const composed = (a: KOperation, b: KOperation): Pick<KOperation, "action" | "timeReversal"> => ({
  action: productOf(a.action, b.action),
  timeReversal: a.timeReversal !== b.timeReversal,
});

/** What an operation does to fractional k; undefined where it does not map the lattice of these rows to itself. */
export function kOperation(operation: Operation, vectorsA: Rows): KOperation | undefined {
  const exact = productOf(productOf(vectorsA, operation.rotation), inverseOf(vectorsA));
  const whole = built((i, j) => Math.round(exact[i][j]));
  if (!isClose(exact, whole)) return undefined;
  const sign = operation.timeReversal ? -1 : 1;
  return { ...operation, action: built((i, j) => sign * whole[i][j] + 0) };
}

/**
 * The operations of a manifest, checked: orthogonal, each mapping the lattice to itself, together a group. Throws a data Fault that
 * names the entry.
 */
export function checkedGroup(
  listed: NonNullable<Manifest["symmetry"]>,
  vectorsA: Rows,
  where: string,
): readonly KOperation[] {
  const indexOf = new Map<string, number>();
  const operations = listed.map((entry, i) => {
    const { rotation } = entry;
    if (!isClose(productOf(rotation, transposed(rotation)), identity))
      throw dataFault(`${where}: symmetry[${i}].rotation is not orthogonal`, cure);
    const operation = kOperation(entry, vectorsA);
    if (operation === undefined) throw dataFault(`${where}: symmetry[${i}] does not map the lattice to itself`, cure);
    const twin = indexOf.get(keyOf(operation));
    if (twin !== undefined) throw dataFault(`${where}: symmetry[${i}] is symmetry[${twin}] once more`, cure);
    indexOf.set(keyOf(operation), i);
    return operation;
  });
  if (!indexOf.has(keyOf({ action: identity, timeReversal: false })))
    throw dataFault(`${where}: symmetry lacks the identity`, cure);
  checkClosed(operations, indexOf, where);
  return operations;
}

/**
 * Throws a data Fault where a product of operations is not among them. Every operation is a product of generators, taken from the
 * list as they are needed: the list is closed if it is closed under these.
 */
function checkClosed(operations: readonly KOperation[], indexOf: ReadonlyMap<string, number>, where: string): void {
  const products: number[][] = [];
  const reached = new Set([indexOf.get(keyOf({ action: identity, timeReversal: false })) ?? 0]);
  for (const j of operations.keys()) {
    if (reached.has(j)) continue;
    const after = operations.map((a, i) => {
      const product = indexOf.get(keyOf(composed(a, operations[j])));
      if (product === undefined)
        throw dataFault(`${where}: symmetry is no group: symmetry[${i}] after symmetry[${j}] is not in the list`, cure);
      return product;
    });
    products.push(after);
    // A set that is walked while it grows: every operation reached is multiplied by every generator so far.
    for (const i of reached) for (const of of products) reached.add(of[i]);
  }
}

const transposed = (m: Rows): Rows => built((i, j) => m[j][i]);
