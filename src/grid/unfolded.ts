// unfolded.ts: reads a reduced grid as the full mesh: every point's matrices turned from those of its star's stored point.
import {
  type Block,
  type BlockReader,
  type GridFacts,
  hessianPairs,
  type MatrixBlock,
  type MomentFacts,
} from "./grid.js";
import { createKeeper } from "./kept.js";
import { checkRange } from "./range.js";
import type { Unfolding } from "./stars.js";
import { determinant, type KOperation, type Rows } from "./symmetry.js";

/** out component = sum of factor times component; conjugated under time reversal. */
type Mixing = readonly (readonly number[])[];

const timesRows = (rotation: Rows, factor: number): Mixing => rotation.map((row) => row.map((x) => factor * x));

/** d2H/dk_a dk_b turns as a tensor: R R W; a mixed pair stands for both orders. */
function pairMixing(r: Rows): Mixing {
  return hessianPairs.map(([a, b]) =>
    hessianPairs.map(([c, d]) => (c === d ? r[a][c] * r[b][c] : r[a][c] * r[b][d] + r[a][d] * r[b][c])),
  );
}

/**
 * How the components of a moment turn. Axial ones keep their sign under inversion; time reversal adds the sign of the moment (its
 * complex conjugation is done on the numbers).
 */
function momentMixing({ kind, underTimeReversal }: MomentFacts, { rotation, timeReversal }: KOperation): Mixing {
  const reversed = timeReversal && underTimeReversal === "odd" ? -1 : 1;
  if (kind === "scalar") return [[reversed]];
  return timesRows(rotation, reversed * (kind === "axial" ? Math.sign(determinant(rotation)) : 1));
}

/** Mixings of one operation, by array. */
interface Turning {
  readonly conjugate: boolean;
  readonly velocity: Mixing;
  readonly hessian: Mixing;
  readonly moments: ReadonlyMap<string, Mixing>;
}

function turningOf(operation: KOperation, facts: GridFacts): Turning {
  const { rotation, timeReversal } = operation;
  return {
    conjugate: timeReversal,
    // k' = -R k under time reversal, and dH/dk' gets the sign with it.
    velocity: timesRows(rotation, timeReversal ? -1 : 1),
    hessian: pairMixing(rotation),
    moments: new Map(facts.moments.map((moment) => [moment.name, momentMixing(moment, operation)])),
  };
}

/** Which stored components the wanted ones need: all, where any is wanted and the moment has directions. */
export const neededDirections = (wanted: readonly number[], directions: number): number[] =>
  wanted.length === 0 ? [] : Array.from({ length: directions }, (_, direction) => direction);

/** A reader of the full mesh over a reader of the stored points, which must give every component of what is wanted. It closes that. */
export function unfoldedReader(
  stored: BlockReader,
  facts: GridFacts,
  { operations, storedOf, operationOf }: Unfolding,
): BlockReader {
  const turnings = operations.map((operation) => turningOf(operation, facts));
  const size = 2 * facts.bands ** 2;
  const pointOf = createKeeper(stored);
  const memory = new Map<string, Float64Array>();
  const memoryOf = (key: string, count: number): Float64Array => {
    const known = memory.get(key);
    if (known !== undefined && known.length >= count * size) return known;
    const fresh = new Float64Array(count * size);
    memory.set(key, fresh);
    return fresh;
  };
  const turnAll = (
    name: string,
    from: readonly (MatrixBlock | undefined)[],
    mixing: Mixing,
    conjugate: boolean,
    at: { readonly index: number; readonly count: number },
  ): MatrixBlock[] =>
    mixing.map((factors, component) => {
      const data = memoryOf(`${name}/${component}`, at.count);
      mix(from, factors, conjugate, data.subarray(at.index * size, (at.index + 1) * size));
      return { data, offset: 0, stride: size };
    });
  return {
    facts,
    read(first, count) {
      checkRange(first, count, storedOf.length);
      const energyEv = new Float64Array(count * facts.bands);
      let made: Omit<Block, "first" | "count" | "energyEv"> | undefined;
      for (let i = 0; i < count; i++) {
        const block = pointOf(storedOf[first + i]);
        const { velocity, hessian, moments, conjugate } = turnings[operationOf[first + i]];
        const at = { index: i, count };
        energyEv.set(block.energyEv, i * facts.bands);
        made = {
          bands: facts.bands,
          velocity: block.velocity[0] ? turnAll("velocity", block.velocity, velocity, conjugate, at) : block.velocity,
          moments: new Map(
            [...block.moments].map(([name, matrices]) => [
              name,
              turnAll(`moments.${name}`, matrices, moments.get(name) ?? [], conjugate, at),
            ]),
          ),
          hessian: block.hessian && turnAll("hessian", block.hessian, hessian, conjugate, at),
        };
      }
      return { ...(made as Omit<Block, "first" | "count" | "energyEv">), first, count, energyEv };
    },
    close: () => stored.close(),
  };
}

/** out = sum of factor times matrix, conjugated where time is reversed. */
function mix(
  from: readonly (MatrixBlock | undefined)[],
  factors: readonly number[],
  conjugate: boolean,
  out: Float64Array,
): void {
  const sign = conjugate ? -1 : 1;
  // Most operations of a crystal take one component to one other: the first term is written, not added.
  let isFirst = true;
  for (const [component, factor] of factors.entries()) {
    const matrix = from[component];
    if (factor === 0 || matrix === undefined) continue;
    const { data, offset } = matrix;
    const imaginary = sign * factor;
    if (isFirst)
      for (let i = 0; i < out.length; i += 2) {
        out[i] = factor * data[offset + i];
        out[i + 1] = imaginary * data[offset + i + 1];
      }
    else
      for (let i = 0; i < out.length; i += 2) {
        out[i] += factor * data[offset + i];
        out[i + 1] += imaginary * data[offset + i + 1];
      }
    isFirst = false;
  }
  if (isFirst) out.fill(0);
}
