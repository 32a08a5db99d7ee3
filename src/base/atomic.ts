// atomic.ts: writes a small file so that nobody ever sees half of it.
import writeFileAtomic from "write-file-atomic";

/** Writes `content` beside `path`, flushes it to disk and renames it onto `path`. Throws what the file system throws. */
export function writeAtomically(path: string, content: string | Buffer): void {
  writeFileAtomic.sync(path, content);
}
