// stars.ts: do the stored points of a reduced grid, turned by its group, give back the full mesh, and which makes which?
import { dataFault } from "../base/errors.js";
import type { Triple } from "./grid.js";
import { applied, type KOperation } from "./symmetry.js";

/** How the full mesh is made of stored points. */
export interface Unfolding {
  readonly operations: readonly KOperation[];
  /** Stored points. */
  readonly stored: number;
  /** By flat mesh index: the stored point, and the operation that turns it into this one. */
  readonly storedOf: Int32Array;
  readonly operationOf: Uint16Array;
  /** Flat mesh index of each stored point. */
  readonly flatOf: Int32Array;
}

interface Mesh {
  readonly divisions: Triple;
  readonly offset: Triple;
}

/** Coordinates may be off by this part of a mesh step. */
const onMesh = 1e-4;
/** Weights may be off by this part of one mesh point's. */
const weightSlack = 1e-3;

/** Flat index of fractional k on the mesh, around the zone; -1 where it lies between mesh points. */
export function flatIndex(k: Triple, { divisions, offset }: Mesh): number {
  let flat = 0;
  for (const j of [0, 1, 2] as const) {
    const n = divisions[j];
    const position = k[j] * n - offset[j];
    const whole = Math.round(position);
    if (!(Math.abs(position - whole) < onMesh)) return -1;
    flat = flat * n + (((whole % n) + n) % n);
  }
  return flat;
}

const shown = (k: Triple): string => `(${k.map((x) => Number(x.toPrecision(8))).join(", ")})`;

/**
 * The unfolding of stored points (fractional, [point][3]) with weights. Throws a data Fault that names a point off the mesh, two
 * points of one star, a mesh point that no star reaches, or a weight that is not its star's.
 */
export function unfold(
  points: Float64Array,
  weights: Float64Array,
  operations: readonly KOperation[],
  mesh: Mesh,
  where: string,
): Unfolding {
  const total = mesh.divisions[0] * mesh.divisions[1] * mesh.divisions[2];
  const stored = weights.length;
  // Before memory is taken for a mesh that a manifest only claims.
  if (total > stored * operations.length)
    throw dataFault(
      `${where}: ${stored} points under ${operations.length} operations make at most ${stored * operations.length} of the ${total} mesh points`,
      "Write the missing points, or list the whole group.",
    );
  const storedOf = new Int32Array(total).fill(-1);
  const operationOf = new Uint16Array(total);
  const flatOf = new Int32Array(stored);
  for (let i = 0; i < stored; i++) {
    const k: Triple = [points[3 * i], points[3 * i + 1], points[3 * i + 2]];
    let size = 0;
    for (const [o, { action }] of operations.entries()) {
      const flat = flatIndex(applied(action, k), mesh);
      if (flat < 0)
        throw dataFault(
          `${where}: point ${i} ${shown(k)}, or its image under symmetry[${o}], is no point of the mesh`,
          "Write fractions of b1, b2, b3, and list a group that maps the mesh to itself.",
        );
      if (storedOf[flat] >= 0 && storedOf[flat] !== i)
        throw dataFault(
          `${where}: points ${storedOf[flat]} and ${i} ${shown(k)} are images of each other (symmetry[${o}])`,
          "Write one point of each star.",
        );
      if (storedOf[flat] < 0) {
        storedOf[flat] = i;
        operationOf[flat] = o;
        size++;
      }
    }
    flatOf[i] = flatIndex(k, mesh);
    checkWeight(weights[i], size / total, `${where}: point ${i} ${shown(k)}`, total);
  }
  const missing = storedOf.indexOf(-1);
  if (missing >= 0) {
    const left = storedOf.reduce((sum, each) => sum + (each < 0 ? 1 : 0), 0);
    throw dataFault(
      `${where}: the stars of the ${stored} points leave out ${left} of the ${total} mesh points, the first of flat index ${missing}`,
      "Write the missing points, or list the whole group.",
    );
  }
  return { operations, stored, storedOf, operationOf, flatOf };
}

function checkWeight(weight: number, expected: number, where: string, total: number): void {
  if (Math.abs(weight - expected) * total < weightSlack * Math.max(1, expected * total)) return;
  throw dataFault(
    `${where} has weight ${weight}; its star makes ${Math.round(expected * total)} of ${total} mesh points, ${Number(expected.toPrecision(8))}`,
    "Write weights that sum to 1: the size of each star over the number of mesh points.",
  );
}
