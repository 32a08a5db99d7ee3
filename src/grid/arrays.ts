// arrays.ts: where the numbers of one array lie: files, byte offsets, order of axes, type, factor to canonical units.
import { type Axis, directionNames, type NumberType, pairNames } from "./manifest.js";

/** One file of an array. It holds the stored k points firstPoint ... firstPoint + points - 1. */
export interface FilePlan {
  readonly name: string;
  readonly path: string;
  readonly bytes: number;
  readonly firstPoint: number;
  readonly points: number;
  /** Bytes before the first number. */
  readonly dataOffset: number;
  /** Set where the array has files of its own for each component: which one this holds. */
  readonly component?: number;
}

export type ArrayRole = "energy" | "velocity" | "moment" | "hessian";

/** One array, ready to be read; plain data. */
export interface ArrayPlan {
  /** As in the manifest: "energy", "velocity", "moments.spin", "hessian". */
  readonly name: string;
  readonly role: ArrayRole;
  /** Order in which the numbers lie in each file, slowest first; without direction or pair where each component has files of its own. */
  readonly axes: readonly Axis[];
  readonly points: number;
  readonly bands: number;
  /** Matrices per k point: directions or pairs; 1 for energies. */
  readonly components: number;
  readonly type: NumberType;
  readonly byteOrder: "little" | "big";
  /** Multiply by this to get canonical units. */
  readonly factor: number;
  readonly files: readonly FilePlan[];
  /** SHA-256 per file as the manifest gives them, lower case; undefined where it gives none. */
  readonly digests: readonly string[] | undefined;
}

/** Names of an array's components in order; one empty name where there is one component only. */
export function componentNamesOf({ role, components }: Pick<ArrayPlan, "role" | "components">): readonly string[] {
  if (components === 1) return [""];
  return role === "hessian" ? pairNames : directionNames;
}

/** True where each component has files of its own. */
export function isSplit({ files }: Pick<ArrayPlan, "files">): boolean {
  return files[0]?.component !== undefined;
}

/** Bytes of one element: a complex number is one element. */
export const elementBytes: Readonly<Record<NumberType, number>> = {
  float32: 4,
  float64: 8,
  complex64: 8,
  complex128: 16,
};

/** True for the complex types. */
export function isComplex(type: NumberType): boolean {
  return type === "complex64" || type === "complex128";
}

/** The size of `axis` in an array of which `points` k points are taken. */
export function axisSize(plan: Pick<ArrayPlan, "bands" | "components">, axis: Axis, points: number): number {
  if (axis === "k") return points;
  return axis === "direction" || axis === "pair" ? plan.components : plan.bands;
}

/** Bytes of one k point in a file of an array. */
export function bytesPerPoint(plan: Pick<ArrayPlan, "bands" | "components" | "axes" | "type">): number {
  return plan.axes.reduce((product, axis) => product * axisSize(plan, axis, 1), elementBytes[plan.type]);
}

/** The .npy type code of a type and byte order. */
export function npyType(type: NumberType, byteOrder: "little" | "big"): string {
  const codes = { float32: "f4", float64: "f8", complex64: "c8", complex128: "c16" } as const;
  return `${byteOrder === "little" ? "<" : ">"}${codes[type]}`;
}
