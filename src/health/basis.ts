// basis.ts: are the moments and second derivatives in the same eigenbasis as the velocity, with bra and ket alike?
import { type Algebra, isReversed, reversedEvidence } from "./algebra.js";
import type { BondEquation } from "./equations.js";
import { type HealthFinding, shown } from "./finding.js";
import type { HealthLine } from "./lines.js";
import { fitted, resolved } from "./slopes.js";
import { alongStep } from "./windows.js";

/** Squared sizes of [v, S] with S as stored and transposed, of the largest it could be, and of [H, S] in the same manner. */
export interface Commuting {
  readonly stored: number;
  readonly mirrored: number;
  readonly torque: number;
}

/** |A B - B A|^2 summed over elements; `sign` -1: with B transposed. */
function commutatorSquare(a: Float64Array, b: Float64Array, bands: number, sign: 1 | -1): number {
  let total = 0;
  for (let n = 0; n < bands; n++)
    for (let m = 0; m < bands; m++) {
      let [re, im] = [0, 0];
      for (let p = 0; p < bands; p++) {
        const [x, y] = [2 * (n * bands + p), 2 * (p * bands + m)];
        re += a[x] * b[y] - sign * a[x + 1] * b[y + 1] - (b[x] * a[y] - sign * b[x + 1] * a[y + 1]);
        im += sign * a[x] * b[y + 1] + a[x + 1] * b[y] - (b[x] * a[y + 1] + sign * b[x + 1] * a[y]);
      }
      total += re * re + im * im;
    }
  return total;
}

/** Gathers lines: how far velocity and energies are from commuting with the spin; each line costs about 6 bands^3. */
export function createCommuting(bands: number) {
  const sums = { stored: 0, mirrored: 0, norm: 0, torque: 0, torqueNorm: 0 };
  const add = ({ points, step }: HealthLine): void => {
    const point = points[points.length >> 1];
    const v = alongStep(step, point.velocity);
    const e = point.energyEv;
    const mean = e.reduce((sum, x) => sum + x, 0) / bands;
    const spread = e.reduce((sum, x) => sum + (x - mean) ** 2, 0);
    const square = (m: Float64Array): number => m.reduce((sum, x) => sum + x * x, 0);
    let trace = 0;
    for (let n = 0; n < bands; n++) trace += v[2 * n * (bands + 1)] / bands;
    const vNorm = square(v) - bands * trace * trace;
    for (const s of point.moments.get("spin") ?? []) {
      sums.stored += commutatorSquare(v, s, bands, 1);
      sums.mirrored += commutatorSquare(v, s, bands, -1);
      sums.norm += (2 * vNorm * square(s)) / bands;
      sums.torqueNorm += (2 * spread * square(s)) / bands;
      for (let n = 0; n < bands; n++)
        for (let m = 0; m < bands; m++) {
          const at = 2 * (n * bands + m);
          sums.torque += (e[n] - e[m]) ** 2 * (s[at] ** 2 + s[at + 1] ** 2);
        }
    }
  };
  const result = (): Commuting => ({
    stored: sums.norm === 0 ? 0 : sums.stored / sums.norm,
    mirrored: sums.norm === 0 ? 0 : sums.mirrored / sums.norm,
    torque: sums.torqueNorm === 0 ? 0 : sums.torque / sums.torqueNorm,
  });
  return { add, result };
}

type Verdict = "one basis" | "transposed" | "foreign" | "unknown";

interface Judged {
  readonly array: string;
  readonly verdict: Verdict;
  readonly evidence: string;
}

function judged(array: string, bonds: readonly BondEquation[], commuting: Commuting | undefined): Judged {
  const equations = resolved(bonds.filter((bond) => bond.array === array));
  const stored = fitted(equations, (e) => e.stored).leftAsStated;
  const mirrored = fitted(equations, (e) => e.mirrored).leftAsStated;
  const enough = equations.length >= 4;
  const bondWords = enough
    ? `Tr phi A phi A changes along the mesh as the stored matrices say but for ${shown(100 * stored, 2)}% (squares), with bra and ket exchanged but for ${shown(100 * mirrored, 2)}%`
    : "";
  const commuteWords =
    commuting === undefined
      ? ""
      : `|[v, S]|^2 is ${shown(commuting.stored, 2)} of what unrelated matrices have, with S transposed ${shown(commuting.mirrored, 2)}; |[H, S]|^2 ${shown(commuting.torque, 2)}`;
  const evidence = [bondWords, commuteWords].filter((words) => words !== "").join("; ");
  return { array, verdict: verdictOf(enough ? { stored, mirrored } : undefined, commuting), evidence };
}

