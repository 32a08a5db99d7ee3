// house.test.ts: does the tree keep the rules of the house that a reader relies on?
import { execFileSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { basename, join } from "node:path";
import { describe, expect, it } from "vitest";
import { repository } from "./tooling/build-once.js";
import { againstOrder, circles, foldersInOrder, readImportGraph, relativeSpecifiers } from "./tooling/imports.js";

const read = (file: string): string => readFileSync(join(repository, file), "utf8");
const lines = (text: string): string[] => text.split("\n").filter((line) => line !== "");
const tracked = lines(execFileSync("git", ["ls-files"], { cwd: repository, encoding: "utf8" }));
const git = (...args: string[]): string[] => {
  try {
    return lines(execFileSync("git", args, { cwd: repository, encoding: "utf8" }));
  } catch {
    return []; // git grep exits with 1 when it finds nothing
  }
};
const graph = readImportGraph(join(repository, "src"));
const sources = [...graph.keys()].map((name) => `src/${name}`);

describe("the rules find what they are for", () => {
  const order = ["base", "grid", "cli"];

  it("reads the folders from the rows of the table, in order", () => {
    const page = "| folder | for |\n| --- | --- |\n| `base/` | x |\n| `grid/`   | y `z/` |\n\n`tests/` mirrors\n";
    expect(foldersInOrder(page)).toEqual(["base", "grid"]);
  });

  it("sees every way in which one file can name another", () => {
    const source = `import type { A } from "./a.js";\nexport * from "../b.js";\nconst c = await import("./c.js");
      new Worker(new URL("./d.js", import.meta.url)); new URL("../data/e.json", import.meta.url); import fs from "node:fs"; // import "./comment.js"`;
    expect(relativeSpecifiers(source).sort()).toEqual(["../b.js", "./a.js", "./c.js", "./d.js"]);
  });

  it("complains of an import against the order, of an unknown folder and of src/index.ts used from inside", () => {
    expect(againstOrder(new Map([["grid/a.ts", ["base/b.ts", "grid/c.ts"]]]), order)).toEqual([]);
    expect(againstOrder(new Map([["base/b.ts", ["grid/a.ts"]]]), order)).toHaveLength(1);
    expect(againstOrder(new Map([["attic/b.ts", ["base/a.ts"]]]), order)).toHaveLength(1);
    expect(againstOrder(new Map([["grid/b.ts", ["../tests/a.ts"]]]), order)).toHaveLength(1);
    expect(againstOrder(new Map([["grid/b.ts", ["index.ts"]]]), order)).toHaveLength(1);
    expect(againstOrder(new Map([["index.ts", ["grid/b.ts"]]]), order)).toEqual([]);
    expect(againstOrder(new Map([["index.ts", ["cli/b.ts"]]]), order)).toHaveLength(1);
  });

  it("finds a circle of three files and none in a diamond", () => {
    const ring = new Map([
      ["a", ["b"]],
      ["b", ["c"]],
      ["c", ["a"]],
    ]);
    expect(circles(ring)).toEqual(["a -> b -> c -> a"]);
    const diamond = new Map([
      ["a", ["b", "c"]],
      ["b", ["d"]],
      ["c", ["d"]],
    ]);
    expect(circles(diamond)).toEqual([]);
  });
});

describe("the tree", () => {
  it("was seen at all", () => {
    expect(sources.length).toBeGreaterThan(20);
    expect(tracked.length).toBeGreaterThan(10);
    expect([...graph.values()].flat().length).toBeGreaterThan(20);
  });

  it("imports only upwards in the table of DEVELOPERS.md", () => {
    const order = foldersInOrder(read("DEVELOPERS.md"));
    expect(order[0]).toBe("base");
    expect(order.at(-1)).toBe("cli");
    expect(againstOrder(graph, order)).toEqual([]);
  });

  it("has no folder in the table without a file in src/", () => {
    const inUse = new Set([...graph.keys()].map((file) => file.split("/")[0]));
    expect(foldersInOrder(read("DEVELOPERS.md")).filter((folder) => !inUse.has(folder))).toEqual([]);
  });

  it("has no circle between files", () => {
    expect(circles(graph)).toEqual([]);
  });

  it("keeps the top level to the agreed entries", () => {
    const agreed = ["src", "bin", "data", "tests", "README.md", "DEVELOPERS.md", "LICENSE"];
    agreed.push("package.json", "package-lock.json", "tsconfig.json");
    const entries = [...new Set(tracked.map((file) => file.split("/")[0]!))];
    expect(entries.filter((entry) => !entry.startsWith(".") && !agreed.includes(entry))).toEqual([]);
  });

  it("has no source over 300 lines", () => {
    const long = sources.filter((file) => read(file).trimEnd().split("\n").length > 300);
    expect(long).toEqual([]);
  });

  it("says in the first line of each file which question it answers", () => {
    const files = [...sources, ...tracked.filter((file) => /^tests\/.*\.(ts|mjs)$/.test(file))];
    const silent = files.filter((file) => !read(file).startsWith(`// ${basename(file)}: `));
    expect(silent).toEqual([]);
  });

  it("has no file called util, helper, common or misc", () => {
    const vague = /(^|\/)(utils?|helpers?|common|misc)(\.|\/)/;
    expect(tracked.filter((file) => vague.test(file))).toEqual([]);
  });

  it("names no package registry and no path of one machine", () => {
    const hosts = ["registry\\.npm", "registry\\.yarn", "deb\\.debian", "security\\.debian", "pypi\\.org"];
    const homes = ["home", "Users", "work", "farm"].map((name) => `(^|[^A-Za-z0-9.])/(${name})/`);
    const self = ":!tests/house.test.ts";
    expect(git("grep", "-nIE", hosts.join("|"), "--", ".", self)).toEqual([]);
    expect(git("grep", "-nIE", homes.join("|"), "--", ".", self)).toEqual([]);
    expect(git("grep", "-c", "vitest", "--", "package.json")).toHaveLength(1);
  });
});
