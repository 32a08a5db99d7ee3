// patch.ts: samples a model at the points of a patch, inside the grid that the model made, and lists the patch there.
import { basename, dirname, resolve } from "node:path";
import { usageFault } from "../base/errors.js";
import type { PatchCells } from "../grid/grid.js";
import { listPatch } from "../grid/list-patch.js";
import { type Grid, openGrid } from "../grid/open.js";
import { openReader } from "../grid/reader.js";
import { reciprocalVectors } from "../zone/lattice.js";
import { cartesianK, fractionalK } from "../zone/mesh.js";
import { createSampler } from "./eigenbasis.js";
import type { SampleModel } from "./model.js";
import { type WriteProgress, writeSample } from "./write.js";

/** Energies of the model and of the grid may differ by so much, eV: the grid may be stored in single precision. */
const sameEnergyEv = 1e-4;

/** Throws a usage Fault where the grid does not hold this model: its first k point is computed again and compared. */
function checkParent(model: SampleModel, parent: Grid): void {
  const { facts } = parent;
  const fail = (why: string): never => {
    throw usageFault(
      `the grid in ${facts.directory} was not made from this model with these parameters: ${why}`,
      "Name the model and set the parameters with which the grid was made.",
    );
  };
  if (model.bands !== facts.bands) fail(`it has ${facts.bands} bands, the model ${model.bands}`);
  const reader = openReader(parent, { velocity: [], moments: [], hessian: false });
  const { energyEv } = reader.read(0, 1);
  reader.close();
  const k = cartesianK(fractionalK(0, facts), reciprocalVectors(facts.vectorsA));
  const own = createSampler(model, "none")(k).energyEv;
  const off = energyEv.findIndex((energy, band) => !(Math.abs(energy - own[band]) <= sameEnergyEv));
  if (off >= 0) fail(`at its first k point band ${off} lies at ${energyEv[off]} eV, the model's at ${own[off]} eV`);
}

/**
 * Writes the patch `directory`, which lies in the directory of a grid made from the same model, and lists it in that grid's
 * manifest. Undefined where `onProgress` stopped it. Throws usage and data Faults, and changes nothing then.
 */
export function writePatch(
  model: SampleModel,
  directory: string,
  patch: Omit<PatchCells, "name">,
  onProgress?: WriteProgress,
): Grid | undefined {
  const path = resolve(directory);
  const parent = openGrid(dirname(path));
  checkParent(model, parent);
  const { divisions, offset, hessian } = parent.facts;
  const options = { directory: path, divisions, offset, patch, hessian: hessian !== "none" };
  const written = writeSample(model, options, onProgress);
  if (written !== undefined) listPatch(dirname(path), basename(path));
  return written;
}
