// handmade.ts: a band grid whose bytes are laid down here, without the writer: 2 x 2 x 1 points, 2 bands, one moment.
import { mkdirSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { scratchDirectory } from "./make.js";

/** A manifest as a plain value that tests may spoil. */
// biome-ignore lint/suspicious/noExplicitAny: tests put wrong things in it on purpose
export type Loose = any;

export const points = 4;
export const bands = 2;

/** A manifest that fits `files`. */
export function manifest(): Loose {
  const matrix = (files: string, unit: string) => ({
    files,
    type: "complex128",
    axes: ["k", "direction", "bra", "ket"],
    unit,
  });
  return {
    format: "bandgrid/1",
    title: "by hand",
    lattice: {
      unit: "angstrom",
      vectors: [
        [2, 0, 0],
        [0, 2, 0],
        [0, 0, 2],
      ],
      periodic: 3,
    },
    mesh: { divisions: [2, 2, 1], offset: [0, 0, 0] },
    bands,
    electronsPerBand: 1,
    level: { unit: "eV", fermi: 0.5, electrons: 1 },
    arrays: {
      energy: { files: "energy.f64", type: "float64", axes: ["k", "band"], unit: "eV" },
      velocity: matrix("velocity.c128", "eV*angstrom"),
      moments: { spin: matrix("spin.c128", "hbar") },
      hessian: "free-electron",
    },
  };
}

/** Energy of a band at a point, eV. */
export const energyAt = (point: number, band: number): number => point + 10.1 * band - 0.3;

/** Velocity element, eV angstrom: Hermitian, different everywhere. */
export function velocityAt(point: number, axis: number, bra: number, ket: number): [number, number] {
  const re = 1000 * (point + 1) + 100 * axis + 10 * Math.min(bra, ket) + Math.max(bra, ket);
  return [re, (bra - ket) * (1 + axis + 10 * point)];
}

/** Numbers of the files: float64. */
export function contents(): Record<string, Float64Array> {
  const energy = new Float64Array(points * bands);
  const velocity: number[] = [];
  for (let point = 0; point < points; point++) {
    for (let band = 0; band < bands; band++) energy[point * bands + band] = energyAt(point, band);
    for (let axis = 0; axis < 3; axis++) {
      for (let bra = 0; bra < bands; bra++) {
        for (let ket = 0; ket < bands; ket++) velocity.push(...velocityAt(point, axis, bra, ket));
      }
    }
  }
  const matrices = Float64Array.from(velocity);
  return { "energy.f64": energy, "velocity.c128": matrices, "spin.c128": matrices.map((value) => value / 8000) };
}

/** The bytes of numbers, in the machine's order. */
export function bytesOf(numbers: Float64Array | Float32Array): Buffer {
  return Buffer.from(numbers.buffer, numbers.byteOffset, numbers.byteLength);
}

/** What a test may spoil before the grid is laid down. */
export interface Draft {
  manifest: Loose;
  /** Text of the manifest in place of its JSON. */
  text: string | Buffer | undefined;
  files: Record<string, Buffer>;
  directory: string;
}

/** Lays a grid down after `spoil` had its way; returns the directory. */
export function layDown(spoil: (draft: Draft) => void = () => {}): string {
  const directory = join(scratchDirectory(), "grid");
  mkdirSync(directory);
  const files = Object.fromEntries(Object.entries(contents()).map(([name, numbers]) => [name, bytesOf(numbers)]));
  const draft: Draft = { manifest: manifest(), text: undefined, files, directory };
  spoil(draft);
  for (const [name, bytes] of Object.entries(draft.files)) writeFileSync(join(directory, name), bytes);
  writeFileSync(join(directory, "bandgrid.json"), draft.text ?? JSON.stringify(draft.manifest));
  return directory;
}
