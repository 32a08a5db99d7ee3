// levels.test.ts: do the samples have the published levels, gaps and moments in closed form?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { hbar2OverMeEvA2 } from "../../src/base/constants.js";
import type { Triple } from "../../src/grid/grid.js";
import { diracModel } from "../../src/samples/dirac.js";
import { haldaneModel } from "../../src/samples/haldane.js";
import { kaneMeleModel } from "../../src/samples/kane-mele.js";
import { luttingerModel } from "../../src/samples/luttinger.js";
import { angularMomentum, productOf, scaled, sumOf } from "../../src/samples/matrix.js";
import type { SampleModel } from "../../src/samples/model.js";
import { rashbaModel } from "../../src/samples/rashba.js";
import { spSquareModel } from "../../src/samples/sp-square.js";
import { element, jacobiEigen, reciprocal } from "./naive.js";

const levels = (model: SampleModel, k: Triple): readonly number[] => jacobiEigen(model.at(k).h).values;

function expectLevels(found: readonly number[], expected: readonly number[]): void {
  const sorted = [...expected].sort((a, b) => a - b);
  found.forEach((e, n) => {
    expect(e).toBeCloseTo(sorted[n], 12);
  });
}

const component = fc.double({ min: -1.4, max: 1.4, noNaN: true });
const overPlane = (check: (k: Triple) => void): void => {
  fc.assert(
    fc.property(component, component, (x, y) => check([x, y, 0])),
    { numRuns: 50, seed: 3 },
  );
};

/** Corner of the honeycomb's zone, K = (4 pi / 3 sqrt 3, 0), and the other one. */
const corner: Triple = [(4 * Math.PI) / (3 * Math.sqrt(3)), 0, 0];
const otherCorner: Triple = [-corner[0], 0, 0];

describe("dirac", () => {
  it("has E = +-sqrt(k^2 + D^2)", () => {
    overPlane(([x, y]) => {
      const e = Math.sqrt(x * x + y * y + 0.09);
      expectLevels(levels(diracModel(), [x, y, 0]), [-e, e]);
    });
  });

  it("is folded into its box", () => {
    expectLevels(levels(diracModel({ box: 3 }), [5.5, -4, 0]), levels(diracModel({ box: 3 }), [-0.5, 2, 0]));
  });
});

describe("haldane (Phys. Rev. Lett. 61, 2015)", () => {
  it("has the gap 2 |M -+ 3 sqrt3 t2 sin phi| at the corners", () => {
    const [t2, phi, M] = [0.1, 1.1, 0.2];
    const model = haldaneModel({ t2, phi, M });
    const gaps = [corner, otherCorner].map((k) => {
      const [low, high] = levels(model, k);
      return high - low;
    });
    const mass = 3 * Math.sqrt(3) * t2 * Math.sin(phi);
    expectLevels(
      [...gaps].sort((a, b) => a - b),
      [2 * Math.abs(M - mass), 2 * Math.abs(M + mass)],
    );
  });

  it("closes the gap on the phase boundary |M| = 3 sqrt3 t2 |sin phi|", () => {
    const M = 3 * Math.sqrt(3) * 0.1 * Math.sin(1.1);
    const model = haldaneModel({ phi: 1.1, M });
    const gaps = [corner, otherCorner].map((k) => levels(model, k)).map(([low, high]) => high - low);
    expect(Math.min(...gaps)).toBeLessThan(1e-12);
  });
});

describe("kane-mele (Phys. Rev. Lett. 95, 146802)", () => {
  it("has the gap 6 sqrt3 l - 2 v at the corner for r = 0", () => {
    const [, second, third] = levels(kaneMeleModel({ r: 0, v: 0.1, l: 0.06 }), corner);
    expect(third - second).toBeCloseTo(6 * Math.sqrt(3) * 0.06 - 0.2, 12);
  });

  it("is two Haldane models of opposite flux for r = 0", () => {
    overPlane((k) => {
      const pair = levels(kaneMeleModel({ r: 0, v: 0.1, l: 0.06 }), k);
      const halves = [1, -1].flatMap((s) => levels(haldaneModel({ t2: 0.06 * s, M: 0.1 }), k));
      expectLevels(pair, halves);
    });
  });

  it("closes the gap at the corner where r = 2 sqrt3 l, for v = 0", () => {
    const [, second, third] = levels(kaneMeleModel({ v: 0, l: 0.06, r: 0.06 * 2 * Math.sqrt(3) }), corner);
    expect(third - second).toBeLessThan(1e-12);
  });
});

describe("rashba (Phys. Rev. Lett. 92, 126603)", () => {
  it("has E = k^2 / 2m +- alpha k", () => {
    overPlane(([x, y]) => {
      const k = Math.hypot(x, y);
      const expected = [(k * k) / 2.6 - 0.7 * k, (k * k) / 2.6 + 0.7 * k];
      expectLevels(levels(rashbaModel({ alpha: 0.7, mass: 1.3 }), [x, y, 0]), expected);
    });
  });

  it("has the orbital moment L_nm = A^x_nm ky - A^y_nm kx, zero diagonal, equal to -(s_z)_nm (Phys. Rev. Lett. 94, 066602)", () => {
    const model = rashbaModel();
    overPlane((k) => {
      if (Math.hypot(k[0], k[1]) < 1e-3) return;
      const at = model.at(k);
      const { values, vectors } = jacobiEigen(at.h);
      const orbital = at.moments?.get("orbital")?.[2] ?? new Float64Array(8);
      const spin = model.moments.get("spin")?.[2] ?? new Float64Array(8);
      // A_nm = i <n|dH|m> / (E_m - E_n).
      const berry = (a: 0 | 1): [number, number] => {
        const [re, im] = element(vectors[0], at.dh[a], vectors[1]);
        const gap = values[1] - values[0];
        return [-im / gap, re / gap];
      };
      const [ax, ay] = [berry(0), berry(1)];
      const found = element(vectors[0], orbital, vectors[1]);
      const [re, im] = element(vectors[0], spin, vectors[1]);
      expect(found[0]).toBeCloseTo(ax[0] * k[1] - ay[0] * k[0], 11);
      expect(found[1]).toBeCloseTo(ax[1] * k[1] - ay[1] * k[0], 11);
      expect(found[0]).toBeCloseTo(-re, 11);
      expect(found[1]).toBeCloseTo(-im, 11);
      for (const v of vectors) expect(Math.hypot(...element(v, orbital, v))).toBeLessThan(1e-11);
    });
  });
});

