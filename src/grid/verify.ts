// verify.ts: are the numbers of a block what they claim: finite, ascending, Hermitian? One pass over each matrix.
import type { Block, GridFacts, MatrixBlock } from "./grid.js";
import type { ArrayPlan } from "./plan.js";

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

/** Largest deviation from Hermiticity met in one matrix. */
export interface Asymmetry {
  /** Largest |Re M_ij - Re M_ji| or |Im M_ij + Im M_ji|, canonical units. */
  readonly deviation: number;
  /** Largest |Re| or |Im| of an element. */
  readonly largest: number;
  readonly bra: number;
  readonly ket: number;
}

/** Mesh indices (i1, i2, i3) of flat index `point`; i3 runs fastest. */
export function meshIndices(divisions: readonly number[], point: number): [number, number, number] {
  const plane = Math.floor(point / divisions[2]);
  return [Math.floor(plane / divisions[1]), plane % divisions[1], point % divisions[2]];
}

const directionNames = ["x", "y", "z"];
const pairNames = ["xx", "yy", "zz", "yz", "zx", "xy"];

/** Name of a component of an array: "x", "yz"; empty where there is one only. */
export function componentName(plan: Pick<ArrayPlan, "role" | "components">, component: number): string {
  if (plan.components === 1) return "";
  return plan.role === "hessian" ? pairNames[component] : directionNames[component];
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
    const values = `${row[band - 1]} eV is followed by ${row[band]} eV`;
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

/** Checks the matrices of one component of a block; `measure`, where given, gets the asymmetry of each finite matrix. */
export function verifyMatrices(
  facts: GridFacts,
  plan: ArrayPlan,
  block: Block,
  matrices: MatrixBlock,
  component: number,
  report: Report,
  measure?: (point: number, asymmetry: Asymmetry) => void,
): void {
  const { bands, count, first } = block;
  const tolerance = hermitianTolerance[storedBits(plan)];
  for (let index = 0; index < count; index++) {
    const offset = matrices.offset + index * matrices.stride;
    scanMatrix(matrices.data, offset, bands, scan);
    if (!Number.isFinite(scan.sum)) {
      const bad = firstNotFinite(matrices.data, offset, bands);
      if (bad !== undefined) {
        const fault = { problem: "not finite", component, bands: bad } as const;
        report(finding(facts, plan, first + index, fault, "an element is NaN or infinite"));
        continue;
      }
    }
    const limit = tolerance * Math.max(scan.largest, smallestScale);
    if (scan.deviation > limit || measure !== undefined) {
      const asymmetry = locate(matrices.data, offset, bands);
      measure?.(first + index, asymmetry);
      if (scan.deviation > limit) {
        const { deviation, bra, ket } = asymmetry;
        const fault = { problem: "not Hermitian", component, bands: [bra, ket] } as const;
        const values = `it differs from its conjugate transpose by ${deviation.toExponential(2)}, allowed is ${limit.toExponential(2)}`;
        report(finding(facts, plan, first + index, fault, values));
      }
    }
  }
}

const scan = { sum: 0, largest: 0, deviation: 0 };

/**
 * Kernel, one pass over the matrix at data[offset]: sum of |Re| + |Im| (NaN or infinite when an element is), largest |Re|
 * or |Im|, largest deviation from Hermiticity. In tiles, so that rows and columns of a large matrix stay in the cache.
 */
function scanMatrix(data: Float64Array, offset: number, n: number, out: typeof scan): void {
  const tile = 32;
  let sum = 0;
  let largest = 0;
  let deviation = 0;
  for (let rows = 0; rows < n; rows += tile) {
    const rowEnd = rows + tile < n ? rows + tile : n;
    for (let columns = rows; columns < n; columns += tile) {
      const columnEnd = columns + tile < n ? columns + tile : n;
      for (let i = rows; i < rowEnd; i++) {
        for (let j = i > columns ? i : columns; j < columnEnd; j++) {
          const upper = offset + 2 * (i * n + j);
          const lower = offset + 2 * (j * n + i);
          const re = data[upper];
          const im = data[upper + 1];
          const size = Math.abs(re) + Math.abs(im);
          sum += size + Math.abs(data[lower]) + Math.abs(data[lower + 1]);
          const dRe = Math.abs(re - data[lower]);
          const dIm = Math.abs(im + data[lower + 1]);
          if (dRe > deviation) deviation = dRe;
          if (dIm > deviation) deviation = dIm;
          if (size > largest) largest = size;
        }
      }
    }
  }
  out.sum = sum;
  out.largest = largest;
  out.deviation = deviation;
}

function locate(data: Float64Array, offset: number, n: number): Asymmetry {
  const worst = { deviation: 0, largest: 0, bra: 0, ket: 0 };
  for (let bra = 0; bra < n; bra++) {
    for (let ket = 0; ket < n; ket++) {
      const at = offset + 2 * (bra * n + ket);
      const mirror = offset + 2 * (ket * n + bra);
      worst.largest = Math.max(worst.largest, Math.abs(data[at]), Math.abs(data[at + 1]));
      if (ket < bra) continue;
      const deviation = Math.max(Math.abs(data[at] - data[mirror]), Math.abs(data[at + 1] + data[mirror + 1]));
      if (deviation > worst.deviation) Object.assign(worst, { deviation, bra, ket });
    }
  }
  return worst;
}

function firstNotFinite(data: Float64Array, offset: number, n: number): [number, number] | undefined {
  for (let element = 0; element < n * n; element++) {
    const at = offset + 2 * element;
    if (!Number.isFinite(data[at]) || !Number.isFinite(data[at + 1])) return [Math.floor(element / n), element % n];
  }
  return undefined;
}

function finding(
  facts: GridFacts,
  plan: ArrayPlan,
  point: number,
  fault: Pick<Finding, "problem" | "component" | "bands">,
  values: string,
): Finding {
  const mesh = meshIndices(facts.divisions, point);
  const name = fault.component === undefined ? "" : componentName(plan, fault.component);
  const which = fault.bands.length === 1 ? `band ${fault.bands[0]}` : `bands ${fault.bands.join(", ")}`;
  const file = plan.files.find((part) => point < part.firstPoint + part.points)?.name ?? "";
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
