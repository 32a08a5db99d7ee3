// calibrate.mjs: do error bars of refined sweeps hold? Random crystals on a coarse mesh against the same crystals on a fine one.
// node data/study/calibrate.mjs FROM TO: crystals FROM to TO - 1, one line of JSON each on stdout; needs a build (npm ci).
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { buildSample, sweep, sweepOptions, writeSample } from "../../dist/index.js";

const pick = (list, i) => list[i % list.length];

/** Every second crystal is a layer; bands, symmetry, spin-orbit strength, mesh and temperature go round; from the 80th on all are at 50 K. */
function crystal(i) {
  const layer = i % 2 === 1;
  const round = i >> 1;
  return {
    crystal: i,
    periodic: layer ? 2 : 3,
    bands: pick(layer ? [4, 6, 8, 12, 18] : [4, 6, 4, 4, 6], round),
    symmetry: pick(["none", "time-reversal", "both", "inversion"], round),
    spinOrbitEv: pick([0.4, 0.8, 0.6], i),
    divisions: layer ? pick([12, 16, 20, 24], i >> 2) : 8,
    temperatureK: i < 80 ? pick([100, 300, 200, 1000], round) : 50,
  };
}

async function curves(model, divisions, { periodic, temperatureK }, shift, accuracy, samples) {
  const directory = mkdtempSync(join(tmpdir(), "calibrate-"));
  try {
    writeSample(model, {
      directory: join(directory, "grid"),
      divisions: periodic === 3 ? [divisions, divisions, divisions] : [divisions, divisions, 1],
    });
    const ask = (from, to, method) =>
      sweep(
        join(directory, "grid"),
        sweepOptions.parse({
          response: ["charge:xy", "spin:xy:z", "orbital:xy:z"],
          from,
          to,
          points: 13,
          temperature: [temperatureK],
          accuracy,
          samples,
          method,
        }),
        { workers: 1 },
      );
    if (shift === undefined) return await ask(-1.5, 1.5, "refine");
    // The same absolute levels, although the fine mesh finds a reference level of its own.
    const own = (await ask(-1.5, 1.5, "points")).reference_eV;
    return await ask(shift - own - 1.5, shift - own + 1.5, "refine");
  } finally {
    rmSync(directory, { recursive: true, force: true });
  }
}

const [from, to] = process.argv.slice(2).map(Number);
for (let i = from; i < to; i++) {
  const facts = crystal(i);
  const { bands, periodic, symmetry, spinOrbitEv, divisions } = facts;
  const model = buildSample("random", {
    seed: String(1000 + i),
    bands: String(bands),
    periodic: String(periodic),
    symmetry,
    soc: String(spinOrbitEv),
  });
  const coarse = await curves(model, divisions, facts, undefined, 0.01, 40_000);
  const fine = await curves(model, divisions * (periodic === 3 ? 2 : 4), facts, coarse.reference_eV, 0.004, 150_000);
  const responses = coarse.responses.map(({ name, value, error, error_sampling, error_model, points }, r) => ({
    name,
    largest: Math.max(...fine.responses[r].value[0].map(Math.abs)),
    error: value[0].map((found, level) => found - fine.responses[r].value[0][level]),
    bar: error[0],
    sampling: error_sampling[0],
    model: error_model[0],
    truthBar: fine.responses[r].error[0],
    plainError: points[0].map((found, level) => found - fine.responses[r].value[0][level]),
  }));
  process.stdout.write(`${JSON.stringify({ ...facts, samples: coarse.sampling.samples, responses })}\n`);
}
