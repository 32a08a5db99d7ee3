// hostile.test.ts: whatever stands in a manifest, opening and reading either works or gives a data Fault of one line.
import fc from "fast-check";
import { expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import { openGrid, openReader, pointsPerBlock, wantAll } from "../../src/grid/reader.js";
import { type Draft, layDown, manifest } from "./handmade.js";

/** Every path into a manifest, as lists of keys. */
function pathsOf(value: unknown, prefix: string[] = []): string[][] {
  if (typeof value !== "object" || value === null) return [];
  return Object.entries(value).flatMap(([key, inner]) => [[...prefix, key], ...pathsOf(inner, [...prefix, key])]);
}

function expectReadOrFault(spoil: (draft: Draft) => void): void {
  const directory = layDown(spoil);
  try {
    const grid = openGrid(directory);
    const want = wantAll(grid);
    openReader(grid, want).read(0, pointsPerBlock(grid, want));
  } catch (error) {
    if (!isFault(error)) throw error;
    expect(error.kind).toBe("data");
    expect(`${error.message} ${error.cure}`).not.toMatch(/[\n\r\u001b]/);
  }
}

const anything = fc.oneof(
  fc.json({ maxDepth: 3 }).map((text): unknown => JSON.parse(text)),
  fc.integer({ min: -3, max: 5 }),
  fc.constantFrom(
    2 ** 53,
    2 ** 31,
    1e300,
    -0,
    0.5,
    "",
    "k",
    "energy.f64",
    "*",
    "**/*",
    "[",
    "{a,b}",
    "!*",
    "\\",
    "\u0000",
  ),
  fc.string({ unit: "binary" }),
);

it("for any value at any place", () => {
  fc.assert(
    fc.property(fc.constantFrom(...pathsOf(manifest())), anything, (path, value) => {
      expectReadOrFault((draft) => {
        const last = path[path.length - 1];
        const parent = path.slice(0, -1).reduce((here, step) => here[step], draft.manifest);
        parent[last] = value;
      });
    }),
    { numRuns: 400 },
  );
}, 60_000);

it("for any extra field at any place", () => {
  const objects = [[], ...pathsOf(manifest())];
  fc.assert(
    fc.property(fc.constantFrom(...objects), fc.string({ unit: "binary" }), anything, (path, key, value) => {
      expectReadOrFault((draft) => {
        const place = path.reduce((here, step) => here[step], draft.manifest);
        if (typeof place === "object")
          Object.defineProperty(place, key, { value, enumerable: true, configurable: true });
      });
    }),
    { numRuns: 200 },
  );
}, 60_000);

it("for a manifest with any bytes changed", () => {
  const whole = Buffer.from(JSON.stringify(manifest()));
  const change = fc.tuple(fc.nat(whole.length - 1), fc.nat(255));
  fc.assert(
    fc.property(fc.array(change, { minLength: 1, maxLength: 4 }), (changes) => {
      expectReadOrFault((draft) => {
        const bytes = Buffer.from(whole);
        for (const [place, byte] of changes) bytes[place] = byte;
        draft.text = bytes;
      });
    }),
    { numRuns: 200 },
  );
}, 60_000);
