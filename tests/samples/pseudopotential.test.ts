// pseudopotential.test.ts: does the plane-wave semiconductor have the published levels, the symmetries of its crystal and exact derivatives?
//
// M. L. Cohen, T. K. Bergstresser, Phys. Rev. 141, 789 (1966), levels without spin-orbit coupling, from memory: within 0.2 eV, of
// which 0.1 eV is the cut to one sphere of 59 plane waves.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { hbar2OverMeEvA2 } from "../../src/base/constants.js";
import { isFault } from "../../src/base/errors.js";
import type { Triple } from "../../src/grid/grid.js";
import type { PointData } from "../../src/grid/target.js";
import { createEigensolver } from "../../src/kernel/eigen.js";
import { createSampler } from "../../src/samples/eigenbasis.js";
import { adjointOf, scaled, sumOf } from "../../src/samples/matrix.js";
import type { ComplexMatrix, SampleModel } from "../../src/samples/model.js";
import { zincblendeModel } from "../../src/samples/pseudopotential.js";
import { foldIntoFccZone, reciprocalSphere, squared } from "../../src/samples/pseudopotential-waves.js";

/** 2 pi / a, 1/angstrom. */
const unitOf = (model: SampleModel): number => Math.PI / model.vectorsA[0][1];
const at = (model: SampleModel, f: Triple): Triple => f.map((x) => x * unitOf(model)) as unknown as Triple;

/** All levels above the reference level; k in units of 2 pi / a. */
function levels(model: SampleModel, f: Triple): Float64Array {
  const n = model.basisSize ?? model.bands;
  const values = new Float64Array(n);
  createEigensolver(n)(model.at(at(model, f)).h, values, new Float64Array(2 * n * n));
  return values.map((e) => e - (model.fermiEv ?? 0));
}

const conduction = (model: SampleModel, f: Triple): number => levels(model, f)[8];
const largest = (m: ArrayLike<number>): number => Array.from(m).reduce((a, b) => Math.max(a, Math.abs(b)), 0);
const distance = (a: ComplexMatrix, b: ComplexMatrix): number => largest(sumOf(a, scaled(b, -1)));
const gaas = zincblendeModel();
const centre: Triple = [0, 0, 0];
const X: Triple = [1, 0, 0];
const L: Triple = [0.5, 0.5, 0.5];
/** Clear of the zone's faces: the twelve nearest are at 0.866, with corners at 1.118. */
const inside = fc.tuple(...[0, 1, 2].map(() => fc.double({ min: -0.49, max: 0.49, noNaN: true })));
const forAll = (check: (k: Triple) => void, numRuns = 6): void => {
  fc.assert(
    fc.property(inside, (k) => check(k as unknown as Triple)),
    { numRuns, seed: 11 },
  );
};

describe("the basis", () => {
  it.each([
    [11, 51],
    [12, 59],
    [16, 65],
    [20, 113],
  ])("cutoff %i: %i plane waves, the shells of the bcc lattice", (cutoff, count) => {
    const waves = reciprocalSphere(cutoff);
    expect(waves).toHaveLength(count);
    const names = new Set(waves.map(String));
    for (const [x, y, z] of waves)
      for (const image of [
        [0 - x, 0 - y, 0 - z],
        [y, z, x],
        [y, x, z],
      ])
        expect(names).toContain(String(image));
  });

  it("folds any k to its image nearest to the zone's centre", () => {
    const wide = fc.tuple(...[0, 1, 2].map(() => fc.double({ min: -5, max: 5, noNaN: true })));
    const neighbours = reciprocalSphere(4);
    fc.assert(
      fc.property(wide, (k) => {
        const folded = foldIntoFccZone(k as unknown as Triple);
        const moved = k.map((x, i) => x - folded[i]);
        for (const x of moved) expect(Math.abs(x - Math.round(x))).toBeLessThan(1e-12);
        for (const x of moved) expect(Math.abs(Math.round(x) - Math.round(moved[0])) % 2).toBe(0);
        for (const g of neighbours) {
          const image = folded.map((x, i) => x - g[i]) as unknown as Triple;
          expect(squared(folded)).toBeLessThanOrEqual(squared(image) + 1e-8);
        }
      }),
      { seed: 5 },
    );
  });

  it("is small enough to be refused more bands than it holds", () => {
    expect(() => zincblendeModel({ bands: 120 })).toThrow(/cannot write 120 bands: cutoff 12 makes a basis of 118/);
    try {
      zincblendeModel({ bands: 120 });
    } catch (error) {
      expect(isFault(error) && error.kind).toBe("usage");
    }
  });
});

