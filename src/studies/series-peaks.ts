// series-peaks.ts: which peak of one grid is which of the next? Followed by the nearest doping.

/** What following needs of a peak. */
export interface FollowedPeak {
  readonly doping_per_cell: number;
  readonly level_eV: number | null;
  readonly value: number | null;
  readonly width_eV: number;
}

/** A peak may move by as much as the wider of both is wide, and keeps its sign. */
function continues(last: FollowedPeak, next: FollowedPeak): boolean {
  const moved = Math.abs((last.level_eV ?? 0) - (next.level_eV ?? 0));
  return (last.value ?? 0) * (next.value ?? 0) > 0 && moved <= Math.max(last.width_eV, next.width_eV);
}

/**
 * Tracks of peaks along a series, one entry a member (null: none). Pairs of a track and a peak of the next member are joined in the
 * order of their distance in doping, each once; a peak that continues none begins a track of its own. Highest track first.
 */
export function followPeaks<P extends FollowedPeak>(members: readonly (readonly P[])[]): (P | null)[][] {
  const tracks: (P | null)[][] = [];
  for (const [at, peaks] of members.entries()) {
    const open = tracks.map((track) => track.findLast((peak) => peak !== null) as P);
    const pairs = open
      .flatMap((last, track) => peaks.map((peak) => ({ track, peak, last })))
      .filter(({ last, peak }) => continues(last, peak))
      .sort((a, b) => distance(a.last, a.peak) - distance(b.last, b.peak));
    const taken = new Set<P>();
    for (const { track, peak } of pairs) {
      if (tracks[track].length > at || taken.has(peak)) continue;
      tracks[track].push(peak);
      taken.add(peak);
    }
    for (const track of tracks) if (track.length === at) track.push(null);
    for (const peak of peaks) if (!taken.has(peak)) tracks.push([...new Array<null>(at).fill(null), peak]);
  }
  const height = (track: readonly (P | null)[]): number => Math.max(...track.map((peak) => Math.abs(peak?.value ?? 0)));
  return tracks.sort((a, b) => height(b) - height(a));
}

const distance = (a: FollowedPeak, b: FollowedPeak): number => Math.abs(a.doping_per_cell - b.doping_per_cell);
