// hall.test.ts: does a naive Kubo sum over the samples give the published Hall conductivities, in sign and unit, before any tool reads them?
import { describe, expect, it } from "vitest";
import { diracBoxCharge, diracModel } from "../../src/samples/dirac.js";
import { haldaneModel } from "../../src/samples/haldane.js";
import { kaneMeleModel } from "../../src/samples/kane-mele.js";
import { luttingerModel } from "../../src/samples/luttinger.js";
import type { SampleModel } from "../../src/samples/model.js";
import { rashbaModel } from "../../src/samples/rashba.js";
import { spSquareModel } from "../../src/samples/sp-square.js";
import {
  chargeInE2OverH,
  curvature,
  fermi,
  momentInEOver2Pi,
  momentInSPerCm,
  naiveIntegrals,
  type Query,
  type Response,
} from "./naive.js";

const half2: readonly [number, number, number] = [0.5, 0.5, 0];
const charge: Response = { flow: 0, field: 1 };
const spin: Response = { flow: 0, field: 1, moment: "spin", g: 2 };
const orbital: Response = { flow: 0, field: 1, moment: "orbital", g: 2 };

/** Rows of (mu, kT) in eV and the published value. */
type Row = readonly [muEv: number, kTEv: number, value: number];

function layer(model: SampleModel, n: number, response: Response, rows: readonly Row[]): number[] {
  const queries: Query[] = rows.map(([muEv, kTEv]) => ({ muEv, kTEv }));
  const unit = response.moment === undefined ? chargeInE2OverH : momentInEOver2Pi;
  return naiveIntegrals(model, [n, n, 1], half2, response, queries).map(unit);
}

function expectRows(found: readonly number[], rows: readonly Row[], within: number): void {
  rows.forEach(([muEv, kTEv, value], i) => {
    expect(Math.abs(found[i] - value), `mu ${muEv}, kT ${kTEv}: ${found[i]} for ${value}`).toBeLessThan(within);
  });
}

describe("massive Dirac point (Xiao, Chang, Niu, Rev. Mod. Phys. 82, 1959)", () => {
  const rows: Row[] = [
    [0, 0.025, -0.4999995571],
    [0.3, 0.025, -0.4756551182],
    [0.45, 0.025, -0.3367524002],
    [-0.6, 0.025, -0.2514639092],
    [0, 0.1, -0.4896653743],
    [0.3, 0.1, -0.4308797388],
    [0.45, 0.1, -0.3493585189],
    [-0.6, 0.1, -0.2702948509],
  ];

  it("loses in the gap the tail outside the box, as its closed form says", () => {
    const [found] = layer(diracModel({ box: 3 }), 240, charge, [[0, 0, 0]]);
    // The mid-point rule at the faces leaves an error of order (step)^2 D / K^3: 3e-7 here.
    expect(Math.abs(found - diracBoxCharge(0.3, 3))).toBeLessThan(5e-7);
    expect(diracBoxCharge(0.3, 1e9)).toBeCloseTo(-0.5, 8);
    expect(diracBoxCharge(-0.3, 1e9)).toBeCloseTo(0.5, 8);
  });

  it("rises from the value in the gap as published", () => {
    const found = layer(diracModel({ box: 3 }), 240, charge, [[0, 0, 0], ...rows]);
    // A difference does not see the tail: the published values plus 1/2.
    const differences = rows.map(([mu, kT, value]): Row => [mu, kT, value + 0.5]);
    expectRows(
      found.slice(1).map((x) => x - found[0]),
      differences,
      1e-9,
    );
  });
});

