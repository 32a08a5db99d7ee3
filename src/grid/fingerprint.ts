// fingerprint.ts: is this the same data? A quick hash over manifest and samples of the files, and full digests on demand.
import { createHash } from "node:crypto";
import { closeSync, openSync, readSync } from "node:fs";
import { dataFault } from "../base/errors.js";
import type { ArrayPlan, FilePlan } from "./arrays.js";
import { quoted, reasonOf } from "./jsontext.js";

const samples = 16;
const sampleBytes = 4096;

/**
 * SHA-256 (hex) of the manifest's bytes and, per array file, its name, its length and 16 evenly spaced pieces of 4 kB
 * (the first and the last included; a file of up to 64 kB as a whole).
 */
export function fingerprint(manifest: Uint8Array, arrays: readonly ArrayPlan[]): string {
  const hash = createHash("sha256").update(manifest);
  const buffer = Buffer.alloc(samples * sampleBytes);
  for (const array of arrays) {
    for (const file of array.files) {
      hash.update(JSON.stringify([array.name, file.name, file.bytes]));
      withFile(array.name, file, (handle) => {
        if (file.bytes <= buffer.length) {
          hash.update(buffer.subarray(0, readSync(handle, buffer, 0, file.bytes, 0)));
          return;
        }
        for (let sample = 0; sample < samples; sample++) {
          const position = Math.floor(((file.bytes - sampleBytes) / (samples - 1)) * sample);
          hash.update(buffer.subarray(0, readSync(handle, buffer, 0, sampleBytes, position)));
        }
      });
    }
  }
  return hash.digest("hex");
}

/** One SHA-256 (hex) for several. */
export const combined = (digests: readonly string[]): string =>
  createHash("sha256").update(digests.join()).digest("hex");

/** SHA-256 (hex, lower case) of a whole file. Reads it in pieces of 4 MB. */
export function fileDigest(array: string, file: Pick<FilePlan, "path" | "name">): string {
  const hash = createHash("sha256");
  const buffer = Buffer.alloc(4 * 1024 * 1024);
  withFile(array, file, (handle) => {
    for (;;) {
      const length = readSync(handle, buffer, 0, buffer.length, null);
      if (length === 0) return;
      hash.update(buffer.subarray(0, length));
    }
  });
  return hash.digest("hex");
}

interface Digested {
  readonly arrays: readonly ArrayPlan[];
  readonly pointArrays?: readonly ArrayPlan[] | undefined;
}

/**
 * Reads every file that has a digest in the manifest and compares; returns how many were checked.
 * Throws a data Fault that names the first file that differs.
 */
export function verifyDigests({ arrays, pointArrays = [] }: Digested): number {
  let checked = 0;
  for (const array of [...arrays, ...pointArrays]) {
    array.files.forEach((file, index) => {
      const expected = array.digests?.[index];
      if (expected === undefined) return;
      const found = fileDigest(array.name, file);
      if (found !== expected) {
        throw dataFault(
          `arrays.${array.name}: file ${quoted(file.name)} has SHA-256 ${found.slice(0, 16)}...; the manifest says ${expected.slice(0, 16)}...`,
          "Copy the file again, or correct the manifest if the file was changed on purpose.",
        );
      }
      checked++;
    });
  }
  return checked;
}

function withFile(array: string, file: Pick<FilePlan, "path" | "name">, use: (handle: number) => void): void {
  let handle: number;
  try {
    handle = openSync(file.path, "r");
  } catch (error) {
    throw dataFault(
      `arrays.${array}: file ${quoted(file.name)} cannot be read: ${reasonOf(error)}`,
      "Check its permissions.",
      error,
    );
  }
  try {
    use(handle);
  } finally {
    closeSync(handle);
  }
}
