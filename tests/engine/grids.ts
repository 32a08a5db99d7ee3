// grids.ts: test material: small band grids, random or of sample models, written after a change of their k points.
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll } from "vitest";
import type { MomentFacts, Triple } from "../../src/grid/grid.js";
import { createGridWriter, type GridDescription, type PointData } from "../../src/grid/writer.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { createSampler } from "../../src/samples/eigenbasis.js";
import { sampleMoments } from "../../src/samples/write.js";
import { reciprocalVectors } from "../../src/zone/lattice.js";
import { cartesianK, fractionalK } from "../../src/zone/mesh.js";
import { createRandom, randomHermitian, randomUnitary, rotate } from "../kernel/hermitian.js";

const made: string[] = [];

afterAll(() => {
  for (const path of made) rmSync(path, { recursive: true, force: true });
});

/** A band grid before it is on disk. */
export interface Draft {
  readonly description: GridDescription;
  readonly points: readonly PointData[];
}

/** Writes a draft into a directory of its own, which is removed after the file's tests. */
export function written({ description, points }: Draft): string {
  const path = mkdtempSync(join(tmpdir(), "engine-test-"));
  made.push(path);
  const directory = join(path, "grid");
  const writer = createGridWriter(directory, description);
  for (const point of points) writer.add(point);
  writer.finish();
  return directory;
}

export const spin: MomentFacts = { name: "spin", directions: 3, kind: "axial", underTimeReversal: "odd", unit: "hbar" };
export const valley: MomentFacts = {
  name: "valley",
  directions: 1,
  kind: "scalar",
  underTimeReversal: "odd",
  unit: "1",
};

const crystalVectors: GridDescription["vectorsA"] = [
  [3, 0.2, -0.1],
  [0.5, 2.8, 0.3],
  [-0.4, 0.1, 3.3],
];
const layerVectors: GridDescription["vectorsA"] = [
  [3, 0.2, 0],
  [0.5, 2.8, 0],
  [0, 0, 7],
];

export interface RandomChoice {
  readonly divisions: Triple;
  readonly bands: number;
  readonly seed: number;
  readonly periodic?: 2 | 3;
  readonly electronsPerBand?: 1 | 2;
  /** Bands come in sets of this many of exactly equal energy. */
  readonly together?: number;
}

/** Random Hermitian matrices at every k point, energies of -2 to 2 eV, slopes of up to 1 eV angstrom; fermi at 0.1 eV. */
export function randomDraft(choice: RandomChoice): Draft {
  const { divisions, bands, seed, periodic = 3, electronsPerBand = 1, together = 1 } = choice;
  const random = createRandom(seed);
  const several = (count: number): Float64Array[] =>
    Array.from({ length: count }, () => randomHermitian(bands, random));
  const description: GridDescription = {
    title: `random ${seed}`,
    vectorsA: periodic === 3 ? crystalVectors : layerVectors,
    periodic,
    divisions,
    offset: [0, 0, 0],
    bands,
    electronsPerBand,
    fermiEv: 0.1,
    moments: [spin, valley],
    hessian: "none",
  };
  const points = Array.from({ length: divisions[0] * divisions[1] * divisions[2] }, (): PointData => {
    const sets = Array.from({ length: Math.ceil(bands / together) }, () => 2 * random()).sort((a, b) => a - b);
    return {
      energyEv: Float64Array.from({ length: bands }, (_, band) => sets[Math.floor(band / together)]),
      velocity: several(3),
      moments: new Map([
        ["spin", several(3)],
        ["valley", several(1)],
      ]),
    };
  });
  return { description, points };
}

/** A sample model of the catalogue on a mesh. */
export function sampleDraft(
  name: string,
  parameters: Record<string, string>,
  divisions: Triple,
  offset: Triple = [0, 0, 0],
): Draft {
  const model = buildSample(name, parameters);
  const { vectorsA, periodic, bands, electronsPerBand, fermiEv, electrons, title } = model;
  const facts = { vectorsA, periodic, divisions, offset };
  const sample = createSampler(model, "none");
  const reciprocal = reciprocalVectors(vectorsA);
  const points = Array.from({ length: divisions[0] * divisions[1] * divisions[2] }, (_, flat) =>
    mapPoint(sample(cartesianK(fractionalK(flat, facts), reciprocal)), (matrix) => matrix.slice()),
  );
  const moments = sampleMoments(model);
  const description = {
    ...facts,
    title,
    bands,
    electronsPerBand,
    fermiEv,
    electrons,
    moments,
    hessian: "none" as const,
  };
  return { description, points };
}

/** A copy of a k point with every matrix changed. */
export function mapPoint(point: PointData, change: (matrix: Float64Array) => Float64Array): PointData {
  return {
    energyEv: point.energyEv.slice(),
    velocity: point.velocity.map(change),
    moments: new Map([...point.moments].map(([name, parts]) => [name, parts.map(change)])),
  };
}

/** Bands whose energies differ from their neighbour's by less than 1e-9 eV, as runs [first, count]. */
function degenerateSets(energyEv: Float64Array): [number, number][] {
  const sets: [number, number][] = [];
  for (const [band, energy] of energyEv.entries()) {
    const last = sets[sets.length - 1];
    if (band > 0 && energy - energyEv[band - 1] < 1e-9) last[1]++;
    else sets.push([band, 1]);
  }
  return sets;
}

/** The same crystal in another basis: a random unitary matrix within every degenerate set, a random phase for single bands. */
export function regauged({ description, points }: Draft, seed: number): Draft {
  const random = createRandom(seed);
  const { bands } = description;
  const changed = points.map((point) => {
    const u = new Float64Array(2 * bands * bands);
    for (const [first, count] of degenerateSets(point.energyEv)) {
      const block = randomUnitary(count, random);
      for (let i = 0; i < count; i++)
        for (let j = 0; j < count; j++)
          for (let part = 0; part < 2; part++)
            u[2 * ((first + i) * bands + first + j) + part] = block[2 * (i * count + j) + part];
    }
    return mapPoint(point, (matrix) => rotate(bands, matrix, u));
  });
  return { description, points: changed };
}

/** The same k points counted from another origin of the mesh. */
export function shifted({ description, points }: Draft, by: Triple): Draft {
  const [n1, n2, n3] = description.divisions;
  const at = (flat: number): number => {
    const [i1, i2, i3] = [Math.floor(flat / (n2 * n3)), Math.floor(flat / n3) % n2, flat % n3];
    return (((i1 + by[0]) % n1) * n2 + ((i2 + by[1]) % n2)) * n3 + ((i3 + by[2]) % n3);
  };
  return { description, points: points.map((_, flat) => points[at(flat)]) };
}
