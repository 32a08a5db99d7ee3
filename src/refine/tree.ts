// tree.ts: halves a cell again and again where parent and children disagree; sees a function of t and a norm, nothing of bands.

/** What is known of one box: filled by the caller's `evaluate`. Edge coordinates, [-1/2, 1/2]^d for the whole cell. */
export interface Sample {
  /** Where the box is sampled. */
  readonly t: Float64Array;
  /** The middle of the box. */
  readonly centre: Float64Array;
}

/** Turns about the axes, radians, that keep samples off every line and plane of symmetry through a box. */
const turns = [0.16, -0.11, 0.08];

function rotate(point: number[], a: number, b: number, angle: number): void {
  const [x, y] = [point[a], point[b]];
  point[a] = Math.cos(angle) * x - Math.sin(angle) * y;
  point[b] = Math.sin(angle) * x + Math.cos(angle) * y;
}

/**
 * Where the 2^d halves of a unit box are sampled: their middles, turned a little about the middle of the box. Like them the places come in
 * opposite pairs and have the second moment 1/16 (a quarter less than the box has); but none lies on a line or plane on which a
 * crystal's symmetry makes bands touch, where a single sample would stand for far too much.
 */
export function samplePattern(dimension: 2 | 3): number[][] {
  return Array.from({ length: 1 << dimension }, (_, corner) => {
    const point = Array.from({ length: dimension }, (_unused, j) => (corner & (1 << j) ? 0.25 : -0.25));
    rotate(point, 0, 1, turns[0]);
    if (dimension === 3) {
      rotate(point, 1, 2, turns[1]);
      rotate(point, 2, 0, turns[2]);
    }
    return point;
  });
}

/** A box and the 2^d boxes it was halved into. Depth 0 is the whole cell; a child has depth + 1 and volume 2^(-d (depth + 1)). */
export interface Family<S extends Sample> {
  readonly parent: S;
  readonly children: readonly S[];
  /** Depth of the parent. */
  readonly depth: number;
}

/**
 * Weight of a child in its family's straight-line guess of what was found where the parent was sampled, times the number of children:
 * parent and children are compared there. The children's places have the second moment 1/16, so that the fitted slope is 16 times
 * their mean of place times value. `depth` is the parent's.
 */
export function guessShare(parent: Sample, child: Sample, depth: number): number {
  let product = 0;
  for (let j = 0; j < parent.t.length; j++)
    product += (parent.t[j] - parent.centre[j]) * (child.t[j] - parent.centre[j]);
  return 1 + 16 * product * 4 ** depth;
}

/** Second moments, per direction: of a box of size 1, and of the places where its halves are sampled. */
const boxMoment = 1 / 12;
const familyMoment = 1 / 16;

/**
 * Richardson's extrapolation of a family: the weight of the parent's value, such that with `childWeight` the second moments of the
 * box come out; -1/3 where the parent was sampled in its middle. Exact for cubics then; off the middle up to the small
 * part of a quadratic that differs between directions.
 */
export function parentWeight({ t, centre }: Sample, depth: number): number {
  let offset = 0;
  for (let j = 0; j < t.length; j++) offset += ((t[j] - centre[j]) ** 2 * 4 ** depth) / t.length;
  return -(boxMoment - familyMoment) / (familyMoment - offset);
}

/** Weight of a child in the extrapolation, times the number of children: the middle is the parent's value less the fitted slope's part. */
export const childWeight = (parent: Sample, child: Sample, depth: number): number =>
  1 - parentWeight(parent, depth) * guessShare(parent, child, depth);

/** What the tree is told by its caller. */
export interface TreeRules<S extends Sample> {
  readonly dimension: 2 | 3;
  readonly depthLimit: number;
  readonly create: () => S;
  /** Fills a sample whose `t` is set. */
  readonly evaluate: (sample: S) => void;
  /** True where the children are not good enough and must be halved themselves. */
  readonly disagrees: (family: Family<S>) => boolean;
  /** Takes a family whose children are final. `resolved` is false where a limit ended the halving. */
  readonly accept: (family: Family<S>, resolved: boolean) => void;
}

/** What one cell cost. */
export interface TreeCost {
  samples: number;
  /** Depth of the deepest child. */
  deepest: number;
  /** Families that a limit, not agreement, ended. */
  unresolved: number;
}

/**
 * Refines one cell whose root sample is already filled (a stored point: it costs nothing). Samples are kept in one row of
 * children per depth, so that memory is bounded by depth; the order of calls depends on the cell alone. Ends a branch at
 * `depthLimit`, and all branches once `sampleLimit` samples are spent in the cell.
 */
export function createTree<S extends Sample>(rules: TreeRules<S>) {
  const { dimension, depthLimit } = rules;
  const childCount = 1 << dimension;
  const rows: S[][] = [];
  const rowAt = (depth: number): S[] => {
    rows[depth] ??= Array.from({ length: childCount }, rules.create);
    return rows[depth];
  };
  const pattern = samplePattern(dimension);
  const place = (parent: S, child: S, corner: number, depth: number): void => {
    const size = 2 ** -depth;
    for (let j = 0; j < dimension; j++) {
      child.centre[j] = parent.centre[j] + (corner & (1 << j) ? size / 4 : -size / 4);
      child.t[j] = parent.centre[j] + pattern[corner][j] * size;
    }
  };

  const descend = (parent: S, depth: number, sampleLimit: number, cost: TreeCost): void => {
    const children = rowAt(depth);
    for (let corner = 0; corner < childCount; corner++) {
      place(parent, children[corner], corner, depth);
      rules.evaluate(children[corner]);
    }
    cost.samples += childCount;
    cost.deepest = Math.max(cost.deepest, depth + 1);
    const family = { parent, children, depth };
    const split = rules.disagrees(family);
    if (split && depth + 1 < depthLimit && cost.samples < sampleLimit) {
      for (const child of children) descend(child, depth + 1, sampleLimit, cost);
      return;
    }
    if (split) cost.unresolved++;
    rules.accept(family, !split);
  };

  return (root: S, sampleLimit: number): TreeCost => {
    const cost = { samples: 0, deepest: 0, unresolved: 0 };
    descend(root, 0, sampleLimit, cost);
    return cost;
  };
}
