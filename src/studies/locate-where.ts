// locate-where.ts: which places do a plane and a path in the zone mean?
import { usageFault } from "../base/errors.js";
import type { GridFacts, Triple } from "../grid/grid.js";
import { length, reciprocalVectors } from "../zone/lattice.js";
import { cartesianK } from "../zone/mesh.js";
import type { LocateResult } from "./locate-result.js";

/** Triples of a text such as "0 0 0 / 0.5 0.5 0"; a layer's third coordinate may be left out. Throws a usage Fault. */
function triplesOf(text: string, option: string, periodic: number): Triple[] {
  return text.split("/").map((part) => {
    const words = part.trim().split(/[\s,]+/);
    const numbers = words.map((word) => (word === "" ? Number.NaN : Number(word)));
    if (numbers.length === 2 && periodic === 2) numbers.push(0);
    if (numbers.length !== 3 || !numbers.every(Number.isFinite))
      throw usageFault(
        `${option} "${text}": "${part.trim()}" is no k point`,
        'Write three numbers in b1, b2, b3 for each, with " / " between them, e.g. "0 0 0 / 0.5 0.5 0".',
      );
    return [numbers[0], numbers[1], numbers[2]];
  });
}

export type Plane = LocateResult["plane"];

/** The plane of "CENTRE / ALONG / ACROSS"; b1 and b2 about k = 0 where left out. Throws a usage Fault for what is no plane. */
export function planeOf(text: string | undefined, points: number, periodic: number): Plane {
  if (text === undefined) return { centre: [0, 0, 0], along: [1, 0, 0], across: [0, 1, 0], points };
  const [centre, along, across, ...more] = triplesOf(text, "--plane", periodic);
  const minor = (i: number, j: number): number => along[i] * across[j] - along[j] * across[i];
  if (across === undefined || more.length > 0 || Math.hypot(minor(0, 1), minor(1, 2), minor(2, 0)) < 1e-9)
    throw usageFault(
      `--plane "${text}" is no plane`,
      'Write its centre and two directions that are not parallel, e.g. "0 0 0.5 / 1 0 0 / 0 1 0".',
    );
  return { centre, along, across, points };
}

/** k of every place of a plane, row after row. */
export function planePlaces({ centre, along, across, points }: Plane): Triple[] {
  const middle = (i: number): number => (i + 0.5) / points - 0.5;
  return Array.from({ length: points * points }, (_, flat): Triple => {
    const [u, v] = [middle(flat % points), middle(Math.floor(flat / points))];
    return [0, 1, 2].map((j) => centre[j] + u * along[j] + v * across[j]) as unknown as Triple;
  });
}

/** The places of a path through the corners of a text, about `count` of them, evenly spaced in k. Throws a usage Fault. */
export function pathOf(
  text: string,
  count: number,
  facts: GridFacts,
): Omit<NonNullable<LocateResult["path"]>, "energies_eV"> {
  const corners = triplesOf(text, "--path", facts.periodic);
  const reciprocal = reciprocalVectors(facts.vectorsA);
  const legs = corners.slice(1).map((to, i) => {
    const from = corners[i];
    const step = to.map((x, j) => x - from[j]) as unknown as Triple;
    return { from, step, long: length(cartesianK(step, reciprocal)) };
  });
  const whole = legs.reduce((sum, { long }) => sum + long, 0);
  if (legs.length === 0 || legs.some(({ long }) => long === 0))
    throw usageFault(`--path "${text}" leads nowhere`, "Give two different points or more.");
  const k: Triple[] = [corners[0]];
  const lengths = [0];
  const marks = [{ k: corners[0], at: 0 }];
  for (const [i, { from, step, long }] of legs.entries()) {
    const steps = Math.max(2, Math.round((count * long) / whole));
    const start = lengths[lengths.length - 1];
    for (let s = 1; s <= steps; s++) {
      k.push(from.map((x, j) => x + (step[j] * s) / steps) as unknown as Triple);
      lengths.push(start + (long * s) / steps);
    }
    marks.push({ k: corners[i + 1], at: k.length - 1 });
  }
  return { corners: marks, k, length: lengths };
}
