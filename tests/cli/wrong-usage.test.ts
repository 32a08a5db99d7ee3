// wrong-usage.test.ts: does wrong usage end with status 2, one line and a cure, before anything is computed or written?
import { mkdtempSync, readdirSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { runCommand } from "../tooling/command.js";
import { runInProcess } from "../tooling/in-process.js";

const root = mkdtempSync(join(tmpdir(), "tidegauge-usage-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));
const at = (name: string): string => join(root, name);
const file = (name: string, content: unknown): string => {
  writeFileSync(at(name), typeof content === "string" ? content : JSON.stringify(content));
  return at(name);
};

beforeAll(async () => {
  for (const [name, mesh] of [
    ["haldane", ["2", "2"]],
    ["kane-mele", ["2", "2"]],
  ] as const) {
    expect((await runInProcess(["sample", name, "--mesh", ...mesh, "--out", at(name)])).status).toBe(0);
  }
});

const sweep = (...more: string[]): string[] => ["sweep", at("kane-mele"), ...more];

const cases: [what: string, args: () => string[], message: RegExp][] = [
  // words that are not known
  ["an unknown command", () => ["swep", "x"], /swep/],
  ["an unknown global option", () => ["--jsn"], /--jsn/],
  ["an unknown option of a command", () => sweep("--levels", "3"), /--levels/],
  ["an option of another command", () => ["inspect", at("haldane"), "--from", "1"], /--from/],
  // arguments
  ["a sweep of nothing", () => ["sweep"], /missing.*GRID/i],
  ["a sweep of two grids", () => sweep(at("haldane")), /too many arguments/],
  ["an inspection of nothing", () => ["inspect"], /missing.*GRID/i],
  ["a pattern without a match", () => ["inspect", at("none-*")], /no directory matches/],
  ["an option without its value", () => sweep("--from"), /--from.*missing/],
  ["a list without a value", () => sweep("--temperature"), /--temperature.*missing/],
  // numbers
  ["a level that is no number", () => sweep("--from", "low"), /--from low: expected a number/],
  ["an infinite level", () => sweep("--to", "Infinity"), /--to Infinity: expected a number/],
  ["an empty number", () => sweep("--to", ""), /--to/],
  ["a level beyond sense", () => sweep("--to", "1e6"), /--to 1000000/],
  ["a window upside down", () => sweep("--from", "1", "--to", "0"), /no window/],
  ["one level of a window", () => sweep("--points", "1"), /no window/],
  ["no levels", () => sweep("--points", "0"), /--points 0: expected a whole number/],
  ["half a level", () => sweep("--points", "2.5"), /--points 2\.5: expected a whole number/],
  ["too many levels", () => sweep("--points", "30000"), /--points 30000/],
  ["a negative temperature", () => sweep("--temperature", "300", "-5"), /--temperature/],
  ["a temperature in words", () => sweep("--temperature", "cold"), /--temperature.*cold/],
  ["a negative distance of degenerate bands", () => sweep("--degenerate", "-1"), /--degenerate/],
  ["a broadening that is NaN", () => sweep("--broaden", "NaN"), /--broaden NaN/],
  ["no workers", () => sweep("--workers", "0"), /--workers 0/],
  // responses, methods, units
  ["an unknown method", () => sweep("--method", "magic"), /--method magic/],
  ["a response that is no response", () => sweep("--response", "xy"), /"xy"/],
  ["a response with a direction too many", () => sweep("--response", "charge:xy:z"), /charge:xy:z/],
  ["a moment that the grid has not", () => sweep("--response", "orbital:xy:z"), /no moment "orbital"/],
  ["a moment without its polarisation", () => sweep("--response", "spin:xy"), /spin:xy/],
  ["a direction out of the layer", () => sweep("--response", "charge:zx"), /charge:zx/],
  ["spin where no moment is stored", () => ["sweep", at("haldane"), "--response", "spin:hall"], /no moment "spin"/],
  ["an unknown unit", () => sweep("--unit", "parsec"), /parsec/],
  // jobs
  ["a job that is not there", () => sweep("--job", at("none.json")), /none\.json.*no such file/],
  ["a job that is a directory", () => sweep("--job", root), /no regular file/],
  ["a job that is no JSON", () => sweep("--job", file("text.json", "points: 3")), /text\.json.*JSON/],
  ["a job that is a list", () => sweep("--job", file("list.json", [1])), /holds no options/],
  ["a job of another study", () => sweep("--job", file("other.json", { study: "inspect" })), /job of "inspect"/],
  ["a job with an unknown option", () => sweep("--job", file("odd.json", { pionts: 3 })), /pionts/],
  ["a job with a word for a number", () => sweep("--job", file("word.json", { points: "3" })), /--points/],
  // where files go
  ["an empty --out", () => sweep("--out", ""), /--out is empty/],
  ["a file as --out", () => sweep("--out", file("taken", "x")), /taken is not a directory/],
  [
    "--out below a file",
    () => ["inspect", at("haldane"), "--out", join(file("below", "x"), "a", "b")],
    /not a directory/,
  ],
  // samples
  ["a sample without a name", () => ["sample", "--out", at("s")], /no model is named/],
  ["a sample without --out", () => ["sample", "haldane"], /--out is missing/],
  ["an unknown sample", () => ["sample", "haldan", "--out", at("s")], /haldan/],
  ["a mesh of one number", () => ["sample", "haldane", "--mesh", "4", "--out", at("s")], /--mesh/],
  ["a crystal on two numbers", () => ["sample", "demo", "--mesh", "4", "4", "--out", at("s")], /three numbers/],
  ["a mesh of none", () => ["sample", "haldane", "--mesh", "4", "0", "--out", at("s")], /--mesh/],
  ["a thick layer", () => ["sample", "haldane", "--mesh", "4", "4", "2", "--out", at("s")], /layer|4 x 4 x 2/],
  ["an offset of a whole step", () => ["sample", "haldane", "--offset", "1", "0", "--out", at("s")], /--offset/],
  ["a setting without a value", () => ["sample", "haldane", "--set", "M", "--out", at("s")], /NAME=VALUE/],
  ["an unknown parameter", () => ["sample", "haldane", "--set", "mass=1", "--out", at("s")], /mass/],
  ["a parameter in words", () => ["sample", "haldane", "--set", "M=much", "--out", at("s")], /much/],
  ["a sample over foreign files", () => ["sample", "haldane", "--mesh", "2", "2", "--out", root], /not empty/],
];

describe("wrong usage", () => {
  it("comes in at least 40 kinds here", () => {
    expect(new Set(cases.map(([what]) => what)).size).toBeGreaterThanOrEqual(40);
  });

  it.each(cases)("%s", async (_, args, message) => {
    const words = args();
    const before = readdirSync(root).length;
    const safe = words.includes("--out") || words[0]?.startsWith("-") ? words : [...words, "--out", at("unused")];
    const { status, stdout, stderr } = await runInProcess(words[0] === "sample" ? words : safe);
    expect({ status, stdout }, stderr).toEqual({ status: 2, stdout: "" });
    expect(stderr).toMatch(/^tidegauge: [^\n]+\n {2}[^\n]+\n$/);
    expect(stderr).toMatch(message);
    expect(readdirSync(root)).toHaveLength(before);
  });

  it("is the same from a process of its own", async () => {
    for (const args of [sweep("--from", "low"), sweep("--response", "xy"), ["inspect", at("none-*")]]) {
      expect(await runCommand(args)).toEqual(await runInProcess(args));
    }
  });
});
