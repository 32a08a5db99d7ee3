// box-reader.ts: what does weight spread over a box count for, where every node of the axis counts for a given part?
import type { NodeAxis } from "./axis.js";
import { createBoxShaper, createBoxStore } from "./boxes.js";

/** Part that counts of a band at `energyEv` whose cell spans `widthsEv`: 0 to 1 where the nodes' parts are. */
export type BoxReader = (energyEv: number, widthsEv: Float64Array) => number;

/** Value of a node, for which the base stands below the axis and nothing above it. */
const partAt = (parts: Float64Array, node: number): number => (node < 0 ? 1 : node < parts.length ? parts[node] : 0);

/**
 * The transpose of depositing and settling boxes: reading every deposit off `parts` [node] (the base counts for 1) and summing is the same as
 * summing the deposits and reading the nodes. On a coarser copy of the axis a node counts for what its halves and quarters count for.
 */
export function createBoxReader(axis: NodeAxis, parts: Float64Array): BoxReader {
  const shaper = createBoxShaper(axis);
  const copies = createBoxStore(axis, 1).copies.map((copy) => new Float64Array(copy.length));
  for (const [k, copy] of copies.entries())
    for (let node = 0; node < copy.length; node++) {
      const finer = copies[k - 1];
      copy[node] =
        finer === undefined
          ? partAt(parts, node)
          : partAt(finer, 2 * node - 1) / 4 + partAt(finer, 2 * node) / 2 + partAt(finer, 2 * node + 1) / 4;
    }
  return (energyEv, widthsEv) => {
    const shape = shaper(energyEv, widthsEv);
    if (shape.side !== 0) return shape.side < 0 ? 1 : 0;
    const copy = copies[shape.copy];
    let sum = 0;
    for (let e = 0; e < shape.entries; e++) sum += shape.weight[e] * partAt(copy, shape.first + e);
    return sum;
  };
}
