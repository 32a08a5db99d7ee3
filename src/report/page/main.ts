// main.ts: starts the page: an explorer for every sweep, and the switch between light and dark.
import { readPageData } from "../page-data.js";
import { startExplorer } from "./explorer.js";

const data = readPageData(document.getElementById("tidegauge-data")?.textContent ?? '{"curves":[]}');
for (const root of document.querySelectorAll<HTMLElement>("[data-curves]")) {
  const at = Number(root.dataset.curves);
  startExplorer(root, data.curves[at], `curves-${at + 1}`);
}

const theme = document.getElementById("theme");
const dark = (): boolean =>
  document.documentElement.dataset.theme === "dark" ||
  (document.documentElement.dataset.theme === undefined && matchMedia("(prefers-color-scheme: dark)").matches);
theme?.addEventListener("click", () => {
  document.documentElement.dataset.theme = dark() ? "light" : "dark";
});
theme?.removeAttribute("hidden");
