// grids.ts: which directories do the GRID arguments of a command mean? Names as they are, patterns in natural order.
import { existsSync } from "node:fs";
import fastGlob from "fast-glob";
import { usageFault } from "../base/errors.js";
import { naturalOrder } from "../grid/files.js";

/**
 * Every directory that the arguments name, each once, in the order of the arguments; what a pattern matches comes in natural
 * order (2 before 10). A name that exists is never read as a pattern. Throws a usage Fault for a pattern without a match.
 */
export function namedGrids(names: readonly string[]): string[] {
  return [...new Set(names.flatMap(matches))];
}

function matches(name: string): string[] {
  if (existsSync(name) || !fastGlob.isDynamicPattern(name)) return [name];
  const found = fastGlob.sync(name, { onlyDirectories: true, followSymbolicLinks: true, deep: 8 });
  if (found.length > 0) return found.sort(naturalOrder);
  throw usageFault(
    `no directory matches ${name}`,
    "name directories that hold a bandgrid.json, or a pattern that matches some",
  );
}
