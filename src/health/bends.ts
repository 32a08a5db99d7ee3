// bends.ts: do velocity and second derivatives close with the mesh, and up to which energy can sums over bands be trusted?
import { type BendEquation, type Equations, pairIndex } from "./equations.js";
import { hessianSlips, slipsFor } from "./factors.js";
import { type HealthFinding, shown } from "./finding.js";
import { cleanPart, resolved } from "./slopes.js";

/** The effective-mass sum rule at one band. */
export interface BandCompleteness {
  readonly band: number;
  /** Mean energy at the points looked at. */
  readonly energyEv: number;
  /** Part of the sum over bands (root mean square) that is missing, and what the mesh could not tell of it. */
  readonly missing: number;
  readonly meshError: number;
}

export interface BendVerdict {
  readonly findings: HealthFinding[];
  readonly bands: readonly BandCompleteness[];
  /** Sums over bands are good to 10% up to here; null where that cannot be told, Infinity where all bands close. */
  readonly trustedEv: number | null;
}

const names = ["xx", "yy", "zz", "yz", "zx", "xy"];
/** Orders in which pairs are written by mistake: place of xx, yy, zz, yz, zx, xy among the six stored ones. */
const orders: readonly { readonly places: readonly number[]; readonly words: string }[] = [
  { places: [0, 1, 2, 3, 4, 5], words: "" },
  { places: [0, 3, 5, 4, 2, 1], words: "xx, xy, xz, yy, yz, zz" },
  { places: [0, 1, 2, 4, 5, 3], words: "xx, yy, zz, xy, yz, zx" },
  { places: [0, 1, 2, 5, 4, 3], words: "xx, yy, zz, xy, zx, yz" },
  { places: [0, 1, 2, 4, 3, 5], words: "xx, yy, zz, zx, yz, xy" },
  { places: [0, 1, 2, 3, 5, 4], words: "xx, yy, zz, yz, xy, zx" },
];

const secondOf = ({ seconds, step, axis }: BendEquation, places: readonly number[]): number =>
  step.reduce((sum, s, a) => sum + s * seconds[places[pairIndex(a, axis)]], 0);

/** What the order of the differences changes: what the mesh leaves open of an equation. A misfit of the data themselves is no part of it. */
const coarseness = (e: BendEquation): number =>
  Number.isNaN(e.coarse)
    ? 0.3 * Math.abs(e.change)
    : Math.abs(e.coarse - (e.change - e.pairs - secondOf(e, orders[0].places)));

interface SecondFit {
  readonly factor: number;
  readonly left: number;
  readonly leftAsStated: number;
}

/** Fit of D - X = factor W; what is left in parts of the squared size of D and X. */
function fitSecond(equations: readonly BendEquation[], places: readonly number[]): SecondFit {
  const scale =
    equations.reduce((sum, { change, pairs }) => sum + change ** 2 + pairs ** 2, 0) / Math.max(1, equations.length);
  let [rr, rx, xx, all] = [0, 0, 0, 0];
  for (const equation of equations) {
    const w = 1 / (equation.error ** 2 + coarseness(equation) ** 2 + 1e-3 * scale);
    const r = equation.change - equation.pairs;
    const x = secondOf(equation, places);
    rr += w * r * r;
    rx += w * r * x;
    xx += w * x * x;
    all += w * (equation.change ** 2 + equation.pairs ** 2);
  }
  const factor = xx === 0 ? 1 : rx / xx;
  return { factor, left: xx === 0 ? rr / all : (rr - (rx * rx) / xx) / all, leftAsStated: (rr - 2 * rx + xx) / all };
}

const measured =
  "effective-mass sum rule: d/dk of sum phi_n v_nn by differences on the mesh against sum phi_n <n|d2H|n> plus 2 sum |v|^2 / (E_n - E_m), in windows of energy";

/** What is known of the grid. */
export interface BendFacts {
  readonly bandCount: number;
  /** Velocities and energies agree. */
  readonly agree: boolean;
  /** The second derivative is declared to be that of a free electron. */
  readonly freeElectron: boolean;
  /** Reference level, eV; undefined where the grid states none. */
  readonly levelEv: number | undefined;
}

/** What is known of the grid. */
export interface BendFacts {
  readonly bandCount: number;
  /** Velocities and energies agree. */
  readonly agree: boolean;
  /** The second derivative is declared to be that of a free electron. */
  readonly freeElectron: boolean;
  /** Reference level, eV; undefined where the grid states none. */
  readonly levelEv: number | undefined;
}

/** Compares the change of the velocity with second derivatives and sums over bands. */
export function checkBends({ bends }: Equations, { bandCount, agree, freeElectron, levelEv }: BendFacts): BendVerdict {
  const own = resolved(bends).filter(({ band }) => band !== undefined);
  if (!agree || own.length < 12) return { findings: [], bands: [], trustedEv: null };
  const bands = completeness(own);
  const deep = own.filter(({ depth }) => depth > 2);
  const equations = deep.length >= 12 ? deep : own;
  const stated = fitSecond(equations, orders[0].places);
  const trustedEv = trustedUpTo(bands, bandCount);
  if (stated.leftAsStated < cleanPart / 2) return { findings: partly(bands, trustedEv, levelEv), bands, trustedEv };
  const fits = orders.map((order) => ({ order, fit: fitSecond(equations, order.places) }));
  const best = fits.reduce((a, b) => (b.fit.left < a.fit.left - 0.005 ? b : a));
  const renamed = best.order.words !== "" || Math.abs(best.fit.factor - 1) > 0.15;
  const explained = best.order.words !== "" || slipsFor(best.fit.factor, hessianSlips).length > 0;
  if (renamed && explained && best.fit.left < 0.02 && best.fit.left < 0.15 * stated.leftAsStated && !freeElectron)
    return { findings: [hessianFinding(best.order.words, best.fit, stated)], bands: [], trustedEv: null };
  if (trustedEv === null || trustedEv === Infinity) return { findings: [], bands, trustedEv };
  const fromBelow = trustedEv >= bands[0].energyEv;
  const findings = fromBelow ? partly(bands, trustedEv, levelEv) : [openFinding(bands, stated, freeElectron)];
  return { findings, bands, trustedEv };
}

