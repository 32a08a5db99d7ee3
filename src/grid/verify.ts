// verify.ts: are the numbers of a block what they claim: finite, ascending, Hermitian? One pass over each matrix.

import { type ArrayPlan, componentNamesOf } from "./arrays.js";
import type { Block, GridFacts, MatrixBlock } from "./grid.js";
import { firstNotFinite, type MatrixScan, scanMatrix, worstElement } from "./hermitian.js";

/** Energies may fall from one band to the next by this much, eV: the round-off of a diagonalisation. */
export const ascendingToleranceEv = 1e-9;
/** |M_ij - conj M_ji| may be this part of the matrix's largest element, by the width of the stored numbers in bits. */
export const hermitianTolerance = { 32: 1e-4, 64: 1e-6 } as const;
/** A matrix whose largest element is below this (canonical units) is measured against this: zeros carry round-off. */
export const smallestScale = 0.1;

/** Something wrong with the numbers at one k point. */
export interface Finding {
  readonly array: string;
  readonly problem: "not finite" | "not ascending" | "not Hermitian";
  /** Index of the stored k point, and its mesh indices. */
  readonly point: number;
  readonly mesh: readonly [number, number, number];
  /** Cartesian direction or pair; undefined for energies. */
  readonly component: number | undefined;
  /** The band, or bra and ket; counted from 0. */
  readonly bands: readonly number[];
  /** One sentence with all of this, and the file. */
  readonly message: string;
  readonly cure: string;
}

/** Takes one finding; may throw. */
export type Report = (finding: Finding) => void;

/** Mesh indices (i1, i2, i3) of flat index `point`; i3 runs fastest. */
export function meshIndices(divisions: readonly number[], point: number): [number, number, number] {
  const plane = Math.floor(point / divisions[2]);
  return [Math.floor(plane / divisions[1]), plane % divisions[1], point % divisions[2]];
}

/** Name of a component of an array: "x", "yz"; empty where there is one only. */
export function componentName(plan: Pick<ArrayPlan, "role" | "components">, component: number): string {
  return componentNamesOf(plan)[component];
}

/** Checks [k][band] energies. */
export function verifyEnergies(facts: GridFacts, plan: ArrayPlan, block: Block, report: Report): void {
  const { bands, energyEv, count } = block;
  for (let point = 0; point < count; point++) {
    const start = point * bands;
    let below = energyEv[start];
    let sum = Math.abs(below);
    let falls = 0;
    for (let band = 1; band < bands; band++) {
      const value = energyEv[start + band];
      if (value < below - ascendingToleranceEv) falls++;
      sum += Math.abs(value);
      below = value;
    }
    if (falls > 0 || !Number.isFinite(sum)) describeEnergies(facts, plan, block, point, report);
  }
}

function describeEnergies(facts: GridFacts, plan: ArrayPlan, block: Block, point: number, report: Report): void {
  const { bands, energyEv, first } = block;
  const row = energyEv.subarray(point * bands, (point + 1) * bands);
  const bad = row.findIndex((value) => !Number.isFinite(value));
  if (bad >= 0) {
    report(
      finding(
        facts,
        plan,
        first + point,
        { problem: "not finite", component: undefined, bands: [bad] },
        `it is ${row[bad]}`,
      ),
    );
    return;
  }
  for (let band = 1; band < bands; band++) {
    if (row[band] >= row[band - 1] - ascendingToleranceEv) continue;
    const values = `${shown(row[band - 1])} eV is followed by ${shown(row[band])} eV`;
    const bandsMet = [band - 1, band];
    report(
      finding(facts, plan, first + point, { problem: "not ascending", component: undefined, bands: bandsMet }, values),
    );
    return;
  }
}

/** Bits of one stored number of an array. */
export function storedBits(plan: ArrayPlan): 32 | 64 {
  return plan.type === "float32" || plan.type === "complex64" ? 32 : 64;
}

const scan: MatrixScan = { sum: 0, largest: 0, deviation: 0 };

/**
 * Checks the matrices of one component of a block. `measure`, where given, gets the scan of each finite matrix; the scan
 * object is used again.
 */
export function verifyMatrices(
  facts: GridFacts,
  plan: ArrayPlan,
  block: Block,
  matrices: MatrixBlock,
  component: number,
  report: Report,
  measure?: (point: number, scan: MatrixScan) => void,
): void {
  const { bands, count, first } = block;
  const { data } = matrices;
  const tolerance = hermitianTolerance[storedBits(plan)];
  for (let index = 0; index < count; index++) {
    const offset = matrices.offset + index * matrices.stride;
    scanMatrix(data, offset, bands, scan);
    const bad = Number.isFinite(scan.sum) ? undefined : firstNotFinite(data, offset, bands);
    if (bad !== undefined) {
      const fault = { problem: "not finite", component, bands: bad } as const;
      report(finding(facts, plan, first + index, fault, "an element is NaN or infinite"));
      continue;
    }
    measure?.(first + index, scan);
    const limit = tolerance * Math.max(scan.largest, smallestScale);
    if (scan.deviation <= limit) continue;
    const fault = { problem: "not Hermitian", component, bands: worstElement(data, offset, bands) } as const;
    const sizes = [scan.deviation, limit].map((value) => value.toExponential(2));
    const values = `it differs from its conjugate transpose by ${sizes[0]}, allowed is ${sizes[1]}`;
    report(finding(facts, plan, first + index, fault, values));
  }
}

function finding(
  facts: GridFacts,
  plan: ArrayPlan,
  point: number,
  fault: Pick<Finding, "problem" | "component" | "bands">,
  values: string,
): Finding {
  const mesh = meshIndices(facts.divisions, facts.storedFlat?.[point] ?? point);
  const name = fault.component === undefined ? "" : componentName(plan, fault.component);
  const which = fault.bands.length === 1 ? `band ${fault.bands[0]}` : `bands ${fault.bands.join(", ")}`;
  const ofComponent = plan.files.filter((part) => part.component === undefined || part.component === fault.component);
  const file = ofComponent.find((part) => point < part.firstPoint + part.points)?.name ?? "";
  return {
    array: plan.name,
    ...fault,
    point,
    mesh,
    message: `${plan.name}${name === "" ? "" : ` ${name}`} is ${fault.problem} at k point ${point} (${mesh.join(", ")}), ${which} (file ${JSON.stringify(file)}): ${values}; indices count from 0`,
    cure: cures[fault.problem],
  };
}

const cures: Record<Finding["problem"], string> = {
  "not finite": "Compute this k point again; check type and byteOrder in the manifest.",
  "not ascending": "Sort the bands at every k point, the matrices with them; check axes and type in the manifest.",
  "not Hermitian": "Check axes, type and byteOrder in the manifest, and that bra and ket are in one basis.",
};

/** Twelve digits: enough to see a fall beyond the tolerance, without the last bits of a decimal. */
function shown(value: number): number {
  return Number(value.toPrecision(12));
}
