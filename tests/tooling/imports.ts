// imports.ts: which file imports which, and what in that breaks the house's order or goes in a circle?
import { existsSync, readdirSync, readFileSync } from "node:fs";
import { join, posix } from "node:path";
import ts from "typescript";

/** File (path below src/, forward slashes) -> the files it imports, types included. */
export type ImportGraph = ReadonlyMap<string, readonly string[]>;

/** The folders of the first table of DEVELOPERS.md whose rows begin with | `name/` |, top to bottom. */
export function foldersInOrder(developersPage: string): string[] {
  return [...developersPage.matchAll(/^\|\s*`([a-z-]+)\/`\s*\|/gm)].map((row) => row[1]!);
}

/** Relative specifiers in a source: imports, re-exports, dynamic imports, addresses of workers in new URL("./x.js", ...). */
export function relativeSpecifiers(source: string): string[] {
  const imported = ts.preProcessFile(source, true, true).importedFiles.map((file) => file.fileName);
  const addressed = [...source.matchAll(/new URL\(\s*["'`]([^"'`]+\.js)["'`]/g)].map((match) => match[1]!);
  return [...imported, ...addressed].filter((specifier) => specifier.startsWith("."));
}

/** Reads every .ts file below `root`. Specifiers that name no source file are kept as they resolve, and match nothing. */
export function readImportGraph(root: string): ImportGraph {
  const names = readdirSync(root, { recursive: true, encoding: "utf8" }).map((name) => name.split("\\").join("/"));
  const graph = new Map<string, string[]>();
  for (const name of names.filter((each) => each.endsWith(".ts")).sort()) {
    const targets = relativeSpecifiers(readFileSync(join(root, name), "utf8")).map((specifier) =>
      sourceOf(root, posix.join(posix.dirname(name), specifier)),
    );
    graph.set(name, targets);
  }
  return graph;
}

function sourceOf(root: string, target: string): string {
  const source = target.replace(/\.js$/, ".ts");
  return existsSync(join(root, source)) ? source : target;
}

const folderOf = (file: string): string => (file.includes("/") ? file.slice(0, file.indexOf("/")) : "");

/**
 * Sentences, one per import that runs against `order` or leaves src/. Files directly in src/ re-export and may import
 * from every folder but the last; no folder may import them.
 */
export function againstOrder(graph: ImportGraph, order: readonly string[]): string[] {
  const rank = (file: string): number => {
    const folder = folderOf(file);
    return folder === "" ? order.length - 1.5 : order.indexOf(folder);
  };
  const complaints: string[] = [];
  for (const [file, targets] of graph) {
    if (rank(file) < 0) {
      complaints.push(`${file}: its folder is not in the table`);
      continue;
    }
    for (const target of targets) {
      if (rank(target) < 0) complaints.push(`${file} imports ${target}, which is in no folder of the table`);
      else if (rank(target) > rank(file)) complaints.push(`${file} imports ${target}, against the order`);
    }
  }
  return complaints;
}

/** The circles among files, each as "a -> b -> a"; found by walking depth first, so one per closing import. */
export function circles(graph: ImportGraph): string[] {
  const finished = new Set<string>();
  const trail: string[] = [];
  const found: string[] = [];
  const visit = (file: string): void => {
    const seenAt = trail.indexOf(file);
    if (seenAt >= 0) found.push([...trail.slice(seenAt), file].join(" -> "));
    if (seenAt >= 0 || finished.has(file)) return;
    trail.push(file);
    for (const target of graph.get(file) ?? []) visit(target);
    trail.pop();
    finished.add(file);
  };
  for (const file of graph.keys()) visit(file);
  return found;
}
