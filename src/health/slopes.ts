// slopes.ts: is the stored velocity the slope of the stored energies, and if not, which slip makes it so?
import type { GridFacts } from "../grid/grid.js";
import { type BendEquation, type Equations, pairIndex, type SlopeEquation } from "./equations.js";
import { energySlips, latticeSlips, type Slip, slipsFor, velocitySlips } from "./factors.js";
import { type HealthFinding, shown } from "./finding.js";
import { type Shape, shapesOf } from "./shapes.js";

/** One linear fit of changes to a prediction: change = factor times prediction. */
export interface Fit {
  readonly factor: number;
  /** Part of the changes that is left with that factor, and with factor 1. */
  readonly left: number;
  readonly leftAsStated: number;
}

interface Weighted {
  readonly change: number;
  readonly error: number;
}

/** Equations that can be used: resolved by the mesh. */
export const resolved = <T extends Weighted>(equations: readonly T[]): T[] =>
  equations.filter(
    ({ change, error }) =>
      Number.isFinite(error) && Number.isFinite(change) && error <= 0.3 * Math.abs(change) + 1e-300,
  );

/** Root mean square of the changes: the scale to which errors are compared. */
const scaleOf = (equations: readonly Weighted[]): number =>
  Math.sqrt(equations.reduce((sum, { change }) => sum + change * change, 0) / Math.max(1, equations.length));

/** Weighted fit; no equation counts for more than one that is good to 3% of the typical change. */
export function fitted<T extends Weighted>(equations: readonly T[], predicted: (equation: T) => number): Fit {
  const floor = (0.03 * scaleOf(equations)) ** 2;
  let [dd, dx, xx] = [0, 0, 0];
  for (const equation of equations) {
    const w = 1 / (equation.error ** 2 + floor);
    const x = predicted(equation);
    dd += w * equation.change ** 2;
    dx += w * equation.change * x;
    xx += w * x * x;
  }
  if (dd === 0) return { factor: 1, left: 0, leftAsStated: xx === 0 ? 0 : 1 };
  if (xx === 0) return { factor: 0, left: 1, leftAsStated: 1 };
  return { factor: dx / xx, left: 1 - (dx * dx) / (dd * xx), leftAsStated: (dd - 2 * dx + xx) / dd };
}

const predictedBy =
  ({ matrix }: Shape) =>
  ({ step, velocity }: SlopeEquation): number => {
    let sum = 0;
    for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) sum += step[i] * matrix[i][j] * velocity[j];
    return sum;
  };

/** Fewer equations than this say nothing. */
const fewest = 12;
/** A part of the squared changes that clean but coarse data may leave. */
export const cleanPart = 0.1;
/** Above this the data have nothing to do with each other. */
const foreignPart = 0.6;
/** Below this nothing is suspected. */
const surelyClean = 0.01;

/** What the slopes say. */
export interface SlopeVerdict {
  readonly findings: HealthFinding[];
  /** False where the mesh is too coarse to tell. */
  readonly tested: boolean;
  /** True where velocities and energies agree. */
  readonly agree: boolean;
  /** Equations used, and the part of the squared changes left by the data as they are. */
  readonly equations: number;
  readonly left: number;
}

const measured =
  "changes of sums over bands of a smooth function of the energy from point to point of the mesh (differences of sixth order, blind to crossings) against the same sums of v_nn";

/** Compares velocities with energies. */
export function checkSlopes({ slopes, bends }: Equations, facts: GridFacts): SlopeVerdict {
  const usable = resolved(slopes);
  const deep = usable.filter(({ depth, band }) => band !== undefined && depth > 2);
  const equations = deep.length >= fewest ? deep : usable;
  const stated = fitted(equations, predictedBy(shapesOf(facts)[0]));
  const base = { equations: equations.length, left: stated.leftAsStated };
  if (equations.length < fewest) return { ...base, findings: [], tested: false, agree: false };
  if (stated.leftAsStated < surelyClean) return { ...base, findings: [], tested: true, agree: true };
  const fits = shapesOf(facts).map((shape) => ({ shape, fit: fitted(equations, predictedBy(shape)) }));
  const best = Math.min(...fits.map(({ fit }) => fit.left));
  // What coarse data leave is not mistaken for a slip: that must explain ten times as much.
  if (stated.leftAsStated < cleanPart && best > 0.1 * stated.leftAsStated)
    return { ...base, findings: [], tested: true, agree: true };
  const chosen = fits.find(
    ({ fit }) => fit.left <= Math.max(1.5 * best, best + Math.min(0.01, 0.1 * stated.leftAsStated)),
  ) as (typeof fits)[number];
  const { factor } = chosen.fit;
  const slips = [velocitySlips(facts), energySlips, latticeSlips].flatMap((table) => slipsFor(factor, table));
  const nameless = chosen.shape.kind === "as stated" && factor > 0.6 && factor < 1.6 && slips.length === 0;
  // A factor near 1 that nothing explains comes from a mesh too coarse, or from a continuum whose box ends within every line.
  if (nameless) return { ...base, findings: [], tested: false, agree: false };
  if (best < cleanPart / 2) {
    const finding = named(chosen, fits, equations.length, bends, facts);
    return { ...base, findings: [finding], tested: true, agree: false };
  }
  // Clean data on a mesh that is far too coarse leave up to a quarter (gold on 4^3 points); foreign numbers leave all.
  if (stated.leftAsStated < foreignPart) return { ...base, findings: [], tested: false, agree: false };
  return { ...base, findings: [unnamed(stated, fits[0].fit)], tested: true, agree: false };
}

