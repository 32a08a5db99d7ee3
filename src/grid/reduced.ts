// reduced.ts: the parts of a manifest that make a symmetry-reduced grid: which points are stored, and how do they unfold?
import { createHash } from "node:crypto";
import { dataFault } from "../base/errors.js";
import type { ArrayPlan } from "./arrays.js";
import { createScratch, energiesOf } from "./canonical.js";
import type { GridFacts } from "./grid.js";
import { createHandles } from "./handles.js";
import { quoted } from "./jsontext.js";
import { load } from "./load.js";
import type { ArrayEntry, Axis, Manifest } from "./manifest.js";
import { planArray } from "./plan.js";
import { type Unfolding, unfold } from "./stars.js";
import { checkedGroup } from "./symmetry.js";

/** The fields that only a reduced grid has; all or none of them. */
const fieldsOf = (manifest: Manifest) =>
  ({
    points: manifest.points,
    symmetry: manifest.symmetry,
    "arrays.point": manifest.arrays.point,
    "arrays.weight": manifest.arrays.weight,
  }) as const;

/** Whether the manifest is that of a reduced grid. Throws a data Fault where some of its fields are there and others not. */
export function isReduced(manifest: Manifest, where: string): boolean {
  const fields = Object.entries(fieldsOf(manifest));
  const given = fields.filter(([, value]) => value !== undefined).map(([name]) => name);
  if (given.length === 0) return false;
  const missing = fields.filter(([, value]) => value === undefined).map(([name]) => name);
  if (missing.length > 0)
    throw dataFault(
      `${where}: ${given.join(", ")} ${given.length > 1 ? "make" : "makes"} it a symmetry-reduced grid, but ${missing.join(", ")} ${missing.length > 1 ? "are" : "is"} missing`,
      "Give points, symmetry, arrays.point and arrays.weight; or none of them, and the full mesh.",
    );
  if (manifest.patch !== undefined)
    throw dataFault(`${where}: a patch is not symmetry-reduced`, "Write all points of every cell.");
  return true;
}

/** Plan of a small array of `columns` real numbers a point, read as energies are. */
function planNumbers(
  directory: string,
  entry: ArrayEntry,
  name: string,
  { points, columns, axes }: { readonly points: number; readonly columns: number; readonly axes: readonly Axis[] },
  taken: Map<string, string>,
): ArrayPlan {
  if ([...entry.axes].sort().join() !== [...axes].sort().join())
    throw dataFault(
      `arrays.${name}.axes is ${quoted(entry.axes)}: it must hold each of ${quoted(axes)} once, in any order`,
      "List the axes in the order in which the numbers lie in the file, slowest first.",
    );
  const along = entry.axes.map((axis): Axis => (axis === "direction" ? "band" : axis));
  const own = { ...entry, axes: along.includes("band") ? along : [...along, "band" as const] };
  return planArray(directory, own, { name, role: "energy", points, bands: columns, components: 1, factor: 1 }, taken);
}

function numbersOf(plan: ArrayPlan): Float64Array {
  const handles = createHandles();
  const scratch = createScratch();
  try {
    const stage = load({ plan, components: [0], scratch }, handles, 0, plan.points);
    return Float64Array.from(energiesOf(plan, stage, scratch));
  } finally {
    handles.close();
  }
}

/** The plans of the points and weights, and how they unfold. Throws data Faults for a group, points or weights that do not fit. */
export function openReduced(
  directory: string,
  manifest: Manifest,
  facts: Pick<GridFacts, "vectorsA" | "divisions" | "offset" | "periodic">,
  where: string,
  taken: Map<string, string>,
): { readonly unfolding: Unfolding; readonly arrays: readonly ArrayPlan[] } {
  const points = manifest.points ?? 0;
  const { point, weight } = manifest.arrays;
  if (point === undefined || weight === undefined) throw new Error("a reduced grid was taken for one");
  const plans = [
    planNumbers(directory, point, "point", { points, columns: 3, axes: ["k", "direction"] }, taken),
    planNumbers(directory, weight, "weight", { points, columns: 1, axes: ["k"] }, taken),
  ];
  const [fractions, weights] = plans.map(numbersOf);
  const bad = [...fractions, ...weights].findIndex((x) => !Number.isFinite(x));
  if (bad >= 0) {
    const [name, i] = bad < 3 * points ? ["point", Math.floor(bad / 3)] : ["weight", bad - 3 * points];
    throw dataFault(`${where}: arrays.${name} of point ${i} is not a finite number`, "Write it again.");
  }
  const { vectorsA, divisions, offset } = facts;
  const symmetry = manifest.symmetry ?? [];
  const key = createHash("sha256")
    .update(JSON.stringify([symmetry, vectorsA, divisions, offset, where]))
    .update(fractions)
    .update(weights)
    .digest("hex");
  if (last?.key !== key)
    last = { key, unfolding: unfold(fractions, weights, checkedGroup(symmetry, vectorsA, where), facts, where) };
  return { unfolding: last.unfolding, arrays: plans };
}

/** What was unfolded last, by its content: every task of a job opens the same grid. */
let last: { readonly key: string; readonly unfolding: Unfolding } | undefined;
