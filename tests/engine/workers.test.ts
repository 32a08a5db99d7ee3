// workers.test.ts: are the bytes of a result the same for one worker and several, and is what a worker throws still a Fault?
import { writeFileSync } from "node:fs";
import { join } from "node:path";
import { beforeAll, describe, expect, it } from "vitest";
import { isFault } from "../../src/base/errors.js";
import type { CurvesResult } from "../../src/curves/result.js";
import { type SweepOptions, sweep, sweepOptions } from "../../src/studies/sweep.js";
import { buildOnce } from "../tooling/build-once.js";
import { randomDraft, written } from "./grids.js";

/** Threads run the built program: Node 20 starts none from sources. */
let built: typeof sweep;

beforeAll(async () => {
  buildOnce();
  const path = new URL("../../dist/studies/sweep.js", import.meta.url).href;
  built = ((await import(path)) as { sweep: typeof sweep }).sweep;
}, 240_000);

const options = (method: "points" | "cells"): SweepOptions =>
  sweepOptions.parse({ response: ["charge:xy", "spin:hall", "valley:hall"], points: 41, method });

const bytes = (result: CurvesResult): string => JSON.stringify(result);

describe("the same job gives the same bytes", () => {
  for (const method of ["points", "cells"] as const)
    it(`${method}: with 1, 2 and 5 workers, and from the sources`, async () => {
      const directory = written(randomDraft({ divisions: [8, 8, 6], bands: 5, seed: 21 }));
      const one = bytes(await built(directory, options(method), { workers: 1 }));
      for (const workers of [2, 5]) expect(bytes(await built(directory, options(method), { workers }))).toBe(one);
      expect(bytes(await built(directory, options(method), { workers: 2 }))).toBe(one);
      expect(bytes(await sweep(directory, options(method), { workers: 1 }))).toBe(one);
    });

  it("progress counts every task once, whatever the number of workers", async () => {
    const directory = written(randomDraft({ divisions: [8, 8, 6], bands: 3, seed: 22 }));
    for (const workers of [1, 3]) {
      const told: string[] = [];
      const onProgress = (done: number, of: number): number => told.push(`${done}/${of}`);
      await built(directory, options("points"), { workers, onProgress });
      expect(told).toEqual(Array.from({ length: 12 }, (_, i) => `${i + 1}/12`));
    }
  });
});

describe("a run that does not end well", () => {
  async function faultOf(promise: Promise<unknown>): Promise<{ kind: string; message: string; cure: string }> {
    try {
      await promise;
    } catch (error) {
      if (isFault(error)) return error;
      throw error;
    }
    throw new Error("it ended well");
  }

  it("tells bad data as a data Fault with array and k point, with 1 and 2 workers", async () => {
    const draft = randomDraft({ divisions: [8, 8, 6], bands: 3, seed: 23 });
    const directory = written(draft);
    const energies = new Float64Array(draft.points.flatMap(({ energyEv }) => [...energyEv]));
    energies[3 * 250 + 1] = Number.NaN;
    writeFileSync(join(directory, "energy.f64"), new Uint8Array(energies.buffer));
    const faults = [];
    for (const workers of [1, 2]) faults.push(await faultOf(built(directory, options("points"), { workers })));
    expect(faults[0].kind).toBe("data");
    expect(faults[0].message).toContain("energy");
    expect(faults[0].message).toContain("250");
    expect({ ...faults[1] }).toEqual({ ...faults[0] });
    expect(faults[1].message).toBe(faults[0].message);
  });

  it("stops when it is interrupted, before it starts and in the middle", async () => {
    const directory = written(randomDraft({ divisions: [8, 8, 6], bands: 5, seed: 24 }));
    for (const workers of [1, 2]) {
      const before = AbortSignal.abort();
      expect((await faultOf(built(directory, options("cells"), { workers, signal: before }))).kind).toBe("interrupted");
      const controller = new AbortController();
      const onProgress = (done: number): void => {
        if (done === 2) controller.abort();
      };
      const stopped = built(directory, options("cells"), { workers, signal: controller.signal, onProgress });
      expect((await faultOf(stopped)).kind).toBe("interrupted");
    }
  });
});