describe("haldane (Phys. Rev. Lett. 61, 2015)", () => {
  it("has charge:xy = -1 e^2/h in the gap for |M| below 3 sqrt3 t2, 0 beyond", () => {
    expectRows(layer(haldaneModel({ M: 0.2 }), 90, charge, [[0, 0, -1]]), [[0, 0, -1]], 1e-12);
    expectRows(layer(haldaneModel({ M: -0.3 }), 90, charge, [[0, 0, -1]]), [[0, 0, -1]], 1e-9);
    expectRows(layer(haldaneModel({ M: 0.8 }), 90, charge, [[0, 0, 0]]), [[0, 0, 0]], 1e-9);
  });

  it("has the published values at kT = 0.05", () => {
    const rows: Row[] = [
      [0, 0.05, -0.999766069052],
      [0.35, 0.05, -0.931376226039],
      [0.5, 0.05, -0.798374687009],
      [1, 0.05, -0.312794862075],
      [-1, 0.05, -0.312794862075],
    ];
    expectRows(layer(haldaneModel(), 120, charge, rows), rows, 1e-11);
  });
});

describe("kane-mele (Phys. Rev. Lett. 95, 146802 and 226801)", () => {
  it("has spin:xy:z = +1 e/2pi in the gap for r = 0 and v below 3 sqrt3 l, 0 beyond", () => {
    expectRows(layer(kaneMeleModel({ r: 0 }), 90, spin, [[0, 0, 1]]), [[0, 0, 1]], 1e-9);
    expectRows(layer(kaneMeleModel({ r: 0, v: 0.6 }), 90, spin, [[0, 0, 0]]), [[0, 0, 0]], 1e-9);
  });

  it("has the mid-gap values with Rashba coupling, not quantised", () => {
    expectRows(layer(kaneMeleModel(), 120, spin, [[0, 0, 0]]), [[0, 0, 1.021792379909]], 2e-11);
    expectRows(layer(kaneMeleModel({ v: 0, r: 0.1 }), 120, spin, [[0, 0, 0]]), [[0, 0, 1.099378614898]], 2e-11);
  });

  it("has the published values at kT = 0.03, and no charge Hall effect", () => {
    const rows: Row[] = [
      [0, 0.03, 1.020923723529],
      [0.3, 0.03, 0.85872384377],
      [-0.5, 0.03, 0.756764169018],
    ];
    expectRows(layer(kaneMeleModel(), 150, spin, rows), rows, 2e-9);
    const none = rows.map(([mu, kT]): Row => [mu, kT, 0]);
    expectRows(layer(kaneMeleModel(), 60, charge, none), none, 1e-12);
  });
});

describe("rashba (Phys. Rev. Lett. 92, 126603; orbital: 94, 066602)", () => {
  /** (1/16 pi) int dk [f(k^2/2 - k) - f(k^2/2 + k)], Simpson's rule up to where the integrand has died out. */
  function published(muEv: number, kTEv: number): number {
    const intervals = 20_000;
    const step = 12 / intervals;
    const f = (e: number): number => 1 / (1 + Math.exp((e - muEv) / kTEv));
    let sum = 0;
    for (let i = 0; i <= intervals; i++) {
      const k = i * step;
      const weight = i === 0 || i === intervals ? 1 : i % 2 === 1 ? 4 : 2;
      sum += weight * (f((k * k) / 2 - k) - f((k * k) / 2 + k));
    }
    return (sum * step) / 3 / (16 * Math.PI);
  }
  // Values printed without the unit e/2pi of the rows above: in units of e.
  const values: Row[] = [
    [0, 0.05, 0.038308276587],
    [1, 0.2, 0.039720233418],
    [-0.25, 0.02, 0.028058489069],
  ];

  it("has the integral of the publication behind the tabulated values", () => {
    expectRows(
      values.map(([mu, kT]) => published(mu, kT)),
      values,
      1e-11,
    );
  });

  it("has spin:xy:z negative, spin:yx:z positive, and the orbital counterpart equal and opposite", () => {
    const model = rashbaModel({ box: 5 });
    const inE = (response: Response): number[] => layer(model, 250, response, values).map((x) => x / (2 * Math.PI));
    const negative = values.map(([mu, kT, value]): Row => [mu, kT, -value]);
    expectRows(inE(spin), negative, 2e-9);
    expectRows(inE(orbital), values, 2e-9);
    expectRows(inE({ ...spin, flow: 1, field: 0 }), values, 2e-9);
  });

  it("tends to -e/8pi above the crossing and to -(e/8pi) sqrt(1 + 2 mu) below, T = 0, within the mesh's step", () => {
    const rows: Row[] = [
      [1, 0, -1 / 4],
      [0.3, 0, -1 / 4],
      [-0.25, 0, -Math.sqrt(0.5) / 4],
    ];
    expectRows(layer(rashbaModel({ box: 4 }), 400, spin, rows), rows, 2e-3);
  });
});

