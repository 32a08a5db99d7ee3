// run.mjs: how near to the truth does `sweep` come on three systems whose truth is known?
// node data/study/run.mjs [gold] [accuracy] [curve] [dirac] [layer] [page]: the stages named, or all of them. Each stage replaces
// its part of results.json; the pictures and the tables of README.md are made from results.json alone. One worker: the machine stays
// usable, and the numbers do not depend on it.
import { spawnSync } from "node:child_process";
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { drawPictures } from "./charts.mjs";
import { renewTables } from "./tables.mjs";

const repository = fileURLToPath(new URL("../..", import.meta.url));
const here = fileURLToPath(new URL(".", import.meta.url));
const resultsFile = join(here, "results.json");
/** CODATA 2022. */
const boltzmannEvPerK = 8.617333262e-5;

/** Runs the built command with --json; returns its document. */
function tidegauge(...words) {
  const program = join(repository, "bin", "tidegauge.js");
  const args = [program, ...words.flat(3).map(String), "--json", "--quiet"];
  const run = spawnSync(process.execPath, args, { encoding: "utf8", maxBuffer: 2 ** 28 });
  if (run.status !== 0) throw new Error(`tidegauge ${words.flat(3).join(" ")}: status ${run.status}\n${run.stderr}`);
  return JSON.parse(run.stdout);
}

/** Writes a sample to a directory of its own, hands it to `use`, and removes it. */
function withSample(words, use) {
  const scratch = mkdtempSync(join(tmpdir(), "tidegauge-study-"));
  try {
    const grid = join(scratch, "grid");
    tidegauge("sample", words, "--out", grid);
    return use(grid);
  } finally {
    rmSync(scratch, { recursive: true, force: true });
  }
}

const sweep = (grid, ...words) => tidegauge("sweep", grid, "--workers", 1, words);
const atLevel = (levelEv) => ["--from", levelEv, "--to", levelEv, "--points", 1];

/** One level, one temperature: value, bar and its parts, plain sum, samples. */
function single(result, name) {
  const found = result.responses.find((response) => response.name === name);
  const [value, bar, barSampling, barModel, plain] = ["value", "error", "error_sampling", "error_model", "points"].map(
    (key) => found[key][0][0],
  );
  return { value, bar, barSampling, barModel, plain };
}

// ---- gold ----

const goldResponses = ["spin:xy:z", "orbital:xy:z"];
const goldReference = JSON.parse(
  readFileSync(join(repository, "tests", "published", "reference", "gold.json"), "utf8"),
);
const roomIndex = goldReference.temperature_K.indexOf(300);
const fermiIndex = goldReference.level_eV.indexOf(0);
const goldTruth = { spin: goldReference.second.spin_hall, orbital: goldReference.second.orbital_hall };
const goldGrid = (mesh) => ["metal", "--mesh", mesh, mesh, mesh];

function goldRow(grid, mesh, accuracy) {
  const words = ["--response", goldResponses, atLevel(0), "--temperature", 300, "--accuracy", accuracy];
  const result = sweep(grid, ...words);
  const { samples, unresolved } = result.sampling;
  const [spin, orbital] = goldResponses.map((name) => single(result, name));
  return { mesh, points: mesh ** 3, accuracy, samples, unresolved, spin, orbital };
}

const gold = () => ({
  unit: goldReference.unit,
  temperatureK: 300,
  truth: { spin: goldTruth.spin[roomIndex][fermiIndex], orbital: goldTruth.orbital[roomIndex][fermiIndex] },
  rows: [6, 8, 10, 12, 16].map((mesh) => withSample(goldGrid(mesh), (grid) => goldRow(grid, mesh, "1%"))),
});

const accuracy = () => ({
  rows: withSample(goldGrid(12), (grid) => ["3%", "1%", "0.3%"].map((share) => goldRow(grid, 12, share))),
});

/** Errors of a curve against the truth: rms and largest in parts of the largest value, share of levels within 1 and 2 bars. */
function compareCurve({ value, error, points }, truth) {
  const most = Math.max(...truth.map(Math.abs));
  const rms = (curve) => Math.sqrt(curve.reduce((sum, y, i) => sum + (y - truth[i]) ** 2, 0) / truth.length) / most;
  const within = (bars) =>
    value[0].filter((y, i) => Math.abs(y - truth[i]) <= bars * error[0][i]).length / truth.length;
  return {
    largest: most,
    rms: rms(value[0]),
    rmsPlain: rms(points[0]),
    meanBar: error[0].reduce((sum, bar) => sum + bar, 0) / truth.length / most,
    withinOneBar: within(1),
    withinTwoBars: within(2),
    value: value[0],
    bar: error[0],
    plain: points[0],
    truth,
  };
}

