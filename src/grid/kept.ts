// kept.ts: which stored points are still in memory? The images of one point come one after another, and it is read once for many.
import type { Block, BlockReader, MatrixBlock } from "./grid.js";

/** Memory for points that are kept. */
const keptBytes = 64 * 1024 * 1024;

/** Every matrix of a block, in a fixed order. */
const matricesOf = ({ velocity, moments, hessian = [] }: Block): readonly MatrixBlock[] =>
  [...velocity, ...[...moments.values()].flat(), ...hessian].filter((matrix) => matrix !== undefined);

/** A block of one point on memory of its own, not yet filled, for what `like` holds. */
function blockLike(like: Block): Block {
  const size = 2 * like.bands ** 2;
  const own = (matrix: MatrixBlock | undefined): MatrixBlock | undefined =>
    matrix && { data: new Float64Array(size), offset: 0, stride: size };
  return {
    ...like,
    count: 1,
    energyEv: new Float64Array(like.bands),
    velocity: like.velocity.map(own),
    moments: new Map([...like.moments].map(([name, matrices]) => [name, matrices.map(own)])),
    hessian: like.hessian?.map(own) as MatrixBlock[] | undefined,
  };
}

function copyPoint(from: Block, to: Block): void {
  const size = 2 * from.bands ** 2;
  to.energyEv.set(from.energyEv.subarray(0, from.bands));
  const targets = matricesOf(to);
  for (const [i, { data, offset }] of matricesOf(from).entries())
    targets[i].data.set(data.subarray(offset, offset + size));
}

/**
 * Point `index` of a reader as a block of its own: from memory where it was read not long ago, at most `mostBytes` of them being kept
 * (at least one). The block is valid until the next call.
 */
export function createKeeper(stored: BlockReader, mostBytes = keptBytes): (index: number) => Block {
  // In order of last use: a Map keeps the order in which keys were set.
  const kept = new Map<number, Block>();
  const placeFor = (fresh: Block): Block => {
    const bytes = 8 * (fresh.bands + matricesOf(fresh).length * 2 * fresh.bands ** 2);
    if ((kept.size + 1) * bytes <= mostBytes || kept.size === 0) return blockLike(fresh);
    const [oldest, block] = kept.entries().next().value as [number, Block];
    kept.delete(oldest);
    return block;
  };
  return (index) => {
    let block = kept.get(index);
    if (block === undefined) {
      const fresh = stored.read(index, 1);
      block = placeFor(fresh);
      copyPoint(fresh, block);
    } else kept.delete(index);
    kept.set(index, block);
    return block;
  };
}
