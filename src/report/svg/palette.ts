// palette.ts: which colours do pictures use?

/** Ground, text and lines of every picture; text reaches a contrast of 7 on the ground, faint text 4.5. */
export const tone = {
  paper: "#fcfcfa",
  ink: "#22262b",
  faint: "#5d646d",
  grid: "#e4e5e1",
  zero: "#9aa0a6",
  reference: "#5d646d",
} as const;

/**
 * Cold to hot. Chosen so that the five differ by more than 20 in CIE L*a*b* for the common kinds of colour vision (the test
 * simulates them) and have a contrast of at least 3 on the ground.
 */
const ramp = ["#1d2f6f", "#2468b0", "#1f9e89", "#d07a12", "#8c1c2b"];
const chosen: Record<number, number[]> = { 1: [1], 2: [1, 3], 3: [1, 3, 4], 4: [1, 2, 3, 4] };

const channels = (hex: string): number[] => [1, 3, 5].map((at) => Number.parseInt(hex.slice(at, at + 2), 16));

/** The ramp at a fractional stop. */
function between(stop: number): string {
  const left = Math.min(ramp.length - 2, Math.floor(stop));
  const [a, b] = [channels(ramp[left]), channels(ramp[left + 1])];
  const mixed = a.map((value, at) => Math.round(value + (stop - left) * (b[at] - value)));
  return `#${mixed.map((value) => value.toString(16).padStart(2, "0")).join("")}`;
}

/** `count` colours (hex) for temperatures in ascending order: distinct for up to 5, a gradual ramp beyond. */
export function temperatureColours(count: number): string[] {
  const stops = chosen[count] ?? Array.from({ length: count }, (_, at) => (at * (ramp.length - 1)) / (count - 1));
  return stops.map(between);
}

/** For quantities of both signs: middle and end of blue and of orange, told apart by the common kinds of colour vision. */
const negative = ["#2468b0", "#1d2f6f"] as const;
const positive = ["#d07a12", "#7a2d05"] as const;

/** -1 (darkest blue) over 0 (nearly white) to 1 (darkest orange). */
export function diverging(part: number): string {
  const [middle, end] = part < 0 ? negative : positive;
  const size = Math.min(1, Math.abs(part));
  const stops = ["#f4f4f0", middle, end];
  const left = size < 0.6 ? 0 : 1;
  const share = left === 0 ? size / 0.6 : (size - 0.6) / 0.4;
  const [a, b] = [channels(stops[left]), channels(stops[left + 1])];
  return `#${a
    .map((value, i) =>
      Math.round(value + share * (b[i] - value))
        .toString(16)
        .padStart(2, "0"),
    )
    .join("")}`;
}
