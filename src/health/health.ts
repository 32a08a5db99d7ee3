// health.ts: is a band grid right in ways that its form cannot show? Gathers what is stored along lines of the mesh and asks every check.
import { hbar2OverMeEvA2 } from "../base/constants.js";
import type { Grid } from "../grid/open.js";
import { type Algebra, checkOrbitalSize, checkSpinSize, createAlgebra } from "./algebra.js";
import { checkBasis, createCommuting } from "./basis.js";
import { type BandCompleteness, checkBends } from "./bends.js";
import { addEquations, type Equations, noEquations, stepEv } from "./equations.js";
import type { HealthFinding } from "./finding.js";
import { type Count, checkLevel } from "./level.js";
import { type HealthEffort, type HealthLine, openPoints, type PointSource, planLines, visitLines } from "./lines.js";
import { checkPatches } from "./patches.js";
import { checkReversal, type Reversal, storedNoise, toleranceFor } from "./reversal.js";
import { checkSlopes } from "./slopes.js";
import { checkMesh, checkSplittings, pairWeight } from "./splittings.js";

/** What the checks found, and what they learned by the way. */
export interface Health {
  readonly findings: readonly HealthFinding[];
  /** Points whose matrices were read, and equations between neighbours that were used. */
  readonly points: number;
  readonly equations: number;
  /** Part of the squared changes of the energies that the velocities leave unexplained; null where the mesh cannot tell. */
  readonly slopesLeft: number | null;
  readonly bands: readonly BandCompleteness[];
  /** Sums over bands can be trusted up to here; null: cannot be told; Infinity: all bands close. */
  readonly trustedEv: number | null;
  readonly reversal: Reversal;
  /** Root mean square change of the energies from a point to the next, eV. */
  readonly stepEv: number;
  /** Pairs closer than this are to be taken as degenerate, eV. */
  readonly degenerateEv: number;
}

/** The quick form: about 30 points. */
export const quickEffort: HealthEffort = { linesPerEdge: 2, pointsPerLine: 5 };
/** The form of an inspection. */
export const fullEffort: HealthEffort = { linesPerEdge: 8, pointsPerLine: 7 };

/** Large matrices are looked at in fewer places: the cost of one grows with the cube of the bands. */
const scaledTo = (bands: number, { linesPerEdge, pointsPerLine }: HealthEffort): HealthEffort => ({
  linesPerEdge: Math.max(1, Math.min(linesPerEdge, Math.round(linesPerEdge * (40 / bands) ** 2))),
  pointsPerLine: bands > 60 ? 5 : pointsPerLine,
});

interface Gathered {
  readonly equations: Equations;
  readonly algebras: ReadonlyMap<string, Algebra>;
  readonly commuting: ReturnType<ReturnType<typeof createCommuting>["result"]> | undefined;
  readonly steps: readonly number[];
  /** Pair weights about the level, by line. */
  readonly weights: readonly number[];
  readonly points: number;
  readonly largestEv: number;
}

function gather(source: PointSource, effort: HealthEffort): Gathered {
  const { facts } = source;
  const equations = noEquations();
  const algebras = new Map(facts.moments.map(({ name }) => [name, createAlgebra(facts.bands)]));
  const commuting = createCommuting(facts.bands);
  const steps: number[] = [];
  const weights: number[] = [];
  const tally = { points: 0, largestEv: 0 };
  const freeElectron = facts.hessian === "free-electron" ? hbar2OverMeEvA2 : 0;
  const visit = (line: HealthLine): void => {
    addEquations(line, { periodic: facts.periodic, freeElectron }, equations);
    const middle = line.points[line.points.length >> 1];
    for (const [name, algebra] of algebras) algebra.add(middle.moments.get(name) ?? []);
    commuting.add(line);
    steps.push(stepEv(line));
    weights.push(pairWeight(middle, facts.fermiEv ?? 0, 1e-5).all);
    tally.points += line.points.length;
    for (const { energyEv } of line.points)
      tally.largestEv = Math.max(tally.largestEv, -energyEv[0], energyEv[energyEv.length - 1]);
  };
  visitLines(source, effort, visit);
  const spinAxes = facts.moments.find(({ name }) => name === "spin")?.directions;
  return {
    equations,
    algebras: new Map([...algebras].map(([name, algebra]) => [name, algebra.result()])),
    commuting: spinAxes === undefined ? undefined : commuting.result(),
    steps,
    weights,
    ...tally,
  };
}

