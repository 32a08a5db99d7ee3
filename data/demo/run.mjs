// run.mjs: the story of data/demo/README.md, told with the commands that a person would type.
// npm run demo, or node data/demo/run.mjs [DIRECTORY [MESH [MORE OPTIONS OF THE METAL'S SWEEP...]]]
import { spawnSync } from "node:child_process";
import { existsSync, mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { join, resolve } from "node:path";
import { fileURLToPath } from "node:url";

const repository = fileURLToPath(new URL("../..", import.meta.url));
/** Where everything goes; relative to the repository. */
const out = process.argv[2] ?? join("out", "demo");
/** Divisions of the metal's mesh: 12^3 points are 135 MB. */
const metalMesh = Number(process.argv[3] ?? 12);
/** The window is what alloying can reach; a tenth of the largest value is soon reached, and enough for the story. */
const metalWindow = ["--from", "-0.4", "--to", "0.6", "--points", "101", "--accuracy", "10%"];
const moreOptions = process.argv.slice(4);
/** Divisions of the mesh of the dense values in this directory's README. */
const denseMesh = 64;
const started = Date.now();

const say = (...lines) => process.stdout.write(`${lines.join("\n")}\n`);
const heading = (text) => say("", text, "-".repeat(text.length));
const place = (...names) => join(out, ...names);
const inRepository = (path) => resolve(repository, path);

/** Runs `tidegauge WORDS` in the repository and shows it; returns stdout where it is kept back. Ends the demo when it fails. */
function tidegauge(words, output = "show") {
  const begun = Date.now();
  say(`\n$ tidegauge ${words.join(" ")}`);
  const stdout = output === "show" ? "inherit" : "pipe";
  const program = join(repository, "bin", "tidegauge.js");
  const run = spawnSync(process.execPath, [program, ...words], {
    cwd: repository,
    encoding: "utf8",
    stdio: ["ignore", stdout, "inherit"],
  });
  if (run.status !== 0) {
    if (run.stdout) say(run.stdout);
    say(`The demo stops here: this command ended with status ${run.status ?? run.signal}.`);
    process.exit(run.status ?? 130);
  }
  const seconds = ((Date.now() - begun) / 1000).toFixed(1);
  return { text: run.stdout ?? "", seconds };
}

const readCurves = (name) => JSON.parse(readFileSync(inRepository(place(name, "curves.json")), "utf8"));

/** A response at the level nearest to `levelEv`, at the first temperature of the result. */
function valueAt(curves, name, levelEv) {
  const distance = (index) => Math.abs(curves.level_eV[index] - levelEv);
  const index = curves.level_eV.reduce((best, _, each) => (distance(each) < distance(best) ? each : best), 0);
  return at(curves, name, index);
}

function at(curves, name, index) {
  const { value, error, points } = curves.responses.find((response) => response.name === name);
  return {
    levelEv: curves.level_eV[index],
    doping: curves.doping_per_cell[0][index],
    value: value[0][index],
    error: error[0][index] ?? Number.NaN,
    points: points[0][index],
  };
}

/** Where a response is largest, among the levels from `fromEv` to `toEv`. */
function peak(curves, name, fromEv, toEv) {
  const inside = curves.level_eV.flatMap((level, index) => (level >= fromEv && level <= toEv ? [index] : []));
  return inside.map((index) => at(curves, name, index)).reduce((best, each) => (each.value > best.value ? each : best));
}

/** The rows of the dense values in this directory's README: level, spin:hall, orbital:hall. */
function denseValues() {
  const page = readFileSync(new URL("README.md", import.meta.url), "utf8");
  const rows = [...page.matchAll(/^\|\s*([+-]?[\d.]+)\s*\|\s*[\d.]+\s*\|\s*(\d+)\s*\|\s*(\d+)\s*\|$/gm)];
  return rows.map(([, level, spin, orbital]) => ({
    levelEv: Number(level),
    spin: Number(spin),
    orbital: Number(orbital),
  }));
}

const whole = (value) => value.toFixed(0);
const withBar = ({ value, error }) => `${whole(value)} +- ${whole(error)}`;

function layer() {
  heading("1. A layer whose answer is known");
  say(
    "Haldane's honeycomb layer (Phys. Rev. Lett. 61, 2015 (1988)) is an insulator with one conducting edge channel: in the",
    "gap its Hall conductivity is exactly one quantum, here -1 e^2/h. No parameter can change that without closing the gap.",
  );
  tidegauge(["sample", "haldane", "--mesh", "60", "60", "--out", place("haldane")]);
  tidegauge(
    ["sweep", place("haldane"), "--response", "charge:xy", "--temperature", "0", "--out", place("haldane-curves")],
    "keep",
  );
  const { value, error } = valueAt(readCurves("haldane-curves"), "charge:xy", 0);
  const agrees = Math.abs(value + 1) < 1e-3;
  say(
    `charge:xy in the gap: ${value.toFixed(9)} e^2/h, bar ${error.toExponential(0)}; known: -1. ${agrees ? "Agrees." : "DOES NOT AGREE."}`,
  );
  return agrees;
}

function metal() {
  heading("2. A metal, invented for this demo");
  say(
    "Vadholmium does not exist; its band structure is a physical one all the same (18 bands, spin-orbit coupling). It",
    "can be alloyed with its neighbours, half an electron per atom either way. Which alloy is best for a spin current?",
  );
  const mesh = Array(3).fill(String(metalMesh));
  const sampled = tidegauge(["sample", "demo", "--mesh", ...mesh, "--out", place("vadholmium")]);
  const inspected = tidegauge(["inspect", place("vadholmium")], "keep");
  writeFileSync(inRepository(place("inspect.txt")), inspected.text);
  say(inspected.text.split("\n\n")[0], `(and more: ${place("inspect.txt")})`);
  const words = ["sweep", place("vadholmium"), "--response", "spin:hall", "orbital:hall", "--temperature", "300"];
  const swept = tidegauge([...words, ...metalWindow, ...moreOptions, "--out", place("vadholmium-curves")]);
  say(`(sampled in ${sampled.seconds} s, inspected in ${inspected.seconds} s, swept in ${swept.seconds} s)`);
}

function comparison(curves) {
  const rows = denseValues().map((dense) => ({
    dense,
    spin: valueAt(curves, "spin:hall", dense.levelEv),
    orbital: valueAt(curves, "orbital:hall", dense.levelEv),
  }));
  const line = (...cells) => cells.map((cell, index) => cell.padStart([8, 16, 10, 18, 10][index])).join("  ");
  say(
    `Beside plain sums over ${denseMesh}^3 points by an independent program, ${whole((denseMesh / metalMesh) ** 3)} times as many (300 K, (hbar/e) S/cm):`,
    "",
    line("level/eV", "spin:hall", "dense", "orbital:hall", "dense"),
    ...rows.map(({ dense, spin, orbital }) =>
      line(dense.levelEv.toFixed(2), withBar(spin), whole(dense.spin), withBar(orbital), whole(dense.orbital)),
    ),
  );
  const all = rows.flatMap(({ dense, spin, orbital }) => [
    { ...spin, dense: dense.spin },
    { ...orbital, dense: dense.orbital },
  ]);
  const within = all.filter(({ value, error, dense }) => Math.abs(value - dense) <= 2 * error).length;
  const worst = (key) => Math.max(...all.map((each) => Math.abs(each[key] / each.dense - 1)));
  const percent = (part) => `${(100 * part).toFixed(0)}%`;
  say(
    "",
    `${within} of ${all.length} values lie within two bars of the dense ones. The worst is off by ${percent(worst("value"))}; of the plain sums over`,
    `the same ${metalMesh}^3 points by ${percent(worst("points"))}.`,
  );
}

function reading() {
  heading("3. What it means");
  const curves = readCurves("vadholmium-curves");
  comparison(curves);
  const [here, best] = [valueAt(curves, "spin:hall", 0), peak(curves, "spin:hall", -0.3, 0.5)];
  const [orbitalHere, orbitalThere] = [0, best.levelEv].map((levelEv) => valueAt(curves, "orbital:hall", levelEv));
  const orbitalBest = peak(curves, "orbital:hall", -0.4, 0.5);
  const spinThere = valueAt(curves, "spin:hall", orbitalBest.levelEv);
  const direction = best.doping > 0 ? "adding" : "taking away";
  const apart = Math.abs(orbitalBest.levelEv - best.levelEv) > 0.1 ? " No one alloy is best for both." : "";
  const told = best.value - here.value > 2 * Math.hypot(best.error, here.error);
  say(
    "",
    `- As it comes, vadholmium has spin:hall ${withBar(here)}. The largest value within reach is ${withBar(best)}, at ${best.levelEv.toFixed(2)} eV:`,
    `  ${direction} ${Math.abs(best.doping).toFixed(2)} electrons per atom gives ${(best.value / here.value).toFixed(1)} times as much${told ? "" : ", though the bars are too wide to be sure"}. Going on loses it again.`,
    `- The orbital response does not follow: ${whole(orbitalHere.value)} as it comes, ${whole(orbitalThere.value)} at the spin peak. It is largest at ${orbitalBest.levelEv.toFixed(2)} eV`,
    `  (${whole(orbitalBest.value)}), where spin:hall is ${whole(spinThere.value)}.${apart}`,
  );
}

function page() {
  const results = [place("vadholmium-curves"), place("haldane-curves")];
  tidegauge(["report", ...results, "--title", "Vadholmium and a Haldane layer", "--quiet", "--out", place("page")]);
}

function closing() {
  heading("4. Before you believe it");
  say(
    "- Intrinsic part only: no skew scattering, no side jump, no finite lifetime. A real alloy scatters.",
    "- Rigid band: alloying moves the level here, nothing else. Real alloying also moves and broadens the bands.",
    "- A screening number: it is as good as the band structure, and says where to look closer, not what will be measured.",
    `- The bars speak of the sampling only, and are estimates. ${metalMesh}^3 points and an accuracy of 10% are there to be quick: where the`,
    "  story depends on a value, sample denser (--mesh 16 16 16), ask for 1% (the default), and see whether it stays.",
  );
  heading("5. Pictures and numbers");
  page();
  say(
    "",
    `${place("page", "report.html")}   everything on one page (open it in a browser): move the temperature and the doping`,
    place("haldane-curves", "curves.svg"),
    place("vadholmium-curves", "curves.svg"),
    `${place("vadholmium-curves", "curves.csv")}   one row per level; curves.json holds the job, to run again with --job`,
    "",
    `Done in ${((Date.now() - started) / 1000).toFixed(0)} s. ${out} may be deleted.`,
  );
}

if (!existsSync(join(repository, "dist", "cli", "main.js"))) {
  say("The program is not built yet: run npm ci first.");
  process.exit(1);
}
mkdirSync(inRepository(out), { recursive: true });
const agrees = layer();
metal();
reading();
closing();
process.exitCode = agrees ? 0 : 1;
