// series-tag.ts: by which tag are the grids of a series ordered, and which value has each?
import { dataFault, usageFault } from "../base/errors.js";
import type { GridFacts } from "../grid/grid.js";

/** A grid of a series as it was named. */
export interface TaggedGrid {
  readonly name: string;
  readonly facts: Pick<GridFacts, "tags">;
}

const numberOf = ({ facts }: TaggedGrid, tag: string): number | undefined => {
  const value = Object.hasOwn(facts.tags, tag) ? facts.tags[tag] : undefined;
  return typeof value === "number" ? value : undefined;
};

/** The numeric tags that every grid has and that are not the same in all. */
function differingTags(grids: readonly TaggedGrid[]): string[] {
  return Object.keys(grids[0].facts.tags).filter((tag) => {
    const values = grids.map((grid) => numberOf(grid, tag));
    return values.every((value) => value !== undefined) && new Set(values).size > 1;
  });
}

/**
 * The tag that orders a series: the one asked for, else the only numeric one that differs. Throws usage Faults where none or several could
 * be meant.
 */
export function seriesTag(grids: readonly TaggedGrid[], asked: string | undefined): string {
  if (asked !== undefined) return asked;
  const found = differingTags(grids);
  if (found.length === 1) return found[0];
  throw found.length === 0
    ? usageFault(
        "no numeric tag of the manifests differs from grid to grid",
        'Write one under "tags" in each bandgrid.json, e.g. { "strain_percent": -1 }, or name one with --tag.',
      )
    : usageFault(`several tags differ from grid to grid: ${found.join(", ")}`, `Choose one, e.g. --tag ${found[0]}.`);
}

/** The grids with their values of a tag, ascending. Throws a data Fault for a grid without it, and for a value that two grids share. */
export function orderedByTag<T extends TaggedGrid>(grids: readonly T[], tag: string): { grid: T; value: number }[] {
  const members = grids.map((grid) => {
    const value = numberOf(grid, tag);
    if (value !== undefined) return { grid, value };
    const numeric = Object.keys(grid.facts.tags).filter((name) => numberOf(grid, name) !== undefined);
    throw dataFault(
      `${grid.name} has no numeric tag "${tag}" (it has ${numeric.length === 0 ? "none" : numeric.join(", ")})`,
      `Write "${tag}" under "tags" in its bandgrid.json, or name another with --tag.`,
    );
  });
  members.sort((a, b) => a.value - b.value);
  const twin = members.findIndex(({ value }, at) => at > 0 && value === members[at - 1].value);
  if (twin < 0) return members;
  throw dataFault(
    `${members[twin - 1].grid.name} and ${members[twin].grid.name} both have ${tag} = ${members[twin].value}`,
    "Leave one of them out, or order by another --tag.",
  );
}
