// blocks.ts: walks the stored points of a task in blocks of bounded memory, handing each point to a visitor as the kernels see it.
import type { Block, BlockReader, MatrixBlock } from "../grid/grid.js";
import type { MatrixRef, PointRef } from "../kernel/kernel.js";
import type { Task } from "./job.js";

/** Numbers (8 bytes) of one block: 8 MB, which stays in the outer cache and is read at full speed. */
const numbersPerBlock = 1 << 20;

interface MovableRef extends MatrixRef {
  offset: number;
}

const movable = (matrix: MatrixBlock): MovableRef => ({ data: matrix.data, offset: matrix.offset });

/** A PointRef over the block whose offsets move from point to point, so that nothing is allocated per point. */
function pointOver(block: Block, moments: readonly { name: string; direction: number }[]) {
  const sources: { ref: MovableRef; matrix: MatrixBlock }[] = [];
  const track = (matrix: MatrixBlock): MovableRef => {
    const ref = movable(matrix);
    sources.push({ ref, matrix });
    return ref;
  };
  const point = {
    bands: block.bands,
    energyEv: block.energyEv,
    energyOffset: 0,
    velocity: block.velocity.map((matrix) => (matrix === undefined ? undefined : track(matrix))),
    moments: moments.map(({ name, direction }) => track(block.moments.get(name)?.[direction] as MatrixBlock)),
    hessian: block.hessian?.map(track),
  } satisfies PointRef;
  const moveTo = (i: number): void => {
    point.energyOffset = i * block.bands;
    for (const { ref, matrix } of sources) ref.offset = matrix.offset + i * matrix.stride;
  };
  return { point, moveTo };
}

/** Calls `visit(flat index, point)` for every stored point of the task, in order. The point is valid during the call only. */
export function walkPoints(
  reader: BlockReader,
  task: Task,
  moments: readonly { name: string; direction: number }[],
  visit: (flat: number, point: PointRef) => void,
): void {
  const { bands } = reader.facts;
  const matrices = 3 + moments.length + 6;
  const perBlock = Math.max(1, Math.floor(numbersPerBlock / (2 * bands * bands * matrices)));
  for (let done = 0; done < task.count; done += perBlock) {
    const block = reader.read(task.first + done, Math.min(perBlock, task.count - done));
    const { point, moveTo } = pointOver(block, moments);
    for (let i = 0; i < block.count; i++) {
      moveTo(i);
      visit(block.first + i, point);
    }
  }
}