describe("luttinger (Phys. Rev. B 69, 165315; GaAs)", () => {
  it("has spin:xy:z = 46.13754233 (hbar/e) S/cm for holes at 0.05 eV, kT = 0.025852 eV", () => {
    const model = luttingerModel({ box: 0.2 });
    const query = [{ muEv: -0.05, kTEv: 0.025852 }];
    const [found] = naiveIntegrals(model, [24, 24, 24], [0.5, 0.5, 0.5], spin, query).map(momentInSPerCm);
    expect(Math.abs(found / 46.13754233 - 1)).toBeLessThan(3e-5);
  });

  it.each([
    [0.05, 0.0328732509, 0.0850091379, 50.39714357],
    [0.1, 0.0328732509 * Math.SQRT2, 0.0850091379 * Math.SQRT2, 71.27232394],
  ])("has the published value for holes at %d eV, T = 0, integrated over spheres", (level, kL, kH, value) => {
    // A cubic mesh is noisy at T = 0; shells between the radii where bands empty are not: inside kL all bands are
    // empty, outside kH all are full and cancel. k^2 Omega does not depend on k, and is a polynomial of the angles.
    const [angles, turns] = [200, 8];
    const k = (kL + kH) / 2;
    let mean = 0;
    for (let i = 0; i < angles; i++) {
      for (let j = 0; j < turns; j++) {
        const cosine = (2 * i + 1) / angles - 1;
        const sine = Math.sqrt(1 - cosine * cosine);
        const phi = (2 * Math.PI * (j + 0.3)) / turns;
        const point = [k * sine * Math.cos(phi), k * sine * Math.sin(phi), k * cosine] as const;
        const { energies, omega } = curvature(luttingerModel(), point, spin);
        mean +=
          energies.reduce((sum, e, n) => sum + fermi(e, { muEv: -level, kTEv: 0 }) * omega[n], 0) / (angles * turns);
      }
    }
    const integral = (4 * Math.PI * k * k * mean * (kH - kL)) / (2 * Math.PI) ** 3;
    expect(Math.abs(momentInSPerCm(integral) / value - 1)).toBeLessThan(5e-5);
  });
});

describe("sp-square (after Phys. Rev. Lett. 121, 086602)", () => {
  const rows: Row[] = [
    [-1, 0.05, 1.262926363],
    [-0.5, 0.05, 0.856834379],
    [0, 0.05, 0.767910557],
    [1, 0.05, -0.028243056],
    [3, 0.05, 0.044943936],
    [-1, 0.1, 1.031753686],
    [-0.5, 0.1, 0.86900755],
    [0, 0.1, 0.62842406],
    [1, 0.1, -0.029431554],
    [3, 0.1, 0.041550278],
  ];

  it("has the published orbital:xy:z; the touching points leave errors of 1/n^2 and 1/n^4, which three meshes remove", () => {
    // Even divisions: the mesh then meets both touching points, at the centre and at M, in the same way.
    const [coarse, middle, fine] = [80, 160, 320].map((n) => layer(spSquareModel(), n, orbital, rows));
    expectRows(fine, rows, 5e-4);
    const once = (a: number[], b: number[]): number[] => b.map((x, i) => x + (x - a[i]) / 3);
    // The term of 1/n^6 remains: some 5e-8 at the hardest row.
    const [first, second] = [once(coarse, middle), once(middle, fine)];
    expectRows(
      second.map((x, i) => x + (x - first[i]) / 15),
      rows,
      1e-7,
    );
  });

  it("has no spin Hall effect", () => {
    const none = rows.map(([mu, kT]): Row => [mu, kT, 0]);
    expectRows(layer(spSquareModel({ spin: "explicit" }), 24, spin, none), none, 1e-12);
  });
});
