// tally.ts: one spectrum kept twice: for the whole mesh on the fine axis, and per contained sub-mesh on a coarse axis (error bars).
import { coarseNodes, type LevelAxis } from "../spectrum/axis.js";
import { type BoxStore, createBoxShaper, createBoxStore, depositShape, settleBoxes } from "../spectrum/boxes.js";
import { createPointDeposit, createPointStore } from "../spectrum/points.js";
import type { Sections } from "../spectrum/sections.js";

/** Deposits a band's columns: at its energy, spread over the widths its cell spans, for one sub-mesh. */
export interface Tally {
  add(energyEv: number, widthsEv: Float64Array, values: Float64Array, subMesh: number): void;
  /** The arrays kept, under `name.`; ends the tally. */
  finish(into: Sections, name: string): void;
}

/** Sub-mesh spectra: one coarse box store each. */
function createSubTallies(axis: LevelAxis, columns: number, subMeshes: number) {
  const nodes = coarseNodes(axis);
  const stores: BoxStore[] = Array.from({ length: subMeshes }, () => createBoxStore(nodes, columns));
  const shaper = createBoxShaper(nodes);
  return {
    add(energyEv: number, widthsEv: Float64Array, values: Float64Array, subMesh: number): void {
      if (subMeshes > 0) depositShape(stores[subMesh], shaper(energyEv, widthsEv), values);
    },
    finish(into: Sections, name: string): void {
      for (const [i, store] of stores.entries()) {
        settleBoxes(store);
        into[`${name}.sub${i}.base`] = store.base;
        into[`${name}.sub${i}.nodes`] = store.copies[0];
      }
    },
  };
}

/** The plain mesh sum: widths are ignored. */
export function createPointTally(axis: LevelAxis, columns: number, subMeshes: number): Tally {
  const store = createPointStore(axis, columns);
  const deposit = createPointDeposit(store);
  const subs = createSubTallies(axis, columns, subMeshes);
  const none = new Float64Array(0);
  return {
    add(energyEv, _widthsEv, values, subMesh) {
      deposit(energyEv, values);
      subs.add(energyEv, none, values, subMesh);
    },
    finish(into, name) {
      into[`${name}.base`] = store.base;
      into[`${name}.steps`] = store.steps;
      into[`${name}.nodes`] = store.nodes;
      subs.finish(into, name);
    },
  };
}

/** Bands continued linearly through their cells. */
export function createBoxTally(axis: LevelAxis, columns: number, subMeshes: number): Tally {
  const store = createBoxStore(axis.nodes, columns);
  const shaper = createBoxShaper(axis.nodes);
  const subs = createSubTallies(axis, columns, subMeshes);
  return {
    add(energyEv, widthsEv, values, subMesh) {
      depositShape(store, shaper(energyEv, widthsEv), values);
      subs.add(energyEv, widthsEv, values, subMesh);
    },
    finish(into, name) {
      settleBoxes(store);
      into[`${name}.base`] = store.base;
      into[`${name}.nodes`] = store.copies[0];
      subs.finish(into, name);
    },
  };
}