const curveWindow = ["--from", -1, "--to", 1, "--points", 41, "--temperature", 300];

function curveRun(grid, accuracy) {
  const result = sweep(grid, "--response", goldResponses, curveWindow, "--accuracy", accuracy);
  const [spin, orbital] = ["spin", "orbital"].map((moment, i) =>
    compareCurve(result.responses[i], goldTruth[moment][roomIndex]),
  );
  return { accuracy, samples: result.sampling.samples, levelEv: result.level_eV, spin, orbital };
}

const curve = () => ({
  mesh: 12,
  runs: withSample(goldGrid(12), (grid) => ["3%", "1%"].map((share) => curveRun(grid, share))),
});

// ---- the massive Dirac point ----

const halfBox = 3;
/** e^2/h at level 0 and T = 0, from the box alone: the angle of the pseudospin integrated over a square. */
const diracTruth = (mass) => -Math.atan(halfBox ** 2 / (mass * Math.sqrt(2 * halfBox ** 2 + mass ** 2))) / Math.PI;

/** The plain sum on a mesh whose step is half of D, done where that is still a small file. */
function plainDirac(mass) {
  const divisions = Math.round((2 * halfBox) / (mass / 2));
  const known = { divisions, points: divisions ** 2 };
  if (divisions > 400) return known;
  const words = ["dirac", "--set", `mass=${mass}`, "--mesh", divisions, divisions, "--offset", 0.5, 0.5];
  return withSample(words, (grid) => {
    const cold = ["--temperature", 0, "--method", "points"];
    const { value } = single(sweep(grid, "--response", "charge:xy", atLevel(0), cold), "charge:xy");
    return { ...known, value, error: value - diracTruth(mass) };
  });
}

function diracRow(mass) {
  const words = ["dirac", "--set", `mass=${mass}`, "--mesh", 24, 24, "--offset", 0.5, 0.5];
  return withSample(words, (grid) => {
    const cold = ["--temperature", 0, "--accuracy", "0.1%"];
    const result = sweep(grid, "--response", "charge:xy", atLevel(0), cold);
    const truth = diracTruth(mass);
    const { samples, deepest } = result.sampling;
    return { mass, truth, ...single(result, "charge:xy"), samples, deepest, plainNeeded: plainDirac(mass) };
  });
}

const dirac = () => ({ unit: "e^2/h", mesh: 24, rows: [0.3, 0.1, 0.03, 0.01, 0.003, 0.001, 0.0003].map(diracRow) });

// ---- the layer whose p bands touch ----

/** Converged sums made apart from this program, e/2pi per spin, k_B T = 0.05 eV; model of Go et al., PRL 121, 086602 (2018). */
const layerTruth = [
  [-1, 1.262926363],
  [-0.5, 0.856834379],
  [0, 0.767910557],
  [1, -0.028243056],
  [3, 0.044943936],
];

function layerRows(mesh) {
  return withSample(["sp-square", "--mesh", mesh, mesh, "--offset", 0.5, 0.5], (grid) => {
    const warm = ["--temperature", 0.05 / boltzmannEvPerK];
    return layerTruth.map(([levelEv, truth]) => {
      const result = sweep(grid, "--response", "orbital:xy:z", atLevel(levelEv), warm);
      return { mesh, levelEv, truth, ...single(result, "orbital:xy:z"), samples: result.sampling.samples };
    });
  });
}

const layer = () => ({ unit: "e/2pi", thermalEv: 0.05, rows: [10, 16, 20, 32, 40].flatMap(layerRows) });

// ---- stages ----

const stages = { gold, accuracy, curve, dirac, layer };
const asked = process.argv.slice(2);
const results = existsSync(resultsFile) ? JSON.parse(readFileSync(resultsFile, "utf8")) : {};
for (const [name, compute] of Object.entries(stages)) {
  if (asked.length > 0 && !asked.includes(name)) continue;
  const begun = Date.now();
  results[name] = compute();
  writeFileSync(resultsFile, `${JSON.stringify(results, null, 1)}\n`);
  process.stderr.write(`${name}: ${((Date.now() - begun) / 1000).toFixed(0)} s\n`);
}
drawPictures(results, here);
renewTables(results, here);