describe("luttinger", () => {
  it("has twofold bands -(hbar^2 / 2m) (g1 -+ 2 g2) k^2 (J. M. Luttinger, 1956)", () => {
    fc.assert(
      fc.property(component, component, component, (x, y, z) => {
        const k: Triple = [x / 10, y / 10, z / 10];
        const scale = (-hbar2OverMeEvA2 / 2) * (k[0] ** 2 + k[1] ** 2 + k[2] ** 2);
        const [heavy, light] = [scale * (6.98 - 2 * 2.582), scale * (6.98 + 2 * 2.582)];
        expectLevels(levels(luttingerModel(), k), [heavy, heavy, light, light]);
      }),
      { numRuns: 50, seed: 3 },
    );
  });

  it("has kH 0.0850091379 and kL 0.0328732509 / angstrom at the hole level 0.05 eV (GaAs)", () => {
    expect(levels(luttingerModel(), [0, 0.0850091379, 0])[3]).toBeCloseTo(-0.05, 9);
    expect(levels(luttingerModel(), [0, 0.0328732509, 0])[0]).toBeCloseTo(-0.05, 9);
  });

  it("opens 2 |b| |ezz - exx| = 0.0770844 eV at the zone centre under strain, heavy holes on top, linear in it (Pikus and Bir)", () => {
    const strained = luttingerModel({ exx: -0.01, eyy: -0.01, ezz: 0.0092711 });
    const e = levels(strained, [0, 0, 0]);
    expect(e[2] - e[1]).toBeCloseTo(0.0770844, 12);
    expect(strained.fermiEv).toBeCloseTo(e[3], 14);
    const half = levels(luttingerModel({ exx: -0.005, eyy: -0.005, ezz: 0.00463555 }), [0, 0, 0]);
    expect(half[2] - half[1]).toBeCloseTo(0.0770844 / 2, 12);
    // Compression in the plane lifts m = +-3/2 (first and last of the basis) in electron energy.
    expect(strained.at([0, 0, 0]).h[0]).toBeGreaterThan(0);
  });

  it("has its reference level at the upper edge for any diagonal strain", () => {
    const model = luttingerModel({ exx: 0.004, eyy: -0.011, ezz: 0.002, b: -1.7 });
    expect(levels(model, [0, 0, 0])[3]).toBeCloseTo(model.fermiEv ?? Number.NaN, 14);
  });
});

describe("sp-square", () => {
  it("has px and py touching at the zone centre and at M", () => {
    const b = reciprocal(spSquareModel().vectorsA);
    const M: Triple = [b[0][0] / 2, b[1][1] / 2, 0];
    expectLevels(levels(spSquareModel(), [0, 0, 0]), [0.1, 0.1, 1.2]);
    expectLevels(levels(spSquareModel(), M), [-1.1, -1.1, 5.2]);
  });

  it("has the bands along kx of the 2 x 2 block of s and px, and py apart", () => {
    const k = 0.8;
    const s = 3.2 - (Math.cos(k) + 1);
    const x = -0.5 + Math.cos(k) - 0.4;
    const coupling = Math.sin(k);
    const root = Math.sqrt(((s - x) / 2) ** 2 + coupling ** 2);
    expectLevels(levels(spSquareModel(), [k, 0, 0]), [
      (s + x) / 2 - root,
      (s + x) / 2 + root,
      -0.5 + 1 - 0.4 * Math.cos(k),
    ]);
  });

  it("has <x|Lz|y> = -i", () => {
    const angular = spSquareModel().moments.get("orbital")?.[2] ?? new Float64Array(18);
    expect(angular[2 * (1 * 3 + 2) + 1]).toBe(-1);
    expect(angular[2 * (2 * 3 + 1) + 1]).toBe(1);
  });

  it("is the same twice with both spins explicit", () => {
    const k: Triple = [0.3, -0.9, 0];
    expectLevels(
      levels(spSquareModel({ spin: "explicit" }), k),
      levels(spSquareModel(), k).flatMap((e) => [e, e]),
    );
  });
});

describe("angular momentum", () => {
  it.each([0.5, 1, 1.5, 2])("j = %d: J^2 = j (j + 1), [Jx, Jy] = i Jz", (j) => {
    const J = angularMomentum(j);
    const squared = sumOf(...J.map((m) => productOf(m, m)));
    const commutator = sumOf(productOf(J[0], J[1]), scaled(productOf(J[1], J[0]), -1), scaled(J[2], [0, -1]));
    for (const x of commutator) expect(Math.abs(x)).toBeLessThan(1e-14);
    const n = 2 * j + 1;
    squared.forEach((x, i) => {
      expect(x).toBeCloseTo(i % (2 * (n + 1)) === 0 ? j * (j + 1) : 0, 13);
    });
  });
});