describe("published levels, no spin-orbit coupling", () => {
  const bare = (material: "Si" | "Ge" | "GaAs", cutoff = 12): SampleModel =>
    zincblendeModel({ material, splitting: 0, cutoff });

  it("Si: indirect gap of 0.8 eV near 0.85 X, Gamma15 at 3.4, L1 at 1.9 eV", () => {
    const model = bare("Si");
    const line = Array.from({ length: 21 }, (_, i) => conduction(model, [i / 20, 0, 0]));
    const lowest = Math.min(...line);
    expect(Math.abs(lowest - 0.8)).toBeLessThan(0.1);
    expect(line.indexOf(lowest) / 20).toBeCloseTo(0.85, 10);
    expect(Math.abs(conduction(model, centre) - 3.4)).toBeLessThan(0.1);
    expect(Math.abs(conduction(model, L) - 1.9)).toBeLessThan(0.1);
  });

  it("Ge: indirect, its lowest conduction band at L, that of Gamma2' at 1.2 eV", () => {
    const model = bare("Ge");
    expect(Math.abs(conduction(model, centre) - 1.2)).toBeLessThan(0.1);
    expect(Math.abs(conduction(model, L) - 0.9)).toBeLessThan(0.2);
    expect(conduction(model, L)).toBeLessThan(conduction(model, centre));
    expect(conduction(model, L)).toBeLessThan(conduction(model, X));
  });

  it("GaAs: direct gap of 1.4 eV, then L at 1.7 and X at 1.8 eV", () => {
    const model = bare("GaAs");
    expect(Math.abs(conduction(model, centre) - 1.4)).toBeLessThan(0.1);
    expect(Math.abs(conduction(model, L) - 1.7)).toBeLessThan(0.1);
    expect(Math.abs(conduction(model, X) - 1.8)).toBeLessThan(0.1);
  });

  it("hold within 0.05 eV in the larger basis", () => {
    const [small, large] = [bare("GaAs"), bare("GaAs", 20)];
    for (const k of [centre, X, L]) expect(Math.abs(conduction(small, k) - conduction(large, k))).toBeLessThan(0.05);
  });
});

describe("spin-orbit coupling", () => {
  it.each([
    ["GaAs", undefined, 0.34],
    ["Ge", undefined, 0.29],
    ["Si", 0.1, 0.1],
  ] as const)("%s, splitting %s: four levels at the top and two below by %s eV", (material, splitting, expected) => {
    const e = levels(zincblendeModel({ material, splitting }), centre);
    for (const n of [4, 5, 6, 7]) expect(Math.abs(e[n])).toBeLessThan(1e-9);
    for (const n of [2, 3]) expect(Math.abs(e[n] + expected)).toBeLessThan(1e-9);
  });

  it("splits the levels of a crystal without inversion centre along [110] and none along [100] (Dresselhaus 1955)", () => {
    const split = levels(gaas, [0.2, 0.2, 0]);
    expect(Math.abs(split[6] - split[7])).toBeGreaterThan(1e-3);
    const pairs = levels(gaas, [0.2, 0, 0]);
    for (let n = 0; n < 20; n += 2) expect(Math.abs(pairs[n] - pairs[n + 1])).toBeLessThan(1e-9);
  });

  it("with an inversion centre every level is twofold at every k (Kramers)", () => {
    const ge = zincblendeModel({ material: "Ge" });
    forAll((k) => {
      const e = levels(ge, k);
      for (let n = 0; n < e.length; n += 2) expect(Math.abs(e[n] - e[n + 1])).toBeLessThan(1e-9);
    });
  });

  it("obeys time reversal and the tetrahedral group: levels at -k and at rotated k", () => {
    forAll(([x, y, z]) => {
      const here = levels(gaas, [x, y, z]);
      for (const image of [
        [-x, -y, -z],
        [y, z, x],
        [y, x, z],
        [-x, -y, z],
        [-y, x, -z],
      ] as const) {
        expect(distance(here, levels(gaas, image))).toBeLessThan(1e-9);
      }
    });
  });
});

describe("the zone", () => {
  it("is periodic, with a step on its hexagonal faces that the cutoff makes small", () => {
    const k: Triple = [0.3, 0.1, -0.2];
    expect(distance(levels(gaas, k), levels(gaas, [1.3, -0.9, 0.8]))).toBeLessThan(1e-9);
    const step = (model: SampleModel): number => {
      const [near, far] = [1 - 1e-6, 1 + 1e-6].map((s) => levels(model, [0.8 * s, 0.55 * s, 0.15 * s]).subarray(0, 12));
      return distance(near, far);
    };
    const small = step(gaas);
    expect(small).toBeLessThan(0.1);
    expect(step(zincblendeModel({ cutoff: 20 }))).toBeLessThan(small);
  });
});

