// view.ts: a sub-mesh that a stored mesh contains, read as if it were a grid of its own: every s-th point, from a shifted start.
import { usageFault } from "../base/errors.js";
import type { Block, BlockReader, GridFacts, MatrixBlock, Triple, View } from "./grid.js";

const goldenPart = (Math.sqrt(5) - 1) / 2;

const whole: View = { stride: 1, shift: [0, 0, 0] };

/** The same facts for the points of a view: fewer divisions, another offset. Throws a usage Fault where the stride does not divide the mesh. */
export function viewFacts(facts: GridFacts, view: View): GridFacts {
  const { stride, shift } = view;
  const active = [0, 1, 2].map((j) => j < facts.periodic);
  const sound = (j: number): boolean =>
    active[j]
      ? facts.divisions[j] % stride === 0 && Number.isInteger(shift[j]) && shift[j] >= 0 && shift[j] < stride
      : shift[j] === 0;
  if (!Number.isInteger(stride) || stride < 1 || ![0, 1, 2].every(sound))
    throw usageFault(
      `a mesh of ${facts.divisions.join(" x ")} points contains no sub-mesh of stride ${stride} from (${shift.join(", ")})`,
      "Name a stride that divides every periodic direction, and a start below it.",
    );
  const along = (at: (j: 0 | 1 | 2) => number, still: Triple): Triple =>
    ([0, 1, 2] as const).map((j) => (active[j] ? at(j) : still[j])) as unknown as Triple;
  return {
    ...facts,
    view,
    divisions: along((j) => facts.divisions[j] / stride, facts.divisions),
    offset: along((j) => (facts.offset[j] + shift[j]) / stride, facts.offset),
    points: facts.points / stride ** facts.periodic,
  };
}

/** The facts of the stored mesh that a view belongs to; facts without a view as they are. */
export function storedFacts(facts: GridFacts): GridFacts {
  const { view, ...rest } = facts;
  if (view === undefined) return facts;
  const active = (j: number): boolean => j < facts.periodic;
  const { stride, shift } = view;
  return {
    ...rest,
    divisions: facts.divisions.map((n, j) => (active(j) ? n * stride : n)) as unknown as Triple,
    offset: facts.offset.map((x, j) => (active(j) ? x * stride - shift[j] : x)) as unknown as Triple,
    points: facts.points * stride ** facts.periodic,
  };
}

/** Stored index of a view's point; `divisions` are the view's. */
function storedIndex(flat: number, divisions: Triple, periodic: number, { stride, shift }: View): number {
  const s3 = periodic === 3 ? stride : 1;
  const i3 = flat % divisions[2];
  const rest = Math.floor(flat / divisions[2]);
  const [i1, i2] = [Math.floor(rest / divisions[1]), rest % divisions[1]];
  const row = (i1 * stride + shift[0]) * divisions[1] * stride + i2 * stride + shift[1];
  return row * divisions[2] * s3 + i3 * s3 + shift[2];
}

/** Memory for the matrices of one component, grown as needed and used again. */
function createStack(size: number) {
  let data = new Float64Array(0);
  return (count: number): Float64Array => {
    if (data.length < count * size) data = new Float64Array(count * size);
    return data;
  };
}

/** A reader of the view's points, in the view's order, over a reader of all points, which it closes. `facts` are the view's. */
export function viewReader(stored: BlockReader, facts: GridFacts): BlockReader {
  const view = facts.view ?? whole;
  const size = 2 * facts.bands ** 2;
  const stacks = new Map<string, (count: number) => Float64Array>();
  const stackOf = (key: string, count: number): Float64Array => {
    const stack = stacks.get(key) ?? createStack(size);
    stacks.set(key, stack);
    return stack(count);
  };
  return {
    facts,
    read(first, count) {
      const energyEv = new Float64Array(count * facts.bands);
      let shape: Block | undefined;
      for (let i = 0; i < count; i++) {
        const block = stored.read(storedIndex(first + i, facts.divisions, facts.periodic, view), 1);
        energyEv.set(block.energyEv.subarray(0, facts.bands), i * facts.bands);
        shape = mapMatrices(block, (matrix, key): MatrixBlock => {
          const data = stackOf(key, count);
          data.set(matrix.data.subarray(matrix.offset, matrix.offset + size), i * size);
          return { data, offset: 0, stride: size };
        });
      }
      return { ...(shape as Block), first, count, energyEv };
    },
    close: () => stored.close(),
  };
}

/** The block with every matrix replaced. */
function mapMatrices(block: Block, change: (matrix: MatrixBlock, key: string) => MatrixBlock): Block {
  const all = (name: string, matrices: readonly (MatrixBlock | undefined)[]): (MatrixBlock | undefined)[] =>
    matrices.map((matrix, at) => (matrix === undefined ? undefined : change(matrix, `${name}/${at}`)));
  return {
    ...block,
    velocity: all("velocity", block.velocity),
    moments: new Map([...block.moments].map(([name, matrices]) => [name, all(`moments.${name}`, matrices)])),
    hessian: block.hessian && (all("hessian", block.hessian) as MatrixBlock[]),
  };
}

/** Strides (above 1, ascending) that divide the mesh along every periodic direction and leave at least `least` points along each. */
export function containedStrides({ divisions, periodic }: GridFacts, least: number): number[] {
  const active = divisions.slice(0, periodic);
  const most = Math.floor(Math.min(...active) / least);
  return Array.from({ length: Math.max(0, most - 1) }, (_, i) => i + 2).filter((s) => active.every((n) => n % s === 0));
}

const greatestDivisor = (a: number, b: number): number => (b === 0 ? a : greatestDivisor(b, a % b));

/**
 * Views of one stride: all shifts where there are at most `most`, else `most` of them, spread evenly by steps of the golden section, in
 * no step with the mesh. The unshifted one comes first. Depends on its arguments alone.
 */
export function viewsOf({ periodic }: GridFacts, stride: number, most: number): View[] {
  const total = stride ** periodic;
  let step = Math.max(1, Math.round(total * goldenPart));
  while (greatestDivisor(step, total) !== 1) step++;
  return Array.from({ length: Math.min(total, most) }, (_, i): View => {
    const flat = (i * step) % total;
    const [fast, middle, slow] = [flat % stride, Math.floor(flat / stride) % stride, Math.floor(flat / stride ** 2)];
    return { stride, shift: periodic === 3 ? [slow, middle, fast] : [middle, fast, 0] };
  });
}
