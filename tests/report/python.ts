// python.ts: is there a Python that can act as an independent reader?
import { spawnSync } from "node:child_process";

/** The first of the usual interpreters that can import `module`; undefined when none can. */
export function pythonWith(module: string): string | undefined {
  return ["python3", "/usr/bin/python3", "python"].find(
    (name) => spawnSync(name, ["-c", `import ${module}`]).status === 0,
  );
}

/** Runs a script on `input` and returns what it prints; throws with the script's complaint when it fails. */
export function runPython(python: string, script: string, input: string): string {
  const done = spawnSync(python, ["-c", script], { input, encoding: "utf8" });
  if (done.status !== 0) throw new Error(done.stderr);
  return done.stdout;
}
