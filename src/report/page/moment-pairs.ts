// moment-pairs.ts: which spin and orbital responses belong together, and what are their sum and ratio?
import type { CurvesResult } from "../../curves/result.js";
import type { Curves } from "./state.js";

/** Numbers of a spin and an orbital response of the same component and unit. */
export interface MomentPair {
  readonly component: string;
  readonly unit: string;
  readonly spin: number;
  readonly orbital: number;
}

/** All pairs of a result. */
export function momentPairs({ responses }: CurvesResult): MomentPair[] {
  return responses.flatMap(({ name, unit }, spin) => {
    if (!name.startsWith("spin:")) return [];
    const component = name.slice("spin:".length);
    const orbital = responses.findIndex((other) => other.name === `orbital:${component}` && other.unit === unit);
    return orbital < 0 ? [] : [{ component, unit, spin, orbital }];
  });
}

/** Bars that the denominator of a ratio must be away from zero. */
const leastBars = 2;
/** And its part of the largest value. */
const leastPart = 0.02;

/** Spin plus orbital; the bars are added, since both come from the same points and may err alike. */
export function sumOf({ value, error }: Curves, { spin, orbital }: MomentPair): { value: number[]; error: number[] } {
  return {
    value: value[spin].map((each, level) => each + value[orbital][level]),
    error: error[spin].map((bar, level) => bar + error[orbital][level]),
  };
}

/** Spin over orbital; a gap where the orbital response is not clearly apart from zero. Bars are added as parts. */
export function ratioOf({ value, error }: Curves, { spin, orbital }: MomentPair): { value: number[]; error: number[] } {
  const largest = value[orbital].reduce((most, each) => Math.max(most, Math.abs(each)), 0);
  const ratio = value[spin].map((each, level) => {
    const below = Math.abs(value[orbital][level]);
    const bar = Number.isFinite(error[orbital][level]) ? error[orbital][level] : 0;
    return below > Math.max(leastBars * bar, leastPart * largest) ? each / value[orbital][level] : Number.NaN;
  });
  const bars = ratio.map((each, level) => {
    const below = Math.abs(value[orbital][level]);
    return (error[spin][level] + Math.abs(each) * error[orbital][level]) / below;
  });
  return { value: ratio, error: bars };
}
