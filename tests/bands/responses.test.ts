// responses.test.ts: does every form of a response name become the right weighted products, and every wrong one an error with a cure?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { defaultResponses, planResponses } from "../../src/bands/responses.js";
import { Fault, isFault } from "../../src/base/errors.js";
import type { GridFacts, MomentFacts } from "../../src/grid/grid.js";

type Facts = Pick<GridFacts, "moments" | "periodic" | "electronsPerBand">;

const vector = (name: string): MomentFacts => ({
  name,
  directions: 3,
  kind: "axial",
  underTimeReversal: "odd",
  unit: "hbar",
});
const valley: MomentFacts = { name: "valley", directions: 1, kind: "scalar", underTimeReversal: "odd", unit: "1" };
const crystal: Facts = { moments: [vector("spin"), vector("orbital"), valley], periodic: 3, electronsPerBand: 1 };
const layer: Facts = { ...crystal, periodic: 2 };

/** A response as readable terms: "spin.z flow x field y" -> weight. */
function written(names: readonly string[], facts: Facts): Record<string, Record<string, number>> {
  const plan = planResponses(names, facts);
  const axis = (i: number): string => "xyz"[i];
  const entries = plan.columns.map(({ name, terms }) => {
    const parts = terms.map(({ product, weight }): [string, number] => {
      const { moment, flow, field } = plan.products[product];
      const carrier = moment < 0 ? "charge" : `${plan.moments[moment].name}.${axis(plan.moments[moment].direction)}`;
      return [`${carrier}:${axis(flow)}${axis(field)}`, weight];
    });
    return [name, Object.fromEntries(parts)] as const;
  });
  return Object.fromEntries(entries);
}

function faultOf(name: string, facts: Facts = crystal): Fault {
  try {
    planResponses([name], facts);
  } catch (error) {
    if (isFault(error)) return error;
    throw error;
  }
  throw new Error(`${name} was accepted`);
}

describe("response names", () => {
  it("charge:ab is the charge current along a under a field along b", () => {
    expect(written(["charge:xy", "charge:zx"], crystal)).toEqual({
      "charge:xy": { "charge:xy": 1 },
      "charge:zx": { "charge:zx": 1 },
    });
  });

  it("<moment>:ab:g is the current of component g", () => {
    expect(written(["spin:xy:z", "orbital:yy:x"], crystal)).toEqual({
      "spin:xy:z": { "spin.z:xy": 1 },
      "orbital:yy:x": { "orbital.x:yy": 1 },
    });
  });

  it("a scalar moment has no component", () => {
    expect(written(["valley:xy"], crystal)).toEqual({ "valley:xy": { "valley.x:xy": 1 } });
    expect(planResponses(["valley:xy"], crystal).moments).toEqual([{ name: "valley", direction: 0 }]);
  });

  it("<moment>:hall is (1/6) sum eps_abg sigma^g_ab in a crystal", () => {
    const axes = [0, 1, 2];
    const epsilon = (a: number, b: number, g: number): number => ((a - b) * (b - g) * (g - a)) / 2;
    const expected: Record<string, number> = {};
    for (const a of axes)
      for (const b of axes)
        for (const g of axes)
          if (epsilon(a, b, g) !== 0) expected[`orbital.${"xyz"[g]}:${"xyz"[a]}${"xyz"[b]}`] = epsilon(a, b, g) / 6;
    expect(written(["orbital:hall"], crystal)).toEqual({ "orbital:hall": expected });
  });

  it("in a layer it is the mean of xy:z and -yx:z", () => {
    expect(written(["spin:hall"], layer)).toEqual({ "spin:hall": { "spin.z:xy": 1 / 2, "spin.z:yx": -1 / 2 } });
  });

  it("charge:hall and a scalar's hall are (xy - yx) / 2: z of the Hall vector (1/2) eps_abg sigma_ab, in a crystal too", () => {
    for (const facts of [crystal, layer])
      expect(written(["charge:hall", "valley:hall"], facts)).toEqual({
        "charge:hall": { "charge:xy": 1 / 2, "charge:yx": -1 / 2 },
        "valley:hall": { "valley.x:xy": 1 / 2, "valley.x:yx": -1 / 2 },
      });
  });

  it("the rotational mean keeps the isotropic part alone: 1 for eps_abg, 0 for any tensor even in two indices", () => {
    const plan = planResponses(["spin:hall"], crystal);
    const mean = (tensor: (a: number, b: number, g: number) => number): number =>
      plan.columns[0].terms.reduce((sum, { product, weight }) => {
        const { moment, flow, field } = plan.products[product];
        return sum + weight * tensor(flow, field, plan.moments[moment].direction);
      }, 0);
    expect(mean((a, b, g) => ((a - b) * (b - g) * (g - a)) / 2)).toBeCloseTo(1, 15);
    const random = fc.array(fc.integer({ min: -100, max: 100 }), { minLength: 27, maxLength: 27 });
    fc.assert(
      fc.property(random, (t) => {
        const at = (a: number, b: number, g: number): number => t[9 * a + 3 * b + g];
        expect(mean((a, b, g) => at(a, b, g) + at(b, a, g))).toBeCloseTo(0, 12);
        expect(mean((a, b, g) => at(a, b, g) + at(a, g, b))).toBeCloseTo(0, 12);
      }),
    );
  });

  it(":all means every component that exists", () => {
    const sizes = (facts: Facts) =>
      ["charge:all", "spin:all", "valley:all"].map((name) => Object.keys(written([name], facts)).length);
    expect(sizes(crystal)).toEqual([9, 27, 9]);
    expect(sizes(layer)).toEqual([4, 12, 4]);
    expect(Object.keys(written(["charge:all"], layer))).toEqual(["charge:xx", "charge:xy", "charge:yx", "charge:yy"]);
    for (const [name, terms] of Object.entries(written(["spin:all"], layer))) {
      const [carrier, pair, component] = name.split(":");
      expect(terms).toEqual({ [`${carrier}.${component}:${pair}`]: 1 });
    }
  });

  it("a response named twice is one column, and products and moments are computed once", () => {
    const plan = planResponses(
      ["spin:hall", "spin:xy:z", "spin:all", "spin:xy:z", "charge:xy", "charge:hall"],
      crystal,
    );
    expect(plan.columns.map(({ name }) => name).filter((name) => name === "spin:xy:z")).toHaveLength(1);
    expect(plan.columns).toHaveLength(1 + 27 + 2);
    expect(plan.products).toHaveLength(27 + 2);
    expect(plan.moments).toHaveLength(3);
    expect(new Set(plan.products.map(({ moment, flow, field }) => `${moment} ${flow} ${field}`)).size).toBe(29);
  });

  it("a sweep without responses takes charge:xy and the Hall response of every vector moment", () => {
    expect(defaultResponses(crystal)).toEqual(["charge:xy", "spin:hall", "orbital:hall"]);
    expect(defaultResponses(layer)).toEqual(["charge:xy", "spin:xy:z", "orbital:xy:z"]);
    expect(defaultResponses({ ...crystal, electronsPerBand: 2 })).toEqual(["charge:xy", "orbital:hall"]);
    for (const facts of [crystal, layer, { ...layer, electronsPerBand: 2 as const }])
      expect(() => planResponses(defaultResponses(facts), facts)).not.toThrow();
  });
});

