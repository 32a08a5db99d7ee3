// plant.ts: writes a sample as a band grid with one mistake planted in it, of the kinds that real data have.
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Triple } from "../../src/grid/grid.js";
import { type Grid, openGrid } from "../../src/grid/open.js";
import { createGridWriter, type GridLayout, type PointData } from "../../src/grid/writer.js";
import { createSampler } from "../../src/samples/eigenbasis.js";
import type { SampleModel } from "../../src/samples/model.js";
import { sampleMoments } from "../../src/samples/write.js";
import { reciprocalVectors } from "../../src/zone/lattice.js";
import { cartesianK, fractionalK } from "../../src/zone/mesh.js";

/** All points of a sample, computed once. */
export interface Sampled {
  readonly model: SampleModel;
  readonly divisions: Triple;
  readonly offset: Triple;
  readonly points: readonly PointData[];
}

/** One mistake: in the numbers, in the order of the points, in what the manifest says. */
export interface Mistake {
  readonly point?: (point: PointData, flat: number) => PointData;
  readonly order?: (flat: number, divisions: Triple) => number;
  // biome-ignore lint/suspicious/noExplicitAny: a manifest as JSON, to be spoilt at will
  readonly manifest?: (manifest: any) => void;
  readonly layout?: GridLayout;
  readonly hessian?: "none" | "free-electron";
  readonly bands?: number;
}

const copyOf = (point: PointData): PointData => ({
  energyEv: point.energyEv.slice(),
  velocity: point.velocity.map((m) => m.slice()),
  moments: new Map([...point.moments].map(([name, parts]) => [name, parts.map((m) => m.slice())])),
  ...(point.hessian === undefined ? {} : { hessian: point.hessian.map((m) => m.slice()) }),
});

export function sampled(model: SampleModel, divisions: Triple, offset: Triple = [0, 0, 0]): Sampled {
  const sample = createSampler(model, model.hessian);
  const reciprocal = reciprocalVectors(model.vectorsA);
  const mesh = { vectorsA: model.vectorsA, periodic: model.periodic, divisions, offset };
  const points = Array.from({ length: divisions[0] * divisions[1] * divisions[2] }, (_, flat) =>
    copyOf(sample(cartesianK(fractionalK(flat, mesh), reciprocal))),
  );
  return { model, divisions, offset, points };
}

/** Writes the grid with the mistake. */
export function planted({ model, divisions, offset, points }: Sampled, directory: string, mistake: Mistake = {}): Grid {
  const { title, vectorsA, periodic, electronsPerBand, fermiEv, electrons } = model;
  const bands = mistake.bands ?? model.bands;
  const facts = { title, vectorsA, periodic, divisions, offset, bands, electronsPerBand, fermiEv, electrons };
  const hessian = mistake.hessian ?? model.hessian;
  const writer = createGridWriter(directory, { ...facts, moments: sampleMoments(model), hessian }, mistake.layout);
  for (let flat = 0; flat < points.length; flat++) {
    const from = points[mistake.order?.(flat, divisions) ?? flat]!;
    const point = cut(mistake.point === undefined ? from : mistake.point(copyOf(from), flat), model.bands, bands);
    writer.add(hessian === "array" ? point : { ...point, hessian: undefined });
  }
  const grid = writer.finish();
  if (mistake.manifest === undefined) return grid;
  const path = join(directory, "bandgrid.json");
  const manifest = JSON.parse(readFileSync(path, "utf8"));
  mistake.manifest(manifest);
  writeFileSync(path, JSON.stringify(manifest));
  return openGrid(directory);
}

/** The lowest bands alone. */
function cut(point: PointData, from: number, bands: number): PointData {
  if (from === bands) return point;
  const small = (m: Float64Array): Float64Array => {
    const out = new Float64Array(2 * bands * bands);
    for (let n = 0; n < bands; n++) out.set(m.subarray(2 * n * from, 2 * n * from + 2 * bands), 2 * n * bands);
    return out;
  };
  return {
    energyEv: point.energyEv.slice(0, bands),
    velocity: point.velocity.map(small),
    moments: new Map([...point.moments].map(([name, parts]) => [name, parts.map(small)])),
    ...(point.hessian === undefined ? {} : { hessian: point.hessian.map(small) }),
  };
}

const times = (m: Float64Array, factor: number): Float64Array => m.map((x) => factor * x);
const conjugate = (m: Float64Array): Float64Array => m.map((x, i) => (i % 2 === 1 ? -x : x));

export const scaledVelocity = (factor: number): Mistake => ({
  point: (p) => ({ ...p, velocity: p.velocity.map((m) => times(m, factor)) }),
});
export const scaledEnergy = (factor: number): Mistake => ({
  point: (p) => ({ ...p, energyEv: p.energyEv.map((e) => e * factor) }),
});
export const scaledHessian = (factor: number): Mistake => ({
  point: (p) => ({ ...p, hessian: p.hessian?.map((m) => times(m, factor)) }),
});
export const scaledMoment = (name: string, factor: number): Mistake => ({
  point: (p) => ({
    ...p,
    moments: new Map(
      [...p.moments].map(([key, parts]) => [key, key === name ? parts.map((m) => times(m, factor)) : parts]),
    ),
  }),
});
export const axes = (order: readonly number[], signs: readonly number[] = [1, 1, 1]): Mistake => ({
  point: (p) => ({ ...p, velocity: order.map((from, i) => times(p.velocity[from]!, signs[i]!)) }),
});

/** Bra and ket exchanged in the named arrays. */
export const transposed = (...arrays: string[]): Mistake => ({
  point: (p) => ({
    ...p,
    velocity: arrays.includes("velocity") ? p.velocity.map(conjugate) : p.velocity,
    moments: new Map(
      [...p.moments].map(([name, parts]) => [name, arrays.includes(name) ? parts.map(conjugate) : parts]),
    ),
    hessian: arrays.includes("hessian") ? p.hessian?.map(conjugate) : p.hessian,
  }),
});

/** The derivative with respect to the fractions of b1, b2, b3. */
export function fractions({ vectorsA }: SampleModel): Mistake {
  const b = reciprocalVectors(vectorsA);
  return {
    point: (p) => ({
      ...p,
      velocity: b.map((row) =>
        p.velocity[0]!.map(
          (_, i) => row[0] * p.velocity[0]![i]! + row[1] * p.velocity[1]![i]! + row[2] * p.velocity[2]![i]!,
        ),
      ),
    }),
  };
}

/** Phases of a second diagonalisation, by point and band: a seeded scramble. */
export const foreign = (name: string, bands: number): Mistake => ({
  point: (p, flat) => {
    const phase = (n: number): number => 2 * Math.PI * ((Math.sin(12.9898 * flat + 78.233 * (n + 1)) * 43758.5453) % 1);
    const turned = (m: Float64Array): Float64Array => {
      const out = m.slice();
      for (let n = 0; n < bands; n++)
        for (let l = 0; l < bands; l++) {
          const at = 2 * (n * bands + l);
          const [c, s] = [Math.cos(phase(l) - phase(n)), Math.sin(phase(l) - phase(n))];
          out[at] = m[at]! * c - m[at + 1]! * s;
          out[at + 1] = m[at]! * s + m[at + 1]! * c;
        }
      return out;
    };
    return {
      ...p,
      moments: new Map([...p.moments].map(([key, parts]) => [key, key === name ? parts.map(turned) : parts])),
    };
  },
});
