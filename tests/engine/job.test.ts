// job.test.ts: is the work cut by the number of stored points alone, into few enough and large enough tasks?
import fc from "fast-check";
import { expect, it } from "vitest";
import { cutTasks, type Task } from "../../src/engine/job.js";
import type { Grid } from "../../src/grid/open.js";

/** Only the numbers of points matter. */
const gridOf = (points: number, patches: readonly number[] = []): Pick<Grid, "facts" | "patches"> =>
  ({ facts: { points }, patches: patches.map((each) => ({ facts: { points: each } })) }) as unknown as Grid;

function expectWhole(tasks: readonly Task[], points: number): void {
  let next = 0;
  for (const { first, count } of tasks) {
    expect(first).toBe(next);
    expect(count).toBeGreaterThan(0);
    next = first + count;
  }
  expect(next).toBe(points);
  expect(tasks.length).toBeLessThanOrEqual(64);
  for (const { count } of tasks.slice(0, -1)) expect(count).toBeGreaterThanOrEqual(32);
}

it("tasks cover every point once, in order, at most 64 of them and none but the last below 32 points", () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 3_000_000 }), (points) => {
      const tasks = cutTasks(gridOf(points));
      expectWhole(tasks, points);
      expect(tasks.every(({ patch }) => patch === undefined)).toBe(true);
      expect(cutTasks(gridOf(points))).toEqual(tasks);
    }),
  );
  expect(cutTasks.length).toBe(1);
});

it("patches come after the mesh, each cut in the same way", () => {
  const tasks = cutTasks(gridOf(100, [40, 7000]));
  expect(tasks.filter(({ patch }) => patch === undefined)).toEqual(cutTasks(gridOf(100)));
  expectWhole(
    tasks.filter(({ patch }) => patch === 0),
    40,
  );
  expectWhole(
    tasks.filter(({ patch }) => patch === 1),
    7000,
  );
  expect(tasks.map(({ patch }) => patch ?? -1)).toEqual(tasks.map(({ patch }) => patch ?? -1).sort((a, b) => a - b));
});