interface Candidate {
  readonly shape: Shape;
  readonly fit: Fit;
}

function named(
  { shape, fit }: Candidate,
  fits: readonly Candidate[],
  count: number,
  bends: readonly BendEquation[],
  facts: GridFacts,
): HealthFinding {
  const evidence = `energies change ${shown(fit.factor, 4)} times as much as the stored velocities say${shape.kind === "as stated" ? "" : ` with ${shape.kind} put right`} (${count} equations, ${shown(100 * fit.left, 2)}% of the squares left, ${shown(100 * Math.min(fits[0].fit.leftAsStated, 1e9), 2)}% as the data are)`;
  if (shape.kind === "as stated") return wrongFactor(fit.factor, evidence, bends, facts);
  const others = fits
    .filter((other) => other.shape !== shape && other.fit.left <= fit.left + 0.01)
    .map(({ shape: { words } }) => words);
  const mirrored = fit.factor < 0 && shape.mirroredWords !== undefined;
  const factor = mirrored ? -fit.factor : fit.factor;
  const away = Math.abs(Math.log(Math.abs(factor))) > 0.08 || factor < 0;
  const slips = away ? slipsFor(factor, velocitySlips(facts)) : [];
  const more = away ? `; besides, by a factor ${shown(factor)}${slips.length > 0 ? ` (${slips[0].words})` : ""}` : "";
  return {
    id:
      shape.kind === "axes" || shape.kind === "mesh order"
        ? "velocity-axes"
        : shape.kind === "fractions"
          ? "velocity-fractions"
          : "lattice",
    severity: "fault",
    message: `velocities fit the slopes of the bands only if ${mirrored ? shape.mirroredWords : shape.words}${more}`,
    evidence: others.length === 0 ? evidence : `${evidence}; as good: ${others.slice(0, 2).join("; or ")}`,
    measured,
    cure: shape.cure,
  };
}

/** Who is to blame for a factor: the second derivatives tell, where there are any; else all three are named. */
function wrongFactor(
  factor: number,
  evidence: string,
  bends: readonly BendEquation[],
  facts: GridFacts,
): HealthFinding {
  const culprit = culpritOf(factor, bends);
  const tables: [string, readonly Slip[]][] = [
    ["velocity", velocitySlips(facts)],
    ["energy", energySlips],
    ["lattice", latticeSlips],
  ];
  const candidates = tables
    .filter(([name]) => culprit === undefined || name === culprit)
    .flatMap(([name, slips]) => slipsFor(factor, slips).map((slip) => ({ name, slip })));
  const [first] = candidates;
  const equal = candidates.filter(
    ({ name, slip }) => name === first?.name && Math.abs(Math.log(slip.factor / first.slip.factor)) < 0.03,
  );
  const or = candidates
    .filter((candidate) => !equal.includes(candidate))
    .slice(0, 3)
    .map(({ name, slip }) => `${name}: ${slip.words}`);
  const id = first === undefined ? "velocity-factor" : first.slip.factor === 1 ? "velocity-sign" : `${first.name}-unit`;
  return {
    id,
    severity: "fault",
    message: `the velocity does not fit the slopes of the bands: ${first === undefined ? `a factor ${shown(factor, 4)} that no known slip explains` : `${first.name}: ${equal.map(({ slip }) => slip.words).join("; or ")}`}`,
    evidence: `${evidence}${or.length === 0 ? "" : `; the same factor would come from ${or.join("; or ")}`}${culprit === undefined ? "; without second derivatives the velocity, the energies and the lattice cannot be told apart" : `; the second derivatives blame the ${culprit}`}`,
    measured,
    cure: first?.slip.cure ?? "Compare the unit of the velocity with dE/dk of an isolated band.",
  };
}

/**
 * True steps, velocities and energies in the change of the velocity, D = W + X: a velocity that is to be multiplied by c gives D = W / c + c X; energies
 * too small by c, D = W + c X; steps too small by c, D = c (W + X).
 */
function culpritOf(c: number, bends: readonly BendEquation[]): string | undefined {
  const equations = resolved(bends).filter(({ depth, band }) => band !== undefined && depth > 2);
  if (equations.length < fewest) return undefined;
  const second = ({ seconds, step, axis }: BendEquation): number =>
    step.reduce((sum, s, a) => sum + s * seconds[pairIndex(a, axis)], 0);
  const models: [string, (e: BendEquation) => number][] = [
    ["velocity", (e) => second(e) / c + c * e.pairs],
    ["energy", (e) => second(e) + c * e.pairs],
    ["lattice", (e) => c * (second(e) + e.pairs)],
  ];
  const judged = models
    .map(([name, model]) => ({ name, left: fitted(equations, model).leftAsStated }))
    .sort((a, b) => a.left - b.left);
  return judged[0].left < 0.2 && judged[0].left < 0.3 * judged[1].left ? judged[0].name : undefined;
}

function unnamed(stated: Fit, free: Fit): HealthFinding {
  return {
    id: "velocity-slopes",
    severity: "fault",
    message: "the diagonal of the velocity is not the slope of the bands, and no known slip makes it so",
    evidence: `${shown(100 * stated.leftAsStated)}% of the squared changes are left; ${shown(100 * free.left)}% with the best factor, ${shown(free.factor)}`,
    measured,
    cure: "Check that energies and matrices come from the same run, the same k points in the same order, and the same bands.",
  };
}
