// pack.ts: `tidegauge pack`: makes a band grid from arrays that exist, or packs one again in another form.
import type { Command } from "commander";
import { dataFault } from "../../base/errors.js";
import { cleanLine } from "../../report/clean.js";
import { packText } from "../../report/pack-text.js";
import type { InspectedGrid } from "../../studies/inspect-result.js";
import { pack, packOptions, packSource } from "../../studies/pack.js";
import { type Context, type GlobalOptions, requiredOut } from "../context.js";
import { validated } from "../validated.js";

const examples = `
FACTS.json has the fields of a band grid's manifest (data/format.md), with the arrays' files anywhere on disk: names count from
the directory of FACTS.json. What the headers of .npy files tell may be left out: type, axes, bands, and mesh.divisions where the
k axis is spelled out as (n1, n2, n3). Raw numbers need all of it. For example, with four .npy arrays of the shapes
(12, 12, 12, bands) and (12, 12, 12, 3, bands, bands):

  { "title": "fcc gold",
    "lattice": { "unit": "angstrom", "vectors": [[0, 2.04, 2.04], [2.04, 0, 2.04], [2.04, 2.04, 0]], "periodic": 3 },
    "electronsPerBand": 1,
    "level": { "unit": "eV", "fermi": 3.951, "electrons": 11 },
    "arrays": {
      "energy":   { "files": "/data/run7/e.npy", "unit": "eV" },
      "velocity": { "files": "/data/run7/dhdk.npy", "unit": "eV*angstrom" },
      "moments":  { "spin":    { "files": "/data/run7/s.npy", "unit": "hbar" },
                    "orbital": { "files": "/data/run7/l.npy", "unit": "hbar" } } } }

Examples:
  tidegauge pack --from facts.json --out gold --check
      makes the grid "gold" from the arrays, and inspects it at once; data/bringing-data.md says what to ask of a calculation
  tidegauge pack gold --precision single --out gold-single
      half the size; single precision is enough for the matrices, and energies stay as they are
  tidegauge pack gold --split --digests --out gold-split
      one file for each direction of a matrix, and a SHA-256 of every file
  tidegauge pack from-fortran --out canonical
      any order of axes, byte order and number of files becomes one little-endian file for each array, k slowest; every number
      reads back bit by bit, and patches come along

An existing --out is replaced only where it is a band grid that this program wrote, without patches, and when the new one is complete.
Exit status 3 when the data have a hard fault: the grid is then not written, or, with --check, written and named unsound.`;

/** Adds the command to the program. */
export function register(program: Command, context: Context): void {
  const command = program
    .command("pack")
    .description("Make a band grid from arrays that exist, or pack one again in another form.")
    .argument("[GRID]", "a band grid to pack again")
    .option("--from <FACTS.json>", "describes arrays to make a grid from")
    .option("--precision <WIDTH>", "single or double: width of the numbers; as they are where left out")
    .option("--split", "one file for each direction: a response then reads only what it needs")
    .option("--order <AXIS...>", "order of the matrices' axes, slowest first (default k direction bra ket)")
    .option("--full", "write the full mesh of a symmetry-reduced grid, which stays reduced otherwise")
    .option("--digests", "write a SHA-256 of every file into the manifest")
    .option("--check", "inspect the result at once")
    .addHelpText("after", examples);
  command.action(async (grid: string | undefined) => {
    const { from, ...raw } = command.opts<{ from?: string }>();
    const options = validated(packOptions, raw, "pack");
    const source = packSource(grid, from);
    const globals = command.optsWithGlobals<GlobalOptions>();
    const out = requiredOut(globals);
    const progress = context.progress("packing");
    try {
      const result = await pack(source, out, options, {
        onProgress: (done, total) => progress.advance(done, total),
        signal: context.interruption(),
      });
      progress.end();
      if (globals.json) context.terminal.printJson(result);
      else context.terminal.print(packText(result, Math.max(80, context.terminal.columns)));
      if (result.check !== null) refuseUnsound(result.check);
    } finally {
      progress.end();
    }
  });
}

/** Throws the first fault of a grid that was written but is not sound. */
function refuseUnsound({ sound, directory, faults }: InspectedGrid): void {
  if (!sound) throw dataFault(`${cleanLine(directory)}: ${faults[0].message}`, faults[0].cure);
}
