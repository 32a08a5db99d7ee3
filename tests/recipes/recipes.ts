// recipes.ts: runs the recipes of data/recipes into temporary directories, where their tools exist.
import { execFileSync, spawnSync } from "node:child_process";
import { mkdirSync, mkdtempSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { numpyPython } from "../tooling/python.js";

/** Top of the project. */
export const root = fileURLToPath(new URL("../..", import.meta.url));
export interface Recipe {
  readonly file: string;
  /** What it needs, in words. */
  readonly needs: string;
  /** The command that it needs; undefined where it is missing. */
  readonly tool: string | undefined;
  /** Writes the grid into `directory`, which exists. */
  readonly write: (tool: string, directory: string) => void;
}

const recipePath = (file: string): string => join(root, "data/recipes", file);

const runPython = (file: string) => (python: string, directory: string) => {
  execFileSync(python, [recipePath(file), directory]);
};

const starts = (command: string): boolean => spawnSync(command, ["--version"], { stdio: "ignore" }).status === 0;

export const plain: Recipe = {
  file: "write_plain.py",
  needs: "Python 3",
  tool: ["python3", "/usr/bin/python3"].find(starts),
  write: runPython("write_plain.py"),
};

export const numpy: Recipe = {
  file: "write_numpy.py",
  needs: "a Python with NumPy",
  tool: numpyPython(),
  write: runPython("write_numpy.py"),
};

export const stream: Recipe = {
  file: "write_stream.f90",
  needs: "gfortran",
  tool: ["gfortran"].find(starts),
  write: (compiler, directory) => {
    const program = join(mkdtempSync(join(tmpdir(), "recipe-")), "write_stream");
    execFileSync(compiler, ["-std=f2008", "-Wall", "-Werror", recipePath("write_stream.f90"), "-o", program]);
    execFileSync(program, [directory]);
  },
};

export const recipes: readonly Recipe[] = [plain, numpy, stream];

/** Runs a recipe whose tool exists; returns the directory of its grid. */
export function runRecipe(recipe: Recipe): string {
  if (recipe.tool === undefined) throw new Error(`${recipe.file} needs ${recipe.needs}`);
  const directory = join(mkdtempSync(join(tmpdir(), "recipe-")), "grid");
  mkdirSync(directory);
  recipe.write(recipe.tool, directory);
  return directory;
}
