// tree.ts: halves a cell again and again where parent and children disagree; sees a function of t and a norm, nothing of bands.

/** What is known at one sample: filled by the caller's `evaluate`. `t` is the centre of its box in edge coordinates, [-1/2, 1/2]^d. */
export interface Sample {
  readonly t: Float64Array;
}

/** A box and the 2^d boxes it was halved into. Depth 0 is the whole cell; a child has depth + 1 and volume 2^(-d (depth + 1)). */
export interface Family<S extends Sample> {
  readonly parent: S;
  readonly children: readonly S[];
  /** Depth of the parent. */
  readonly depth: number;
}

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
  const place = (parent: S, child: S, corner: number, depth: number): void => {
    const quarter = 0.25 / 2 ** depth;
    for (let j = 0; j < dimension; j++) child.t[j] = parent.t[j] + (corner & (1 << j) ? quarter : -quarter);
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
