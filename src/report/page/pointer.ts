// pointer.ts: over which level is the pointer, and which one does a person choose with it?
import { levelAt } from "../../curves/doping.js";
import { edges } from "./chart.js";
import { domainOf } from "./panels.js";
import type { Curves, Shown } from "./state.js";

interface Follower {
  readonly now: () => {
    readonly curves: Curves;
    readonly places: readonly number[];
    readonly axis: Shown["axis"];
  };
  /** Told the level under the pointer; undefined when it has left. */
  readonly over: (levelEv: number | undefined) => void;
  readonly chosen: (levelEv: number) => void;
}

/** Follows the pointer over the panels of `stack`. */
export function followPointer(stack: HTMLElement, { now, over, chosen }: Follower): void {
  const levelUnder = (clientX: number): number | undefined => {
    const box = stack.getBoundingClientRect();
    const part = (clientX - box.left - edges.leftPx) / (box.width - edges.leftPx - edges.rightPx);
    if (!(part >= 0 && part <= 1)) return undefined;
    const { curves, places, axis } = now();
    const [low, high] = domainOf(places);
    const place = low + part * (high - low);
    return axis === "level" ? place : levelAt(curves.dopings, place);
  };
  stack.addEventListener("pointermove", (event) => over(levelUnder(event.clientX)));
  stack.addEventListener("pointerleave", () => over(undefined));
  stack.addEventListener("click", (event) => {
    const level = levelUnder(event.clientX);
    if (level !== undefined) chosen(level);
  });
}
