// units.test.ts: are prefactors and signs those of the Kubo formula, worked out here from e, hbar and metres alone?
import { describe, expect, it } from "vitest";
import { drudeUnit, type ResponseUnit, responseUnit, thermalUnit } from "../../src/bands/units.js";
import { isFault } from "../../src/base/errors.js";
import type { GridFacts, MomentFacts } from "../../src/grid/grid.js";

type Facts = Pick<GridFacts, "vectorsA" | "periodic" | "electronsPerBand" | "moments">;

// Exact constants of the SI (2019): elementary charge in C, Planck constant in J s.
const chargeC = 1.602176634e-19;
const planckJs = 6.62607015e-34;
const hbarJs = planckJs / (2 * Math.PI);

const spin: MomentFacts = { name: "spin", directions: 3, kind: "axial", underTimeReversal: "odd", unit: "hbar" };
const valley: MomentFacts = { name: "valley", directions: 1, kind: "scalar", underTimeReversal: "odd", unit: "1" };
const crystal: Facts = {
  vectorsA: [
    [0, 2.04, 2.04],
    [2.04, 0, 2.04],
    [2.04, 2.04, 0],
  ],
  periodic: 3,
  electronsPerBand: 1,
  moments: [spin, valley],
};
const layer: Facts = {
  ...crystal,
  vectorsA: [
    [2.46, 0, 0],
    [-1.23, 2.46 * Math.sqrt(0.75), 0],
    [0, 0, 6.7],
  ],
  periodic: 2,
};
const fccVolumeA3 = 4.08 ** 3 / 4;
const hexagonalAreaA2 = 2.46 ** 2 * Math.sqrt(0.75);

/** Integral d3k / (2 pi)^3 = (1 / cell volume) * zone mean; Omega in A^2; so e^2/hbar per angstrom, told in S/m and S/cm. */
const siemensPerMetre = chargeC ** 2 / hbarJs / fccVolumeA3 / 1e-10;

function expectUnit({ unit, factor }: ResponseUnit, name: string, value: number): void {
  expect(unit).toBe(name);
  expect(Math.abs(factor / value - 1)).toBeLessThan(2e-12);
}

describe("a crystal", () => {
  it("charge in S/cm with the sign of -e^2/hbar, a moment in (hbar/e) S/cm with the other", () => {
    expectUnit(responseUnit("charge", crystal), "S/cm", -siemensPerMetre / 100);
    expectUnit(responseUnit("spin", crystal), "(hbar/e) S/cm", siemensPerMetre / 100);
    expectUnit(responseUnit("valley", crystal), "S/cm", siemensPerMetre / 100);
  });

  it("S/m is 100 times the number, hbar/2e doubles it", () => {
    expectUnit(responseUnit("charge", crystal, "S/m"), "S/m", -siemensPerMetre);
    expectUnit(responseUnit("spin", crystal, "(hbar/e) S/m"), "(hbar/e) S/m", siemensPerMetre);
    expectUnit(responseUnit("spin", crystal, "(hbar/2e) S/cm"), "(hbar/2e) S/cm", siemensPerMetre / 50);
    expectUnit(responseUnit("spin", crystal, "(hbar/2e) S/m"), "(hbar/2e) S/m", siemensPerMetre * 2);
  });

  it("bands of two electrons count twice", () => {
    const twofold: Facts = { ...crystal, electronsPerBand: 2 };
    expectUnit(responseUnit("charge", twofold), "S/cm", -siemensPerMetre / 50);
  });

  it("blanks, brackets and capitals may be left out", () => {
    for (const typed of ["hbar/2e S/cm", "(hbar/2e)S/cm", "(HBAR/2E) s/CM"])
      expect(responseUnit("spin", crystal, typed)).toEqual(responseUnit("spin", crystal, "(hbar/2e) S/cm"));
  });
});

describe("a layer", () => {
  // Integral d2k / (2 pi)^2 = zone mean / area; (e^2/hbar) / (e^2/h) = 2 pi. A Chern number is (1/2 pi) integral d2k Omega.
  const perQuantum = (2 * Math.PI) / hexagonalAreaA2;

  it("charge in e^2/h, a moment in e/2pi = (hbar/e) e^2/h", () => {
    expectUnit(responseUnit("charge", layer), "e^2/h", -perQuantum);
    expectUnit(responseUnit("spin", layer), "e/2pi", perQuantum);
    expectUnit(responseUnit("valley", layer), "e^2/h", perQuantum);
  });

  it("a band of Chern number C gives -C e^2/h: zone mean of Omega = 2 pi C / zone area", () => {
    const zoneArea = (2 * Math.PI) ** 2 / hexagonalAreaA2;
    for (const chern of [-2, 1, 3]) {
      const mean = (2 * Math.PI * chern) / zoneArea;
      expect(responseUnit("charge", layer).factor * mean).toBeCloseTo(-chern, 12);
    }
  });

  it("told as bulk it is divided by the thickness |a3|: (e^2/h per layer) / 6.7 angstrom", () => {
    const quantum = chargeC ** 2 / planckJs;
    const bulk = (quantum * perQuantum) / 6.7e-10;
    expectUnit(responseUnit("charge", layer, "S/m"), "S/m", -bulk);
    expectUnit(responseUnit("charge", layer, "S/cm"), "S/cm", -bulk / 100);
    expectUnit(responseUnit("spin", layer, "(hbar/2e) S/cm"), "(hbar/2e) S/cm", bulk / 50);
  });
});

