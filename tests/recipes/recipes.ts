// recipes.ts: runs the recipes of data/recipes into temporary directories, where their tools exist.
import { execFileSync } from "node:child_process";
import { mkdirSync, mkdtempSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

/** Top of the project. */
export const root = fileURLToPath(new URL("../..", import.meta.url));
/** On the build server a missing tool is a failure, elsewhere a named skip. */
export const mustRun = process.env.CI === "true";

/** True when the command starts and ends well. */
function works(command: string, ...args: string[]): boolean {
  try {
    execFileSync(command, args, { stdio: "ignore" });
    return true;
  } catch {
    return false;
  }
}

/** A Python with NumPy, else undefined. */
export const pythonWithNumpy = ["python3", "/usr/bin/python3"].find((python) => works(python, "-c", "import numpy"));

export interface Recipe {
  readonly file: string;
  /** The tool it needs, for the name of a skipped test. */
  readonly tool: string;
  readonly present: boolean;
  /** Writes the grid into `directory`, which exists. */
  readonly write: (directory: string) => void;
}

const recipePath = (file: string): string => join(root, "data/recipes", file);

export const recipes: readonly Recipe[] = [
  {
    file: "write_plain.py",
    tool: "python3",
    present: works("python3", "--version"),
    write: (directory) => execFileSync("python3", [recipePath("write_plain.py"), directory]),
  },
  {
    file: "write_numpy.py",
    tool: "python3 with numpy",
    present: pythonWithNumpy !== undefined,
    write: (directory) => execFileSync(pythonWithNumpy ?? "python3", [recipePath("write_numpy.py"), directory]),
  },
  {
    file: "write_stream.f90",
    tool: "gfortran",
    present: works("gfortran", "--version"),
    write: (directory) => {
      const program = join(mkdtempSync(join(tmpdir(), "recipe-")), "write_stream");
      execFileSync("gfortran", ["-std=f2008", "-Wall", "-Werror", recipePath("write_stream.f90"), "-o", program]);
      execFileSync(program, [directory]);
    },
  },
];

/** Runs a recipe; returns the directory of its grid. */
export function runRecipe(recipe: Recipe): string {
  const directory = join(mkdtempSync(join(tmpdir(), "recipe-")), "grid");
  mkdirSync(directory);
  recipe.write(directory);
  return directory;
}
