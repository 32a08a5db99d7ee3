// units.test.ts: the factors against CODATA 2022 values that are published as such.
import { expect, it } from "vitest";
import { energyUnits, hessianUnits, lengthUnits, momentUnits, namesOf, velocityUnits } from "../../src/grid/units.js";

it("converts to eV, angstrom and hbar", () => {
  expect(energyUnits).toEqual({ eV: 1, meV: 1e-3, hartree: 27.211386245981, rydberg: 13.6056931229905 });
  expect(lengthUnits).toEqual({ angstrom: 1, bohr: 0.529177210544, nm: 10 });
  expect(momentUnits).toEqual({ hbar: 1, "half-hbar": 0.5, "1": 1 });
});

it("the atomic unit of velocity is 2.18769126216e6 m/s (CODATA 2022)", () => {
  expect(velocityUnits["hartree*bohr"] / velocityUnits["m/s"] / 2.18769126216e6).toBeCloseTo(1, 9);
  expect(velocityUnits["rydberg*bohr"] / velocityUnits["hartree*bohr"]).toBe(0.5);
});

it("hbar^2 / m_e is one hartree bohr^2: 7.61996423 eV angstrom^2", () => {
  // hbar c = 1973.269804 eV angstrom, m_e c^2 = 510998.95069 eV (CODATA 2022).
  expect(hessianUnits["hartree*bohr^2"]).toBeCloseTo(1973.269804 ** 2 / 510998.95069, 7);
  expect(hessianUnits["rydberg*bohr^2"] * 2).toBeCloseTo(hessianUnits["hartree*bohr^2"], 14);
});

it("lists the names of a table", () => {
  expect(namesOf(lengthUnits)).toEqual(["angstrom", "bohr", "nm"]);
});
