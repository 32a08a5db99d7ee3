// handles.ts: reads exact runs of bytes from many files while keeping few of them open.
import { closeSync, openSync, readSync } from "node:fs";
import { dataFault } from "../base/errors.js";
import type { FilePlan } from "./arrays.js";
import { quoted, reasonOf } from "./jsontext.js";

/** Open files of one reader. */
export interface Handles {
  /** Fills `into` at [start, start + length) from `position` of the file; throws a data Fault on error or early end. */
  read(array: string, file: FilePlan, position: number, into: Uint8Array, start: number, length: number): void;
  close(): void;
}

const mostOpen = 16;
// One read call never returns more than 2^31 - 4096 bytes.
const longestRead = 1 << 30;

/** No file open yet; the least recently opened is closed when there are more than 16. */
export function createHandles(): Handles {
  const open = new Map<string, number>();
  const handleOf = (file: FilePlan): number => {
    const known = open.get(file.path);
    if (known !== undefined) return known;
    if (open.size >= mostOpen) {
      const [path, handle] = open.entries().next().value as [string, number];
      open.delete(path);
      closeSync(handle);
    }
    const handle = openSync(file.path, "r");
    open.set(file.path, handle);
    return handle;
  };
  return {
    read(array, file, position, into, start, length) {
      let done = 0;
      try {
        done = readFully(handleOf(file), position, into, start, length);
      } catch (error) {
        throw dataFault(
          `arrays.${array}: file ${quoted(file.name)} cannot be read: ${reasonOf(error)}`,
          "Check the disk and the file's permissions.",
          error,
        );
      }
      if (done < length) {
        throw dataFault(
          `arrays.${array}: file ${quoted(file.name)} ends at byte ${position + done}; it had ${file.bytes} bytes when the grid was opened`,
          "Start again when nothing writes to the grid any more.",
        );
      }
    },
    close() {
      for (const handle of open.values()) closeSync(handle);
      open.clear();
    },
  };
}

/** Reads until `length` bytes are there or the file ends; returns how many there are. */
function readFully(handle: number, position: number, into: Uint8Array, start: number, length: number): number {
  let done = 0;
  while (done < length) {
    const got = readSync(handle, into, start + done, Math.min(length - done, longestRead), position + done);
    if (got === 0) break;
    done += got;
  }
  return done;
}