describe("derivatives", () => {
  it("are Hermitian, dH/dk the difference of H and d2H/dk2 that of a free electron, exactly", () => {
    forAll((k) => {
      const here = gaas.at(at(gaas, k));
      const step = 1e-2; // H is of second order in k: a central difference has no error but round-off
      for (const axis of [0, 1, 2]) {
        const shifted = (s: number): Triple => at(gaas, k).map((x, i) => (i === axis ? x + s : x)) as unknown as Triple;
        const [up, down] = [gaas.at(shifted(step)), gaas.at(shifted(-step))];
        expect(distance(here.dh[axis], adjointOf(here.dh[axis]))).toBeLessThan(1e-13);
        expect(distance(scaled(sumOf(up.h, scaled(down.h, -1)), 1 / (2 * step)), here.dh[axis])).toBeLessThan(1e-9);
        for (const b of [0, 1, 2]) {
          const bend = scaled(sumOf(up.dh[b], scaled(down.dh[b], -1)), 1 / (2 * step));
          const n = gaas.basisSize ?? 0;
          for (let i = 0; i < n; i++) bend[2 * i * (n + 1)] -= b === axis ? hbar2OverMeEvA2 : 0;
          expect(largest(bend)).toBeLessThan(1e-9);
        }
      }
    });
  });

  /** d2E/dk_x^2 of a band by closure over the bands there are: hbar^2/m + 2 sum_m |v_nm|^2 / (E_n - E_m). */
  const bySum = ({ energyEv, velocity }: PointData, n: number): number => {
    const bands = energyEv.length;
    let sum = hbar2OverMeEvA2;
    for (let m = 0; m < bands; m++) {
      if (m === n) continue;
      const e = 2 * (n * bands + m);
      sum += (2 * (velocity[0][e] ** 2 + velocity[0][e + 1] ** 2)) / (energyEv[n] - energyEv[m]);
    }
    return sum;
  };

  it("obey the effective-mass sum rule with all bands, and the less the fewer are kept", () => {
    // A k where no two levels touch: bands split off by the lack of an inversion centre.
    const k: Triple = [0.31, 0.12, 0.23];
    const h = 1e-3;
    const [down, here, up] = [-h, 0, h].map((s) => levels(gaas, [k[0] + s / unitOf(gaas), k[1], k[2]]));
    const error = (bands: number, n: number): number => {
      const data = createSampler(zincblendeModel({ bands }), "none")(at(gaas, k));
      return Math.abs(bySum(data, n) - (up[n] - 2 * here[n] + down[n]) / (h * h));
    };
    const kept = [16, 30, 60, 118].map((bands) => [0, 4, 7].map((n) => error(bands, n)));
    for (const band of [0, 1, 2]) {
      expect(kept[1][band]).toBeLessThan(kept[0][band]);
      expect(kept[2][band]).toBeLessThan(kept[1][band]);
      expect(kept[3][band]).toBeLessThan(2e-3 * hbar2OverMeEvA2);
    }
  });

  it("and moments of the kept bands are the corner of those of all bands", () => {
    const k = at(gaas, [0.31, 0.12, 0.23]);
    const all = createSampler(zincblendeModel({ bands: 118 }), "none")(k);
    const some = createSampler(gaas, "none")(k);
    const corner = (m: ComplexMatrix): number[] =>
      Array.from({ length: 900 }, (_, i) =>
        Math.hypot(...m.subarray(2 * (118 * Math.floor(i / 30) + (i % 30))).subarray(0, 2)),
      );
    const sizes = (m: ComplexMatrix): number[] =>
      Array.from({ length: 900 }, (_, i) => Math.hypot(m[2 * i], m[2 * i + 1]));
    expect(distance(all.energyEv.slice(0, 30), some.energyEv.slice())).toBe(0);
    for (const axis of [0, 1, 2]) {
      expect(largest(corner(all.velocity[axis]).map((x, i) => x - sizes(some.velocity[axis])[i]))).toBeLessThan(1e-11);
      const spins = [all, some].map((data) => data.moments.get("spin")?.[axis] ?? new Float64Array());
      const kept = sizes(spins[1]);
      expect(largest(corner(spins[0]).map((x, i) => x - kept[i]))).toBeLessThan(1e-12);
      expect(largest(kept)).toBeGreaterThan(0.2);
    }
  });
});
