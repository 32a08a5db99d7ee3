// python.ts: which Python can run the NumPy oracles, and what becomes of a suite whose outside tool is missing?
import { spawnSync } from "node:child_process";
import { describe, it } from "vitest";

let found: { readonly path: string | undefined } | undefined;

function hasNumpy(interpreter: string): boolean {
  return spawnSync(interpreter, ["-c", "import numpy"], { stdio: "ignore" }).status === 0;
}

/** The first of /usr/bin/python3 and python3 that can import NumPy; undefined when neither can. Looked up once. */
export function numpyPython(): string | undefined {
  found ??= { path: ["/usr/bin/python3", "python3"].find(hasNumpy) };
  return found.path;
}

/**
 * Declares a suite that needs an outside tool: `body` gets the tool. Where it is missing the suite is skipped under a
 * name that says why; with CI=true, where everything must run, its absence is a failure.
 */
export function requireOrSkip(
  what: string,
  tool: string | undefined,
  name: string,
  body: (tool: string) => void,
): void {
  if (tool !== undefined) {
    describe(name, () => body(tool));
  } else if (process.env.CI === "true") {
    it(`${name}: needs ${what}`, () => {
      throw new Error(`${what} is missing, and with CI=true no suite may be left out`);
    });
  } else {
    describe.skipIf(true)(name, () => {
      it(`left out: ${what} is missing`, () => {});
    });
  }
}

/** A suite that needs a Python with NumPy; see requireOrSkip. */
export function describeWithNumpy(name: string, body: (python: string) => void): void {
  requireOrSkip("a Python with NumPy", numpyPython(), name, body);
}
