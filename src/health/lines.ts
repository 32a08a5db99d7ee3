// lines.ts: which runs of neighbouring mesh points does a health check look at, and what is stored there? Bounded memory.
import type { Block, BlockReader, GridFacts, MatrixBlock, Triple } from "../grid/grid.js";
import type { Grid } from "../grid/open.js";
import { openUncheckedReader, wantAll } from "../grid/reader.js";
import { cellEdges, fractionalK } from "../zone/mesh.js";

/** A stored point, copied: matrices [bra][ket] complex interleaved, canonical units. */
export interface HealthPoint {
  readonly flat: number;
  readonly fractional: Triple;
  readonly energyEv: Float64Array;
  /** x, y, z. */
  readonly velocity: readonly Float64Array[];
  readonly moments: ReadonlyMap<string, readonly Float64Array[]>;
  /** xx, yy, zz, yz, zx, xy; undefined where no array is stored. */
  readonly hessian: readonly Float64Array[] | undefined;
}

/** Consecutive points of the mesh along edge `edge`, not across the end of the zone: a continuum cut to a box does not close there. */
export interface HealthLine {
  readonly edge: number;
  /** b_edge / n_edge, Cartesian, 1/angstrom. */
  readonly step: Triple;
  readonly points: readonly HealthPoint[];
}

/** How much is looked at: lines along each edge, and points of a line. */
export interface HealthEffort {
  readonly linesPerEdge: number;
  readonly pointsPerLine: number;
}

/** Reads single points of one grid. */
export interface PointSource {
  readonly facts: GridFacts;
  point(flat: number): HealthPoint;
  /** Energies alone: cheap; undefined index outside the grid is the caller's mistake. */
  energies(flat: number): Float64Array;
  close(): void;
}

const copyOf = ({ data, offset }: MatrixBlock, bands: number): Float64Array =>
  data.slice(offset, offset + 2 * bands * bands);

function copied(block: Block, facts: GridFacts, flat: number): HealthPoint {
  const { bands } = block;
  const all = (matrices: readonly (MatrixBlock | undefined)[]): Float64Array[] =>
    matrices.map((matrix) => copyOf(matrix as MatrixBlock, bands));
  return {
    flat,
    fractional: fractionalK(flat, facts),
    energyEv: block.energyEv.slice(0, bands),
    velocity: all(block.velocity),
    moments: new Map([...block.moments].map(([name, matrices]) => [name, all(matrices)])),
    hessian: block.hessian && all(block.hessian),
  };
}

/** Opens a source of single points; close it. */
export function openPoints(grid: Grid): PointSource {
  const { facts } = grid;
  const whole: BlockReader = openUncheckedReader(grid, wantAll(grid));
  const bare: BlockReader = openUncheckedReader(grid, { velocity: [], moments: [], hessian: false });
  return {
    facts,
    point: (flat) => copied(whole.read(flat, 1), facts, flat),
    energies: (flat) => bare.read(flat, 1).energyEv.slice(0, facts.bands),
    close() {
      whole.close();
      bare.close();
    },
  };
}

const golden = [0.7548776662466927, 0.5698402909980532, 0.618033988749895];

/** The i-th of a sequence of numbers that fill 0 .. n - 1 evenly, its own for each axis. */
const spread = (i: number, axis: number, n: number): number => Math.floor(((0.37 + i * golden[axis]) % 1) * n);

/** What a difference of sixth order takes; lower orders say too little. */
const shortest = 5;

/** First points and edges of the lines to look at; the same for the same mesh. Edges with fewer than 5 points have none. */
export function planLines(
  { divisions, periodic }: GridFacts,
  effort: HealthEffort,
): { flats: number[]; edge: number }[] {
  const lines: { flats: number[]; edge: number }[] = [];
  for (let edge = 0; edge < periodic; edge++) {
    const count = Math.min(divisions[edge], effort.pointsPerLine);
    if (count < shortest) continue;
    const taken = new Set<number>();
    for (let i = 0; i < effort.linesPerEdge; i++) {
      const at = [0, 1, 2].map((axis) =>
        spread(i + 1, axis, axis === edge ? divisions[axis] - count + 1 : divisions[axis]),
      );
      const flats = Array.from({ length: count }, (_, s) => {
        const index = at.map((place, axis) => (axis === edge ? place + s : place));
        return (index[0] * divisions[1] + index[1]) * divisions[2] + index[2];
      });
      if (!taken.has(flats[0])) lines.push({ flats, edge });
      taken.add(flats[0]);
    }
  }
  return lines;
}

/** Hands one line after another to `visit`; only one is held at a time. */
export function visitLines(source: PointSource, effort: HealthEffort, visit: (line: HealthLine) => void): void {
  const steps = cellEdges(source.facts);
  for (const { flats, edge } of planLines(source.facts, effort))
    visit({ edge, step: steps[edge], points: flats.map((flat) => source.point(flat)) });
}