/** Whether the stored points are the whole mesh, in its order. */
const isFullMesh = ({ facts }: Grid): boolean =>
  facts.points === facts.divisions[0] * facts.divisions[1] * facts.divisions[2] && facts.patch === undefined;

/**
 * Checks a grid at sampled points; memory stays at a few points. `count` counts electrons below a level; left out, as in the quick form, what takes the
 * energies of the whole mesh (the level, small splittings) is not looked at.
 * Only lines of a full mesh can be compared: of reduced lists only the level is looked at. Throws a Fault for files that cannot be read.
 */
export function checkHealth(grid: Grid, effort: HealthEffort, count?: Count): Health {
  const level = [...(count === undefined ? [] : checkLevel(grid.facts, count)), ...checkPatches(grid)];
  if (!isFullMesh(grid)) return { ...unknownHealth, findings: level };
  const source = openPoints(grid);
  try {
    const sized = scaledTo(grid.facts.bands, effort);
    const gathered = gather(source, sized);
    const health = judgedHealth(grid, source, gathered, sized);
    const { fermiEv } = grid.facts;
    const splittings =
      count === undefined || fermiEv === undefined
        ? []
        : checkSplittings(source, gathered.weights, fermiEv, health.degenerateEv);
    return { ...health, findings: [...health.findings, ...level, ...splittings] };
  } finally {
    source.close();
  }
}

/** Of data that could not be looked at. */
export const unknownHealth: Health = {
  findings: [],
  points: 0,
  equations: 0,
  slopesLeft: null,
  bands: [],
  trustedEv: null,
  reversal: { kept: "unknown", unevenEv: null, pairSplittingEv: null },
  stepEv: 0,
  degenerateEv: 1e-5,
};

function judgedHealth(grid: Grid, source: PointSource, gathered: Gathered, effort: HealthEffort): Health {
  const { facts, arrays } = grid;
  const { equations, steps, points, largestEv } = gathered;
  const slopes = checkSlopes(equations, facts);
  const bends = checkBends(equations, {
    bandCount: facts.bands,
    agree: slopes.agree,
    freeElectron: facts.hessian === "free-electron",
    levelEv: facts.fermiEv,
  });
  const meanStepEv = Math.sqrt(steps.reduce((sum, s) => sum + s * s, 0) / Math.max(1, steps.length));
  const middles = planLines(facts, effort).map((line) => line.flats[line.flats.length >> 1]);
  const { reversal, findings: parity } = checkReversal(source, middles, storedNoise(arrays[0].type, largestEv));
  const closed = slopes.agree && bends.findings.every(({ severity }) => severity === "note");
  return {
    findings: [
      ...slopes.findings,
      ...bends.findings,
      ...momentFindings(gathered, slopes.agree, closed),
      ...parity,
      ...checkMesh(slopes.tested, meanStepEv, slopes.equations),
    ],
    points,
    equations: slopes.equations,
    slopesLeft: slopes.tested ? slopes.left : null,
    bands: bends.bands,
    trustedEv: bends.trustedEv,
    reversal,
    stepEv: meanStepEv,
    degenerateEv: toleranceFor(reversal),
  };
}

/** Sizes, commutators and bases of spin and orbital moment; moments of other names may be anything. */
function momentFindings(
  { algebras, equations, commuting }: Gathered,
  agree: boolean,
  closed: boolean,
): HealthFinding[] {
  const known = new Map([...algebras].filter(([name]) => name === "spin" || name === "orbital"));
  const sizes = [...known].flatMap(([name, algebra]) =>
    name === "spin" ? checkSpinSize(algebra) : checkOrbitalSize(name, algebra),
  );
  // Changes from point to point mean nothing while the velocity itself is off.
  const bonds = agree ? equations.bonds.filter(({ array }) => array === "velocity" || known.has(array)) : [];
  const bases = checkBasis({ bonds, algebras: known, commuting: agree ? commuting : undefined, trusted: closed });
  return [...sizes, ...bases];
}