describe("a wrong response name", () => {
  it("that names no moment is answered with the nearest one", () => {
    for (const name of ["spim:xy:z", "spim:hall", "spim:all"]) {
      const fault = faultOf(name);
      expect(fault.kind).toBe("usage");
      expect(fault.message).toContain(`"${name}"`);
      expect(fault.message).toContain('no moment "spim"');
      expect(fault.cure).toContain('did you mean "spin"');
      expect(fault.cure).toContain("charge, spin, orbital, valley");
    }
    expect(faultOf("chrage:xy").cure).toContain('did you mean "charge"');
  });

  it("asks spin of bands that hold two electrons", () => {
    for (const name of ["spin:xy:z", "spin:hall", "spin:all"])
      expect(faultOf(name, { ...crystal, electronsPerBand: 2 }).cure).toContain("electronsPerBand 1");
    expect(() => planResponses(["orbital:xy:z"], { ...crystal, electronsPerBand: 2 })).not.toThrow();
  });

  it("has no pair of axes", () => {
    for (const pair of ["x", "xw", "xyz", "", "XY", "12", "hal", "al"]) {
      expect(faultOf(`charge:${pair}`).message).toContain(`"${pair}" is not a pair of axes`);
      expect(faultOf(`spin:${pair}:z`).kind).toBe("usage");
    }
    expect(faultOf("spin:all:z").message).toContain("pair of axes");
    expect(faultOf("spin:hall:z").message).toContain("pair of axes");
  });

  it("lacks its component, has an unknown one, or one too many", () => {
    expect(faultOf("spin:xy").message).toContain("polarisation");
    expect(faultOf("spin:xy").cure).toContain("spin:xy:z");
    expect(faultOf("spin:xy:w").message).toContain("polarisation");
    expect(faultOf("spin:xy:").message).toContain("polarisation");
    expect(faultOf("charge:xy:z").message).toContain('"charge" has no components');
    expect(faultOf("charge:xy:z").cure).toContain("charge:xy");
    expect(faultOf("valley:xy:z").message).toContain('"valley" has no components');
  });

  it("is no name at all", () => {
    for (const name of ["", "spin", "spin:xy:z:z", ":", "charge:all:x:y"]) expect(faultOf(name).kind).toBe("usage");
    expect(faultOf("spin").message).toContain("not a response name");
  });

  it("asks for a current or field out of a layer", () => {
    for (const name of ["charge:xz", "charge:zy", "spin:zz:x", "valley:zx"])
      expect(faultOf(name, layer).message).toContain("a layer has no current or field along z");
    expect(() => planResponses(["spin:xy:x", "spin:yx:y"], layer)).not.toThrow();
  });

  it("is a usage Fault with a one-line message and cure, whatever is typed", () => {
    const letters = fc.string({ unit: fc.constantFrom(..."spin:xyzahlrge ".split("")), maxLength: 12 });
    fc.assert(
      fc.property(letters, fc.constantFrom(crystal, layer), (name, facts) => {
        try {
          planResponses([name], facts);
        } catch (error) {
          expect(error).toBeInstanceOf(Fault);
          const fault = error as Fault;
          expect(fault.kind).toBe("usage");
          expect(`${fault.message}${fault.cure}`).not.toContain("\n");
          expect(`${fault.message}${fault.cure}`).not.toContain("undefined");
        }
      }),
      { numRuns: 2000 },
    );
  });
});
