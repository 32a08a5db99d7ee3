// browser.ts: how do tests open a page from disk in a real browser, and what did the page ask of the world meanwhile?
import { existsSync } from "node:fs";
import { pathToFileURL } from "node:url";
import { type Browser, chromium, type Page } from "playwright-core";
import { requireOrSkip } from "../tooling/python.js";

/** Debian's chromium, under the names it has had; undefined where there is none. */
export const chromiumPath: string | undefined = ["/usr/bin/chromium", "/usr/bin/chromium-browser"].find(existsSync);

/** A suite that needs Debian's chromium; skipped by name where it is missing (a failure with CI=true). */
export function describeWithChromium(name: string, body: (executablePath: string) => void): void {
  requireOrSkip("Debian's chromium", chromiumPath, name, body);
}

/** A page and everything that went wrong or out since it was opened. */
export interface OpenedPage {
  readonly page: Page;
  /** Errors and warnings of the console, and uncaught exceptions. */
  readonly complaints: string[];
  /** Addresses asked for other than the file itself and data inside it. */
  readonly requests: string[];
}

export const launch = (executablePath: string): Promise<Browser> =>
  chromium.launch({ executablePath, args: ["--no-sandbox", "--disable-dev-shm-usage"] });

/** Opens a file of the disk at a width and in light or dark. */
export async function openFile(
  browser: Browser,
  path: string,
  { width = 1400, dark = false }: { readonly width?: number; readonly dark?: boolean } = {},
): Promise<OpenedPage> {
  const page = await browser.newPage({
    viewport: { width, height: 900 },
    colorScheme: dark ? "dark" : "light",
    acceptDownloads: true,
  });
  const complaints: string[] = [];
  const requests: string[] = [];
  const address = pathToFileURL(path).href;
  page.on("console", (message) => {
    if (message.type() === "error" || message.type() === "warning") complaints.push(message.text());
  });
  page.on("pageerror", (error) => complaints.push(error.message));
  page.on("request", (request) => {
    const url = request.url();
    if (url !== address && !url.startsWith("data:") && !url.startsWith("blob:")) requests.push(url);
  });
  await page.goto(address);
  return { page, complaints, requests };
}

/** Waits until what was changed is drawn. */
export async function drawn(page: Page): Promise<void> {
  await page.evaluate("new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)))");
}

/** Puts a value into a labelled field, as a person who types it and leaves the field. */
export async function typeInto(page: Page, label: string, value: number): Promise<void> {
  const field = page.getByRole("spinbutton", { name: label }).first();
  await field.fill(String(value));
  await field.press("Tab");
  await drawn(page);
}

/** The exact numbers of the first read-out: values of the responses, then states per eV and electrons per cell. */
export async function readOut(page: Page): Promise<{ level: number; doping: number; values: number[] }> {
  const table = page.locator(".readout table").first();
  const cells = await table.locator("[data-value]").all();
  const values = await Promise.all(cells.map(async (cell) => Number(await cell.getAttribute("data-value"))));
  return {
    level: Number(await table.getAttribute("data-level")),
    doping: Number(await table.getAttribute("data-doping")),
    values,
  };
}
