// report.test.ts: does the page of `report`, in a real browser, open by itself, tell the numbers of the command, and serve everybody?
import { readFileSync, rmSync, statSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import axe from "axe-core";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, it } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { freshDirectory, runCommand } from "../tooling/command.js";
import { describeWithChromium, drawn, launch, openFile, readOut, typeInto } from "./browser.js";

const directory = freshDirectory();
const at = (...names: string[]): string => join(directory, ...names);
afterAll(() => rmSync(directory, { recursive: true, force: true }));

async function tidegauge(...words: string[]): Promise<string> {
  const run = await runCommand([...words, "--quiet"]);
  expect(run.stderr + (run.status === 0 ? "" : run.stdout)).toBe("");
  return run.stdout;
}
const readCurves = (name: string): CurvesResult => JSON.parse(readFileSync(at(name, "curves.json"), "utf8"));

const window = ["--from", "-0.5", "--to", "0.5", "--points", "201"];
const sweepOf = (method: string, kelvins: string, name: string) =>
  tidegauge(
    ...["sweep", at("grid"), "--response", "spin:hall", "orbital:hall", ...window, "--method", method],
    ...["--temperature", ...kelvins.split(" "), "--out", at(name)],
  );

beforeAll(async () => {
  await tidegauge("sample", "random", "--set", "periodic=2", "bands=6", "--mesh", "12", "12", "--out", at("grid"));
  for (const method of ["points", "cells", "refine"]) {
    await sweepOf(method, "0 300", method);
    await sweepOf(method, "0 220 300", `${method}-warm`);
    await tidegauge("report", at(method), "--out", at(`${method}-page`));
  }
  await tidegauge("dope", at("refine", "curves.json"), "--doping", "-0.05", "0.02", "--out", at("dope"));
  await tidegauge("converge", at("grid"), "--response", "spin:hall", "--points", "21", "--out", at("converge"));
  await tidegauge("locate", at("grid"), "--response", "spin:hall", "--out", at("locate"));
  await tidegauge("report", at("refine"), at("dope", "dope.json"), at("converge"), at("locate"), "--out", at("all"));
});

const page = (name: string): string => at(`${name}-page`, "report.html");

