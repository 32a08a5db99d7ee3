// tables.mjs: the study's numbers as the tables of README.md, put between the comments <!-- NAME --> and <!-- /NAME -->.
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";

const table = (head, rows) =>
  [head, head.map((_, i) => (i === 0 ? "---" : "---:")), ...rows].map((cells) => `| ${cells.join(" | ")} |`).join("\n");
const signed = (value, digits) => `${value < 0 ? "" : "+"}${value.toFixed(digits)}`;
/** Two significant digits: 0.00043, 3.1e-7. */
const short = (value) => {
  if (value === 0) return "0";
  return Math.abs(value) < 1e-4 ? value.toExponential(1) : String(Number(value.toPrecision(2)));
};
const percent = (share, digits = 2) => `${(100 * share).toFixed(digits)}%`;
const grouped = (count) => String(count).replace(/\B(?=(\d{3})+$)/g, ",");

function goldCells(row, truth) {
  return ["spin", "orbital"].flatMap((moment) => {
    const { value, bar, plain } = row[moment];
    return [
      `${value.toFixed(1)} ± ${bar.toFixed(1)}`,
      signed(value - truth[moment], 1),
      signed(plain - truth[moment], 1),
    ];
  });
}

const goldHead = ["spin", "error", "plain sum's error", "orbital", "error", "plain sum's error", "samples"];

const gold = ({ gold: { rows, truth } }) =>
  table(
    ["mesh", ...goldHead],
    rows.map((row) => [`${row.mesh}³`, ...goldCells(row, truth), grouped(row.samples)]),
  );

const accuracy = ({ accuracy: { rows }, gold: { truth } }) =>
  table(
    ["`--accuracy`", ...goldHead.filter((words) => !words.startsWith("plain"))],
    rows.map((row) => [row.accuracy, ...goldCells(row, truth).filter((_, i) => i % 3 !== 2), grouped(row.samples)]),
  );

const curve = ({ curve: { runs } }) =>
  table(
    [
      "response (its maximum)",
      "`--accuracy`",
      "rms error",
      "mean bar",
      "plain sum's rms error",
      "within 1 bar",
      "within 2 bars",
      "samples",
    ],
    ["spin", "orbital"].flatMap((moment) =>
      runs.map(({ accuracy, samples, [moment]: found }) => [
        `${moment}:xy:z (${found.largest.toFixed(0)})`,
        accuracy,
        ...[found.rms, found.meanBar, found.rmsPlain].map((share) => percent(share)),
        ...[found.withinOneBar, found.withinTwoBars].map((share) => `${Math.round(share * 41)} of 41`),
        grouped(samples),
      ]),
    ),
  );

const dirac = ({ dirac: { rows } }) =>
  table(
    [
      "D (eV)",
      "closed form",
      "refined",
      "error",
      "bar",
      "plain sum's error",
      "samples",
      "plain points at step D/2",
      "their error",
    ],
    rows.map(({ mass, truth, value, bar, plain, samples, plainNeeded }) => [
      mass,
      truth.toFixed(6),
      value.toFixed(6),
      short(value - truth),
      short(bar),
      short(plain - truth),
      grouped(samples),
      grouped(plainNeeded.points),
      plainNeeded.error === undefined ? "not run" : short(plainNeeded.error),
    ]),
  );

/** The picture and results.json hold the meshes between. */
const tabledMeshes = [10, 20, 40];

const layer = ({ layer: { rows } }) =>
  table(
    ["level (eV)", "truth", "mesh", "refined", "error", "bar", "plain sum's error", "samples"],
    rows
      .filter(({ mesh }) => tabledMeshes.includes(mesh))
      .sort((a, b) => a.levelEv - b.levelEv || a.mesh - b.mesh)
      .map(({ levelEv, truth, mesh, value, bar, plain, samples }) => [
        levelEv,
        truth.toFixed(6),
        `${mesh}²`,
        value.toFixed(6),
        short(value - truth),
        short(bar),
        short(plain - truth),
        grouped(samples),
      ]),
  );

/** Renews the tables of README.md whose numbers exist. */
export function renewTables(results, directory) {
  const page = join(directory, "README.md");
  let text = readFileSync(page, "utf8");
  for (const [name, write] of Object.entries({ gold, accuracy, curve, dirac, layer })) {
    const block = new RegExp(`(<!-- ${name} -->\\n)[\\s\\S]*?(\\n<!-- /${name} -->)`);
    if (results[name]) text = text.replace(block, (_, before, after) => `${before}\n${write(results)}\n${after}`);
  }
  writeFileSync(page, text);
}
