// inspect-warnings.ts: what about a sound band grid is legal but worth knowing before its results are believed?
import type { Grid } from "../grid/open.js";
import { smallestSubMeshes } from "../zone/mesh.js";
import type { GridContents } from "./inspect-result.js";

const listed = (names: readonly string[]): string => names.join(", ");

/** Sentences, most important first; empty when there is nothing to say. */
export function warningsOf(contents: GridContents, { facts, slowArrays }: Grid): string[] {
  return [
    ...levelWarnings(contents),
    ...arrayWarnings(contents),
    ...meshWarnings(facts),
    ...(slowArrays.length === 0
      ? []
      : [`k is not the slowest axis of ${listed(slowArrays)}: legal, but read in many small pieces and slow`]),
  ];
}

/** Whether the level lies in the bands at all; whether it holds the stated electrons is a matter of health. */
function levelWarnings({ level, band_range_eV }: GridContents): string[] {
  if (level === null) return [];
  const warnings: string[] = [];
  const [lowest, highest] = [band_range_eV[0][0], band_range_eV[band_range_eV.length - 1][1]];
  if (level.reference_eV < lowest || level.reference_eV > highest) {
    warnings.push(
      `the reference level ${level.reference_eV.toFixed(3)} eV lies outside all bands (${lowest.toFixed(3)} to ${highest.toFixed(3)} eV): check level.fermi and its unit`,
    );
  }
  return warnings;
}

function arrayWarnings({ arrays, moments, hessian }: GridContents): string[] {
  const warnings: string[] = [];
  const empty = arrays.filter((array) => array.name !== "energy" && array.largest === 0).map((array) => array.name);
  if (empty.length > 0) warnings.push(`nothing but zeros in ${listed(empty)}`);
  const short = arrays
    .filter((array) => array.type === "float32" || array.type === "complex64")
    .map((array) => array.name);
  if (short.length > 0) {
    warnings.push(
      `32-bit numbers in ${listed(short)}: about seven digits, splittings below 1e-6 of the energies are noise`,
    );
  }
  if (moments.length === 0) warnings.push("no moments are stored: only charge responses can be computed");
  if (hessian === "none") {
    warnings.push(
      "no second derivative (hessian) is stored: continuing the bands between mesh points is one order less accurate",
    );
  }
  return warnings;
}

function meshWarnings(facts: Grid["facts"]): string[] {
  const used = facts.divisions.slice(0, facts.periodic);
  if (used.includes(1)) return ["one direction of the mesh has a single k point: nothing can be resolved along it"];
  if (smallestSubMeshes(facts) !== undefined) return [];
  return [
    `the mesh ${used.join(" x ")} contains no coarser regular mesh (no common factor 2, 3 or 5): results have no sampling error bar`,
  ];
}