describe("one unit for a sweep of several carriers", () => {
  it("the unit of a moment means its counterpart for what carries no hbar", () => {
    for (const carrier of ["charge", "valley"]) {
      expect(responseUnit(carrier, crystal, "(hbar/2e) S/m")).toEqual(responseUnit(carrier, crystal, "S/m"));
      expect(responseUnit(carrier, crystal, "(hbar/e) S/cm")).toEqual(responseUnit(carrier, crystal, "S/cm"));
      expect(responseUnit(carrier, layer, "e/2pi")).toEqual(responseUnit(carrier, layer, "e^2/h"));
      expect(responseUnit(carrier, layer, "hbar/2e S/cm")).toEqual(responseUnit(carrier, layer, "S/cm"));
    }
  });
});

describe("a unit that fits nothing", () => {
  const faultOf = (carrier: string, facts: Facts, wanted: string): { message: string; cure: string } => {
    try {
      responseUnit(carrier, facts, wanted);
    } catch (error) {
      if (isFault(error)) return error;
      throw error;
    }
    throw new Error(`${wanted} was accepted for ${carrier}`);
  };

  it("is a usage Fault that lists the units there are", () => {
    expect(faultOf("spin", crystal, "furlong").cure).toBe(
      "Use one of: (hbar/e) S/cm, (hbar/e) S/m, (hbar/2e) S/cm, (hbar/2e) S/m.",
    );
    expect(faultOf("spin", layer, "furlong").cure).toContain("e/2pi, (hbar/e) S/cm");
    expect(faultOf("charge", layer, "furlong").cure).toBe("Use one of: e^2/h, S/cm, S/m.");
    expect(faultOf("charge", crystal, "").message).toContain('unit ""');
  });

  it("a moment's unit must say which hbar it counts in", () => {
    expect(faultOf("spin", crystal, "S/cm").cure).toContain("(hbar/2e) S/cm");
  });

  it("sheet units do not fit a crystal", () => {
    for (const wanted of ["e^2/h", "e/2pi"])
      for (const carrier of ["charge", "spin", "valley"])
        expect(faultOf(carrier, crystal, wanted).message).toContain(wanted);
  });

  it("what only ends like a unit is none", () => {
    for (const wanted of ["banana S/cm", "kS/m", "hbar/3e S/cm", "mS/cm"])
      for (const carrier of ["charge", "valley", "spin"])
        expect(faultOf(carrier, crystal, wanted).message).toContain(wanted);
  });
});

describe("companions", () => {
  it("Mott integrals keep the response's unit of flux: A/(m K), (hbar/e) A/(m K), for a layer A/K; -k_B/e is in the factor", () => {
    const of = (carrier: string, facts: typeof crystal, unit?: string) => {
      const [thermal, response] = [thermalUnit(carrier, facts, unit), responseUnit(carrier, facts, unit)];
      return [thermal.unit, thermal.factor / response.factor / -8.617333262e-5] as const;
    };
    expect(of("charge", crystal)).toEqual(["A/(m K)", expect.closeTo(100, 10)]);
    expect(of("charge", crystal, "S/m")).toEqual(["A/(m K)", expect.closeTo(1, 12)]);
    expect(of("spin", crystal)).toEqual(["(hbar/e) A/(m K)", expect.closeTo(100, 10)]);
    expect(of("spin", crystal, "(hbar/2e) S/m")).toEqual(["(hbar/2e) A/(m K)", expect.closeTo(1, 12)]);

    expect(of("charge", layer)).toEqual(["A/K", expect.closeTo(chargeC ** 2 / planckJs, 14)]);
    expect(of("spin", layer)).toEqual(["(hbar/e) A/K", expect.closeTo(chargeC ** 2 / planckJs, 14)]);
    expect(of("spin", layer, "(hbar/e) S/cm")).toEqual(["(hbar/e) A/(m K)", expect.closeTo(100, 10)]);
  });

  it("the Drude weight of free electrons is n e^2 / m", () => {
    // A parabola filled to E_F: the mean of v_x^2 delta(E - E_F) over a cell's zone is n V times hbar^2 / m, n the electrons per volume.
    const massKg = 9.1093837139e-31; // CODATA 2022
    const perCell = 1.3;
    const volumeM3 = fccVolumeA3 * 1e-30;
    const mean = perCell * 7.6199642318; // hbar^2 / m_e in eV angstrom^2
    const { unit, factor } = drudeUnit(crystal);
    expect(unit).toBe("(S/m)/s");
    expect((factor * mean) / ((perCell / volumeM3) * (chargeC ** 2 / massKg))).toBeCloseTo(1, 8);
    const areaM2 = hexagonalAreaA2 * 1e-20;
    expect(drudeUnit(layer).unit).toBe("S/s");
    expect((drudeUnit(layer).factor * mean) / ((perCell / areaM2) * (chargeC ** 2 / massKg))).toBeCloseTo(1, 8);
    expect(drudeUnit({ ...crystal, electronsPerBand: 2 }).factor).toBe(2 * factor);
  });
});
