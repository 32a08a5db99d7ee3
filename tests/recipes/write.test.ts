// write.test.ts: do the recipes of the format's page write grids that the reader reads as the closed form says?
import { beforeAll, expect, it } from "vitest";
import type { Block, MatrixBlock } from "../../src/grid/grid.js";
import { openGrid } from "../../src/grid/open.js";
import { openReader } from "../../src/grid/reader.js";
import { requireOrSkip } from "../tooling/python.js";
import { cellAreaA2, closedForm, meshDivisions } from "./dirac.js";
import { plain, recipes, runRecipe, stream } from "./recipes.js";

const points = meshDivisions * meshDivisions;

interface Complex {
  readonly re: number;
  readonly im: number;
}

const times = (a: Complex, b: Complex): Complex => ({ re: a.re * b.re - a.im * b.im, im: a.re * b.im + a.im * b.re });
const plus = (a: Complex, b: Complex): Complex => ({ re: a.re + b.re, im: a.im + b.im });

function given<T>(value: T | undefined): T {
  if (value === undefined) throw new Error("the reader left out what was asked for");
  return value;
}

function entry(matrix: MatrixBlock | undefined, k: number, bra: number, ket: number): Complex {
  const { data, offset, stride } = given(matrix);
  const at = offset + k * stride + 2 * (bra * 2 + ket);
  return { re: data[at], im: data[at + 1] };
}

/** The whole grid in one block. */
function readAll(directory: string): Block {
  const spin = [0, 1, 2].map((direction) => ({ name: "spin", direction }));
  const reader = openReader(openGrid(directory), { velocity: [0, 1, 2], moments: spin, hessian: false });
  return reader.read(0, points);
}

/** Lower band's curvature of the current `current(bra, ket)` against v_y, by the definition. */
function lowerCurvature(block: Block, k: number, current: (bra: number, ket: number) => Complex): number {
  const gap = block.energyEv[2 * k + 1] - block.energyEv[2 * k];
  return (-2 * times(current(0, 1), entry(block.velocity[1], k, 1, 0)).im) / (gap * gap);
}

/** (S v_x + v_x S) / 2 at k, entry (bra, ket). */
function spinCurrent(block: Block, k: number, component: number, bra: number, ket: number): Complex {
  const spin = given(block.moments.get("spin"))[component];
  const velocity = block.velocity[0];
  let sum: Complex = { re: 0, im: 0 };
  for (const middle of [0, 1]) {
    sum = plus(sum, times(entry(spin, k, bra, middle), entry(velocity, k, middle, ket)));
    sum = plus(sum, times(entry(velocity, k, bra, middle), entry(spin, k, middle, ket)));
  }
  return { re: sum.re / 2, im: sum.im / 2 };
}

/** Largest deviation over all k points of what `pick` lists: pairs of found and expected. */
function worst(pick: (k: number) => readonly (readonly [number, number])[]): number {
  let most = 0;
  for (let k = 0; k < points; k++) {
    for (const [found, expected] of pick(k)) most = Math.max(most, Math.abs(found - expected));
  }
  return most;
}

for (const recipe of recipes) {
  requireOrSkip(recipe.needs, recipe.tool, recipe.file, () => {
    let directory: string;
    let block: Block;
    beforeAll(() => {
      directory = runRecipe(recipe);
      block = readAll(directory);
    }, 60_000);

    it("has the facts of its model in canonical units", () => {
      const { facts } = openGrid(directory);
      expect(facts.bands).toBe(2);
      expect(facts.divisions).toEqual([24, 24, 1]);
      expect(facts.points).toBe(points);
      expect(facts.periodic).toBe(2);
      expect(facts.fermiEv).toBe(0);
      expect(facts.electrons).toBe(1);
      expect(facts.vectorsA.flat().map((x) => Number(x.toFixed(12)))).toEqual([3, 0, 0, 0, 3, 0, 0, 0, 10]);
      expect(facts.moments).toEqual([
        { name: "spin", directions: 3, kind: "axial", underTimeReversal: "odd", unit: "hbar" },
      ]);
    });

    it("has the closed form's energies, slopes and spins", () => {
      const energies = worst((k) => closedForm(k).energyEv.map((e, n) => [block.energyEv[2 * k + n], e] as const));
      expect(energies).toBeLessThan(1e-13);
      const slopes = worst((k) =>
        closedForm(k).slopeEvA.flatMap((pair, n) =>
          pair.map((v, a) => [entry(block.velocity[a], k, n, n).re, v] as const),
        ),
      );
      expect(slopes).toBeLessThan(1e-13);
      const spin = given(block.moments.get("spin"));
      const spins = worst((k) =>
        closedForm(k).spinUpper.flatMap((s, g) => [
          [entry(spin[g], k, 1, 1).re, s] as const,
          [entry(spin[g], k, 0, 0).re, -s] as const,
        ]),
      );
      expect(spins).toBeLessThan(1e-14);
    });

    it("has all matrices in one eigenbasis, bra before ket: the curvatures agree with the closed form", () => {
      const charge = worst((k) => [
        [lowerCurvature(block, k, (bra, ket) => entry(block.velocity[0], k, bra, ket)), closedForm(k).chargeXyA2],
      ]);
      expect(charge).toBeLessThan(1e-12);
      const spin = worst((k) =>
        closedForm(k).spinXyA2.map(
          (omega, g) => [lowerCurvature(block, k, (bra, ket) => spinCurrent(block, k, g, bra, ket)), omega] as const,
        ),
      );
      expect(spin).toBeLessThan(1e-13);
    });

    it("has Chern number +1 in the lower band (Qi, Wu and Zhang, Phys. Rev. B 74, 085308 (2006))", () => {
      let sum = 0;
      for (let k = 0; k < points; k++) sum += lowerCurvature(block, k, (b, c) => entry(block.velocity[0], k, b, c));
      // (1/2pi) integral Omega = (2 pi / area) mean Omega. A mesh sum of a smooth periodic function converges exponentially.
      expect(Math.abs(((2 * Math.PI) / cellAreaA2) * (sum / points) - 1)).toBeLessThan(1e-6);
    });

    it("writes no velocity out of the plane", () => {
      expect(worst((k) => [0, 1, 2, 3].map((i) => [entry(block.velocity[2], k, i >> 1, i & 1).re, 0] as const))).toBe(
        0,
      );
    });
  });
}

const both = plain.tool === undefined ? undefined : stream.tool;
requireOrSkip("Python 3 and gfortran", both, "plain Python and Fortran", () => {
  it("agree entry by entry, phases included, though units, axis order and spin unit differ", () => {
    // One block each: the memory belongs to its reader.
    const [a, b] = [readAll(runRecipe(plain)), readAll(runRecipe(stream))];
    const pairs: (readonly [MatrixBlock | undefined, MatrixBlock | undefined])[] = [0, 1, 2].flatMap((direction) => [
      [a.velocity[direction], b.velocity[direction]] as const,
      [given(a.moments.get("spin"))[direction], given(b.moments.get("spin"))[direction]] as const,
    ]);
    const difference = worst((k) =>
      pairs.flatMap(([p, q]) =>
        [0, 1, 2, 3].flatMap((i) => {
          const [x, y] = [entry(p, k, i >> 1, i & 1), entry(q, k, i >> 1, i & 1)];
          return [[x.re, y.re] as const, [x.im, y.im] as const];
        }),
      ),
    );
    expect(difference).toBeLessThan(1e-13);
  }, 60_000);
});