function hessianFinding(order: string, fit: SecondFit, stated: SecondFit): HealthFinding {
  const away = Math.abs(fit.factor - 1) > 0.15;
  const slips = away ? slipsFor(fit.factor, hessianSlips) : [];
  const [first] = slips;
  const factorWords = first === undefined ? `it is to be multiplied by ${shown(fit.factor)}` : first.words;
  return {
    id: order === "" ? "hessian-unit" : "hessian-pairs",
    severity: "fault",
    message: `the second derivatives do not fit the mesh: ${order === "" ? factorWords : `their pairs are written as ${order}${away ? `, and ${factorWords}` : ""}`}`,
    evidence: `with that put right ${shown(100 * fit.left, 2)}% of the squares are left, as the data are ${shown(100 * stated.leftAsStated, 2)}%; factor ${shown(fit.factor, 4)}`,
    measured,
    cure:
      order === ""
        ? (first?.cure ?? "Multiply the second derivatives before you write them.")
        : `Write the pairs in the order ${names.join(", ")}.`,
  };
}

const byBand = (bands: readonly BandCompleteness[]): string =>
  bands.map(({ band, missing }) => `${band}: ${shown(100 * missing, 2)}%`).join(", ");

/** Nothing closes, from the lowest band on. */
function openFinding(bands: readonly BandCompleteness[], stated: SecondFit, freeElectron: boolean): HealthFinding {
  const reason = freeElectron
    ? "a free-electron second derivative where it does not hold (tight binding, non-local potentials)"
    : "wrong second derivatives";
  return {
    id: "completeness",
    severity: "warn",
    message: `velocities, second derivatives and the mesh do not close at any band: ${reason}, too few bands, or components of the velocity from different diagonalisations`,
    evidence: `${shown(100 * stated.leftAsStated)}% of the squared changes are left; missing part of the sum over bands, by band: ${byBand(bands)}`,
    measured,
    cure: freeElectron
      ? "Store hessian as an array, or leave it out; add empty bands and compare; take all matrices from one set of eigenvectors."
      : "Add empty bands and compare; take all matrices from one set of eigenvectors; check arrays.hessian.",
  };
}

/** Bands that close at the bottom, but not to the top: where sums over bands end to be trusted. Serious where that is below the level. */
function partly(bands: readonly BandCompleteness[], trustedEv: number | null, levelEv = -Infinity): HealthFinding[] {
  if (trustedEv === null || trustedEv === Infinity) return [];
  const short = trustedEv < levelEv;
  return [
    {
      id: short ? "completeness" : "completeness-range",
      severity: short ? "warn" : "note",
      message: `sums over bands are good to 10% up to ${trustedEv.toFixed(2)} eV${short ? `, not up to the level at ${levelEv.toFixed(2)} eV: there are too few bands` : "; above, bands are missing"}`,
      evidence: `missing part of the sum over bands, by band: ${byBand(bands)}`,
      measured,
      cure: short ? "Add empty bands and compare." : "",
    },
  ];
}

function completeness(equations: readonly BendEquation[]): BandCompleteness[] {
  const grouped = new Map<number, BendEquation[]>();
  for (const equation of equations) {
    const band = equation.band as number;
    grouped.set(band, [...(grouped.get(band) ?? []), equation]);
  }
  const squares = (list: readonly number[]): number => list.reduce((sum, x) => sum + x * x, 0);
  return [...grouped]
    .sort(([a], [b]) => a - b)
    .map(([band, list]) => {
      const size = Math.max(
        squares(list.map(({ pairs }) => pairs)),
        squares(list.map((e) => secondOf(e, orders[0].places))),
        1e-300,
      );
      return {
        band,
        energyEv: list.reduce((sum, { energyEv }) => sum + energyEv, 0) / list.length,
        missing: Math.sqrt(squares(list.map((e) => e.change - e.pairs - secondOf(e, orders[0].places))) / size),
        meshError: Math.sqrt(squares(list.map((e) => Math.max(e.error, coarseness(e)))) / size),
      };
    });
}

/** What counts as closed, beyond what the mesh cannot tell. */
const closedPart = 0.1;
/** A cut through the bands shows at the top first, and more than this, five times what the mesh cannot tell. */
const cutPart = 0.3;

function trustedUpTo(bands: readonly BandCompleteness[], bandCount: number): number | null {
  const top = bands.at(-1);
  if (top === undefined || bands.length < 2 || bandCount < 2) return null;
  if (top.missing < Math.max(cutPart, 5 * top.meshError)) return Infinity;
  const open = bands.findIndex(({ missing, meshError }) => missing - meshError > closedPart);
  return open <= 0 ? -Infinity : bands[open - 1].energyEv;
}
