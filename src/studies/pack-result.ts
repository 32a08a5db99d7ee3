// pack-result.ts: the result of packing, as --json prints it and the text report reads it.
import type { InspectedGrid } from "./inspect-result.js";

/** How an array lies on disk. */
export interface StoredArray {
  type: string;
  axes: string[];
  byteOrder: "little" | "big";
  files: number;
  bytes: number;
}

export interface PackResult {
  format: "tidegauge.pack/1";
  version: string;
  job: Record<string, unknown>;
  /** The new grid, as it was named. */
  directory: string;
  title: string;
  sha256: string;
  divisions: number[];
  offset: number[];
  points: number;
  bands: number;
  bytes: number;
  /** What was packed: a grid or a description, as it was named; `points` are the stored ones. */
  source: { name: string; kind: "grid" | "facts"; sha256: string; bytes: number; points: number };
  /** What a description owes to file headers and defaults. */
  inferred: string[];
  arrays: { name: string; was: StoredArray; is: StoredArray }[];
  patches: string[];
  notes: string[];
  /** What `inspect` says of the result, where it was asked for. */
  check: InspectedGrid | null;
}
