// tally.mjs: how many tests of the last `npm test` passed and failed? A step that failed without a failed test counts as one.
import { existsSync, readFileSync } from "node:fs";

const read = (name) => (existsSync(`.cache/tests/${name}`) ? readFileSync(`.cache/tests/${name}`, "utf8") : "");
const report = read("vitest.json");
const { numPassedTests = 0, numFailedTests = 0, testResults = [] } = report === "" ? {} : JSON.parse(report);

const brokenFiles = testResults.filter(
  (file) => file.status === "failed" && !file.assertionResults.some((result) => result.status === "failed"),
);
const steps = read("failed-steps").trimEnd().split("\n").filter(Boolean);
const explained = numFailedTests + brokenFiles.length;
const otherSteps = steps.filter((step) => explained === 0 || !step.includes("vitest"));
const failed = explained + otherSteps.length + (report === "" && otherSteps.length === 0 ? 1 : 0);

console.log(`${numPassedTests} passed, ${failed} failed`);
process.exitCode = failed === 0 ? 0 : 1;
