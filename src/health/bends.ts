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
    const w = 1 / (equation.error ** 2 + 1e-3 * scale);
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

/** Compares the change of the velocity with second derivatives and sums over bands. `agree`: velocities and energies agree. */
export function checkBends(
  { bends }: Equations,
  bandCount: number,
  agree: boolean,
  freeElectron: boolean,
): BendVerdict {
  const own = resolved(bends).filter(({ band }) => band !== undefined);
  if (!agree || own.length < 6) return { findings: [], bands: [], trustedEv: null };
  const bands = completeness(own);
  const deep = own.filter(({ depth }) => depth > 2);
  const equations = deep.length >= 6 ? deep : own;
  const stated = fitSecond(equations, orders[0].places);
  const trustedEv = trustedUpTo(bands, bandCount);
  if (stated.leftAsStated < cleanPart / 2) return { findings: partly(bands, trustedEv), bands, trustedEv };
  const fits = orders.map((order) => ({ order, fit: fitSecond(equations, order.places) }));
  const best = fits.reduce((a, b) => (b.fit.left < a.fit.left - 0.005 ? b : a));
  const renamed = best.order.words !== "" || Math.abs(best.fit.factor - 1) > 0.15;
  if (renamed && best.fit.left < 0.02 && best.fit.left < 0.15 * stated.leftAsStated && !freeElectron)
    return { findings: [hessianFinding(best.order.words, best.fit, stated)], bands: [], trustedEv: null };
  return { findings: [openFinding(bands, stated, trustedEv, freeElectron)], bands, trustedEv };
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

function openFinding(
  bands: readonly BandCompleteness[],
  stated: SecondFit,
  trustedEv: number | null,
  freeElectron: boolean,
): HealthFinding {
  const worst = bands.map(({ band, missing }) => `${band}: ${shown(100 * missing, 2)}%`).join(", ");
  return {
    id: "completeness",
    severity: "warn",
    message: `velocities, second derivatives and the mesh do not close${trustedEv === null || bands.length === 0 || trustedEv < bands[0].energyEv ? "" : ` above ${trustedEv.toFixed(2)} eV`}: too few bands, ${freeElectron ? "a free-electron second derivative where it does not hold (tight binding, non-local potentials)" : "wrong second derivatives"}, or components of the velocity from different diagonalisations`,
    evidence: `${shown(100 * stated.leftAsStated)}% of the squared changes are left; missing part of the sum over bands, by band: ${worst}`,
    measured,
    cure: freeElectron
      ? "Store hessian as an array, or leave it out; add empty bands and compare; take all matrices from one set of eigenvectors."
      : "Add empty bands and compare; take all matrices from one set of eigenvectors; check arrays.hessian.",
  };
}

/** Bands that close at the bottom, but not to the top: where sums over bands end to be trusted. */
function partly(bands: readonly BandCompleteness[], trustedEv: number | null): HealthFinding[] {
  if (trustedEv === null || trustedEv === Infinity) return [];
  return [
    {
      id: "completeness-range",
      severity: "note",
      message: `sums over bands are good to 10% up to ${trustedEv.toFixed(2)} eV; above, bands are missing`,
      evidence: `missing part by band: ${bands.map(({ band, missing }) => `${band}: ${shown(100 * missing, 2)}%`).join(", ")}`,
      measured,
      cure: "",
    },
  ];
}

function completeness(equations: readonly BendEquation[]): BandCompleteness[] {
  const byBand = new Map<number, BendEquation[]>();
  for (const equation of equations) {
    const band = equation.band as number;
    byBand.set(band, [...(byBand.get(band) ?? []), equation]);
  }
  const squares = (list: readonly number[]): number => list.reduce((sum, x) => sum + x * x, 0);
  return [...byBand]
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
        meshError: Math.sqrt(squares(list.map(({ error }) => error)) / size),
      };
    });
}

/** What counts as closed; what the mesh cannot tell is taken as closed. */
const closedPart = 0.1;

function trustedUpTo(bands: readonly BandCompleteness[], bandCount: number): number | null {
  if (bands.length < 2 || bandCount < 2) return null;
  const open = bands.findIndex(({ missing, meshError }) => missing > Math.max(closedPart, 4 * meshError));
  if (open < 0) return Infinity;
  return open === 0 ? bands[0].energyEv - 1 : bands[open - 1].energyEv;
}
