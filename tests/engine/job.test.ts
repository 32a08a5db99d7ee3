// job.test.ts: is the work cut by the number of stored points alone, into few enough and large enough tasks?
import fc from "fast-check";
import { expect, it } from "vitest";
import { cutTasks } from "../../src/engine/job.js";

it("tasks cover every point once, in order, at most 64 of them and none but the last below 32 points", () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 3_000_000 }), (points) => {
      const tasks = cutTasks(points);
      let next = 0;
      for (const { first, count } of tasks) {
        expect(first).toBe(next);
        expect(count).toBeGreaterThan(0);
        next = first + count;
      }
      expect(next).toBe(points);
      expect(tasks.length).toBeLessThanOrEqual(64);
      for (const { count } of tasks.slice(0, -1)) expect(count).toBeGreaterThanOrEqual(32);
      expect(cutTasks(points)).toEqual(tasks);
    }),
  );
  expect(cutTasks.length).toBe(1);
});
