// requestfile.ts: how does a request.json become cells to compute, and does it belong to this grid?
import { readFileSync } from "node:fs";
import { usageFault } from "../base/errors.js";
import { openGrid } from "../grid/open.js";
import { type RequestResult, requestResult } from "../studies/request-result.js";

const cure = "Give the request.json that tidegauge request wrote with --out.";

/** The request in a file. Throws a usage Fault for what is none. */
export function readRequest(path: string): RequestResult {
  let content: unknown;
  try {
    content = JSON.parse(readFileSync(path, "utf8"));
  } catch (error) {
    throw usageFault(
      `--request ${path} cannot be read as JSON: ${error instanceof Error ? error.message : String(error)}`,
      cure,
    );
  }
  const checked = requestResult.safeParse(content);
  if (checked.success) return checked.data;
  const [issue] = checked.error.issues;
  throw usageFault(`--request ${path} is no request: ${issue.path.join(".")}: ${issue.message}`, cure);
}

/** Throws a usage Fault where the request was made for another mesh than that of the grid in `directory`. */
export function checkRequested({ grid }: RequestResult, directory: string): void {
  const { divisions, offset, bands } = openGrid(directory).facts;
  const mesh = (n: readonly number[], x: readonly number[]): string => `${n.join(" x ")} from ${x.join(", ")}`;
  if (mesh(grid.divisions, grid.offset) === mesh(divisions, offset) && grid.bands === bands) return;
  throw usageFault(
    `the request is for ${grid.bands} bands on a mesh of ${mesh(grid.divisions, grid.offset)}; ${directory} has ${bands} on ${mesh(divisions, offset)}`,
    "Let --out lie inside the directory of the grid for which the request was made.",
  );
}