function verdictOf(bonds: { stored: number; mirrored: number } | undefined, commuting: Commuting | undefined): Verdict {
  const bondsOpen = bonds !== undefined && bonds.stored > 0.2;
  if (bonds !== undefined && bondsOpen && bonds.mirrored < 0.1 * bonds.stored) return "transposed";
  // Weakly bound to the lattice, a spin hardly changes with k: then the commutators tell more than the changes.
  if (commuting !== undefined && commuting.stored > 0.1 && commuting.mirrored < 0.4 * commuting.stored)
    if (bonds === undefined || bonds.mirrored < Math.max(bonds.stored, 0.02)) return "transposed";
  if (
    commuting !== undefined &&
    commuting.stored > 0.5 &&
    commuting.mirrored > 0.5 &&
    commuting.torque < 0.1 * commuting.stored
  )
    return "foreign";
  if (bonds === undefined) return commuting === undefined ? "unknown" : "one basis";
  if (!bondsOpen) return "one basis";
  return bonds.mirrored > 0.2 && (commuting === undefined || commuting.stored > 0.5) ? "foreign" : "unknown";
}

const measured =
  "change of Tr phi A phi A from point to point of the mesh against 2 Tr (d phi) A phi A from the stored matrices of velocity and A; commutators of spin with velocity and energies";

/** What a grid offers for this check. */
export interface BasisFacts {
  readonly bonds: readonly BondEquation[];
  readonly algebras: ReadonlyMap<string, Algebra>;
  readonly commuting: Commuting | undefined;
  /** True where velocities and energies agree, and the sums over bands close. */
  readonly trusted: boolean;
}

/** Compares bases and the order of bra and ket. Moments other than spin and orbital may depend on k: of them nothing is said. */
export function checkBasis({ bonds, algebras, commuting, trusted }: BasisFacts): HealthFinding[] {
  const arrays = [...new Set(bonds.map(({ array }) => array))];
  const all = arrays.map((array) => judged(array, bonds, array === "spin" ? commuting : undefined));
  const reversed = [...algebras].filter(
    ([name, algebra]) => (name === "spin" || algebra.open < 0.02) && isReversed(algebra),
  );
  const transposed = all.filter(({ verdict }) => verdict === "transposed");
  const findings: HealthFinding[] = [];
  if (transposed.length > 0) findings.push(transposedFinding(transposed, all, reversed));
  else if (reversed.length > 0) findings.push(reversedFinding(reversed));
  for (const { array, verdict, evidence } of all)
    if (verdict === "foreign" && trusted && array !== "velocity" && array === "spin")
      findings.push(foreignFinding(array, evidence));
  return findings;
}

const arrayName = (array: string): string => (array === "velocity" ? "hessian" : `moments.${array}`);

/** Who is transposed: the velocity where everything else disagrees with it and the spin's own commutators are right. */
function transposedFinding(
  transposed: readonly Judged[],
  all: readonly Judged[],
  reversed: readonly (readonly [string, Algebra])[],
): HealthFinding {
  const known = all.filter(({ verdict }) => verdict !== "unknown");
  const everything = transposed.length === known.length;
  const momentsBlamed = reversed.length > 0;
  const culprits =
    everything && !momentsBlamed && all.length > 1 ? ["velocity"] : transposed.map(({ array }) => arrayName(array));
  const certain = everything && all.length === 1 && !momentsBlamed;
  return {
    id: "bra-ket",
    severity: "fault",
    message: `bra and ket are exchanged in ${culprits.join(" and ")}${certain ? " or in velocity" : ""} against the other matrices`,
    evidence: [
      ...transposed.map(({ array, evidence }) => `${arrayName(array)}: ${evidence}`),
      ...reversed.map(([name, a]) => reversedEvidence(name, a)),
    ].join("; "),
    measured,
    cure: `Exchange "bra" and "ket" in the axes of arrays.${culprits.join(" and arrays.")}; entry [bra, ket] is sum conj(c[i, bra]) O[i, j] c[j, ket].`,
  };
}

function reversedFinding(reversed: readonly (readonly [string, Algebra])[]): HealthFinding {
  return {
    id: "commutator-sign",
    severity: "fault",
    message: `the commutators of ${reversed.map(([name]) => name).join(" and ")} have the wrong sign: bra and ket are exchanged in all matrices (every Hall response changes its sign), or the moment has the wrong sign or left-handed axes`,
    evidence: reversed.map(([name, algebra]) => reversedEvidence(name, algebra)).join("; "),
    measured: "-i [A_a, A_b] against A_c at sampled k points, in the lower half of the bands",
    cure: 'Exchange "bra" and "ket" in the axes of every array of matrices, if they all come from the same code; else mend the sign or the order of the components of the moment.',
  };
}

function foreignFinding(array: string, evidence: string): HealthFinding {
  return {
    id: "foreign-basis",
    severity: "fault",
    message: `moments.${array} is not in the eigenbasis of the velocity: the two come from different diagonalisations`,
    evidence,
    measured,
    cure: "Write all matrices of a k point from one set of eigenvectors.",
  };
}