describeWithChromium("the page in chromium", (executablePath) => {
  let browser: Browser;
  beforeAll(async () => {
    browser = await launch(executablePath);
  });
  afterAll(() => browser.close());

  it("opens from disk without a complaint, asks nothing of a network, and is under 1 MB", async () => {
    for (const file of [page("refine"), at("all", "report.html")]) {
      const opened = await openFile(browser, file);
      await opened.page.locator("figure.panel svg").first().waitFor();
      expect(opened.complaints).toEqual([]);
      expect(opened.requests).toEqual([]);
      expect(statSync(file).size).toBeLessThan(1e6);
      await opened.page.close();
    }
  });

  // The same sweep with 220 K among its temperatures, on the same nodes: what the command says at 220 K.
  for (const method of ["points", "cells", "refine"])
    it(`has at 220 K, moved to in the page, the numbers of the command (${method})`, async () => {
      const warm = readCurves(`${method}-warm`);
      const t = warm.temperature_K.indexOf(220);
      const { page: tab } = await openFile(browser, page(method));
      await typeInto(tab, "Temperature", 220);
      for (const [i, level] of warm.level_eV.entries()) {
        if (i % 25 !== 0) continue;
        await typeInto(tab, "Level", level);
        const { values, doping } = await readOut(tab);
        const rows = [...warm.responses.map(({ value }) => value), warm.states_per_eV, warm.electrons_per_cell];
        for (const [r, value] of values.entries()) {
          const largest = Math.max(...rows[r][t].map(Math.abs));
          expect(Math.abs(value - rows[r][t][i]), `column ${r} at ${level} eV`).toBeLessThan(1e-6 * largest);
        }
        expect(Math.abs(doping - warm.doping_per_cell[t][i])).toBeLessThan(1e-6);
      }
      await tab.close();
    });

  it("solves the level of a fixed doping at every temperature as `dope` does", async () => {
    const warm = at("refine-warm", "curves.json");
    const wanted = JSON.parse(await tidegauge("dope", warm, "--doping", "-0.05", "0.02", "--json"));
    const { page: tab } = await openFile(browser, page("refine"));
    for (const point of wanted.dopings) {
      await typeInto(tab, "Doping", point.doping.per_cell);
      for (const kelvin of [220, 300]) {
        await typeInto(tab, "Temperature", kelvin);
        const read = await readOut(tab);
        for (const [r, { at_temperatures: rows }] of point.responses.entries()) {
          const row = rows.find((each: { temperature_K: number }) => each.temperature_K === kelvin);
          expect(Math.abs(read.level - row.level_eV)).toBeLessThan(1e-6);
          expect(Math.abs(read.values[r] / row.value - 1)).toBeLessThan(1e-6);
        }
      }
    }
    await tab.close();
  });

  it("gives the shown curves as CSV and the picture as SVG", async () => {
    const curves = readCurves("refine");
    const { page: tab, complaints } = await openFile(browser, page("refine"));
    const saved = async (button: string): Promise<string> => {
      const [file] = await Promise.all([
        tab.waitForEvent("download"),
        tab.getByRole("button", { name: button }).click(),
      ]);
      return readFileSync(await file.path(), "utf8");
    };
    const [header, ...rows] = (await saved("Shown curves as CSV")).trimEnd().split("\n");
    expect(header).toContain("spin:hall [e/2pi],spin:hall error");
    expect(rows).toHaveLength(201);
    expect(Number(rows[100].split(",")[7])).toBe(curves.responses[0].value[1][100]);
    const svg = await saved("Shown picture as SVG");
    expect(svg).toMatch(/^<svg xmlns="http:\/\/www.w3.org\/2000\/svg"/);
    expect(svg).not.toContain("var(--");
    writeFileSync(at("picture.svg"), svg);
    const picture = await openFile(browser, at("picture.svg"));
    expect(await picture.page.locator("path").count()).toBeGreaterThan(5);
    expect(picture.complaints).toEqual([]);
    expect(complaints).toEqual([]);
    await picture.page.close();
    await tab.close();
  });

  it("is worked by keyboard alone, and by the pointer", async () => {
    const { page: tab } = await openFile(browser, page("refine"));
    const before = await readOut(tab);
    await tab.getByRole("slider", { name: "Level" }).focus();
    for (let i = 0; i < 20; i++) await tab.keyboard.press("ArrowRight");
    await drawn(tab);
    const after = await readOut(tab);
    expect(after.level).toBeGreaterThan(before.level);
    await tab.getByRole("button", { name: "0 K", exact: true }).focus();
    await tab.keyboard.press("Enter");
    await drawn(tab);
    expect(await tab.locator("[data-curves]").getAttribute("data-temperature")).toBe("0");
    const stack = (await tab.locator(".stack").boundingBox())!;
    await tab.mouse.move(stack.x + 54, stack.y + 100);
    expect((await readOut(tab)).level).toBeCloseTo(-0.5, 2);
    await tab.getByLabel("Axis", { exact: true }).selectOption("doping");
    await drawn(tab);
    await tab.mouse.move(stack.x + stack.width - 16, stack.y + 100);
    expect((await readOut(tab)).level).toBeGreaterThan(0.4);
    await tab.close();
  });

  it("has no accessibility fault that axe-core finds, in light and dark, wide and narrow, and fits 380 px", async () => {
    for (const width of [1400, 380])
      for (const dark of [false, true]) {
        const { page: tab } = await openFile(browser, at("all", "report.html"), { width, dark });
        await drawn(tab);
        await tab.evaluate(axe.source);
        const found = (await tab.evaluate("axe.run()")) as {
          violations: { id: string; impact: string; nodes: { html: string }[] }[];
        };
        const named = found.violations.map(({ id, impact, nodes }) => `${impact} ${id}: ${nodes[0].html}`);
        expect(named).toEqual([]);
        expect(await tab.evaluate("document.documentElement.scrollWidth")).toBeLessThanOrEqual(width);
        await tab.close();
      }
  });

  it("shows hostile titles and names as text", async () => {
    const curves = readCurves("points");
    const hostile = '</script><img src=x onerror="document.title=1"><script>document.title=2</script>';
    const renamed = { ...curves, grid: { ...curves.grid, title: hostile }, notes: [...curves.notes, hostile] };
    const responses = curves.responses.map((each, r) => (r === 0 ? { ...each, name: `spin:${hostile}` } : each));
    const { spectrum: _, ...rest } = { ...renamed, responses };
    writeFileSync(at("hostile.json"), JSON.stringify(rest));
    await tidegauge("report", at("hostile.json"), "--out", at("hostile"));
    const { page: tab, complaints, requests } = await openFile(browser, at("hostile", "report.html"));
    expect(await tab.title()).toBe(hostile);
    expect(await tab.locator("h1").textContent()).toBe(hostile);
    expect(await tab.locator("img").count()).toBe(0);
    expect(await tab.locator(".readout tbody th").first().textContent()).toContain(hostile);
    expect(await tab.getByRole("slider", { name: "Temperature" }).count()).toBe(0);
    expect([...complaints, ...requests]).toEqual([]);
    await tab.close();
  });
});

it("gives the same bytes for the same results and SOURCE_DATE_EPOCH", async () => {
  const made = async (name: string): Promise<string> => {
    const words = ["report", at("refine"), "--out", at(name), "--quiet"];
    expect((await runCommand(words, { env: { SOURCE_DATE_EPOCH: "1700000000" } })).status).toBe(0);
    return readFileSync(at(name, "report.html"), "utf8");
  };
  const first = await made("first");
  expect(await made("second")).toBe(first);
  expect(first).toContain("2023-11-14");
});

it("names what is no result", async () => {
  writeFileSync(at("odd.json"), '{"format":"tidegauge.dope/1","version":"1"}');
  writeFileSync(at("other.json"), '{"a":1}');
  for (const [file, status] of [
    ["odd.json", 3],
    ["other.json", 3],
    ["absent.json", 2],
  ] as const) {
    const run = await runCommand(["report", at(file), "--out", at("none")]);
    expect(run.status, file).toBe(status);
    expect(run.stderr.trimEnd().split("\n")).toHaveLength(2);
    expect(run.stderr).toContain(file);
  }
});
