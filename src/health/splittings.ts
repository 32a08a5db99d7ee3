// splittings.ts: do a few mesh points that sit on small splittings carry the responses, and does the mesh resolve the bands at all?
import type { GridFacts } from "../grid/grid.js";
import { type HealthFinding, shown } from "./finding.js";
import type { HealthPoint, PointSource } from "./lines.js";

/** Splittings closer than this are small: k_B times 300 K. */
const smallEv = 0.02585;
/** Pairs within this of the level are looked at. */
const nearLevelEv = 1;
/** Energies of at most about this many points are read. */
const mostPoints = 20_000;
/** Matrices of at most this many of them. */
const mostMatrices = 24;

/** Sum over pairs of bands about the level of |v_nm|^2 / (E_n - E_m)^2, angstrom^2: all pairs, and those of small splitting. */
export function pairWeight(point: HealthPoint, levelEv: number, degenerateEv: number): { all: number; small: number } {
  const { energyEv, velocity } = point;
  const bands = energyEv.length;
  let [all, small] = [0, 0];
  for (let n = 0; n < bands; n++)
    for (let m = n + 1; m < bands; m++) {
      const apart = energyEv[m] - energyEv[n];
      if (apart <= degenerateEv || energyEv[n] > levelEv + nearLevelEv || energyEv[m] < levelEv - nearLevelEv) continue;
      const at = 2 * (n * bands + m);
      const square = velocity.reduce((sum, v) => sum + v[at] ** 2 + v[at + 1] ** 2, 0) / apart ** 2;
      all += square;
      if (apart < smallEv && Math.abs((energyEv[n] + energyEv[m]) / 2 - levelEv) < nearLevelEv) small += square;
    }
  return { all, small };
}

/** Smallest splitting of neighbouring bands near the level, above the degeneracy tolerance. */
function smallestNear(energies: Float64Array, levelEv: number, degenerateEv: number): number {
  let smallest = Infinity;
  for (let n = 0; n + 1 < energies.length; n++) {
    const apart = energies[n + 1] - energies[n];
    const middle = (energies[n] + energies[n + 1]) / 2;
    if (apart > degenerateEv && apart < smallest && Math.abs(middle - levelEv) < nearLevelEv) smallest = apart;
  }
  return smallest;
}

/** Looks for points of small splitting in the whole mesh (every s-th point of a large one) and weighs a sample of them. */
export function checkSplittings(
  source: PointSource,
  typical: readonly number[],
  levelEv: number,
  degenerateEv: number,
): HealthFinding[] {
  const { facts } = source;
  const stride = strideOf(facts);
  const found: number[] = [];
  let seen = 0;
  for (let flat = 0; flat < facts.points; flat += stride) {
    seen++;
    if (smallestNear(source.energies(flat), levelEv, degenerateEv) < smallEv) found.push(flat);
  }
  if (found.length === 0 || typical.length === 0) return [];
  const step = Math.max(1, Math.floor(found.length / mostMatrices));
  const sample = found.filter((_, i) => i % step === 0);
  const small =
    sample.reduce((sum, flat) => sum + pairWeight(source.point(flat), levelEv, degenerateEv).small, 0) / sample.length;
  const carried = (small * found.length) / seen;
  const rest = [...typical].sort((a, b) => a - b)[typical.length >> 1];
  const share = carried / (carried + rest);
  if (share < 0.5 || found.length / seen > 0.5) return [];
  return [
    {
      id: "small-splittings",
      severity: "note",
      message: `${shown((100 * found.length) / seen, 2)}% of the mesh points sit on splittings below ${shown(1000 * smallEv, 2)} meV near the level and carry most of a plain sum over the mesh`,
      evidence: `about ${shown(100 * share, 2)}% of sum |v|^2 / (E_n - E_m)^2 within ${nearLevelEv} eV of the level; they stand for regions far smaller than a cell`,
      measured: `energies of ${seen} points, matrices of ${sample.length} of those with small splittings`,
      cure: "Use --method refine (the default), not points; compare with a shifted mesh.",
    },
  ];
}

/** Every point of a small mesh; of a large one a stride that has no factor in common with its divisions. */
function strideOf({ points, divisions }: GridFacts): number {
  let stride = Math.max(1, Math.ceil(points / mostPoints));
  while (stride > 1 && divisions.some((n) => n > 1 && stride % 2 === 0)) stride++;
  return stride;
}

/** A mesh on which nothing can be compared: the bands change too much from point to point. */
export function checkMesh(tested: boolean, stepEv: number, equations: number): HealthFinding[] {
  if (tested) return [];
  return [
    {
      id: "mesh-coarse",
      severity: "note",
      message:
        "the mesh is too coarse, or too small, to compare neighbouring points: units, axes and completeness were not checked",
      evidence: `energies change by ${shown(stepEv)} eV from a point to the next (root mean square); ${equations} equations are resolved`,
      measured: "differences of second and fourth order along lines of the mesh",
      cure: "",
    },
  ];
}
