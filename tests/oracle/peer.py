# peer.py: the benchmark's peer: the NumPy pass a physicist would write, timed over a grid directory.
"""
peer.py GRID [--chunk POINTS] [--bins N] [--from EV --to EV] [--degenerate EV] [--repeat N]

Pass (i): charge:xy, spin:xy:z, orbital:xy:z of every k point, each band's curvature added to a histogram over energy.
Chunks fit the L2 cache, matrix products are batched matmul, one BLAS thread. Needed components only: v_x, v_y, S_z, L_z.
Reading (bytes to arrays), products and histogram are timed apart; prints JSON. `curves` holds the T = 0 curves
(cumulative sums over the bins, without prefactors) at ten levels, so that two programs can be checked to have done the same work.
"""
import argparse
import json
import os
import sys
import time

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
import numpy as np  # noqa: E402

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import points as oracle  # noqa: E402  (opening the arrays, units)


def component(stored, first, count, direction):
    """One direction of a [k, direction, bra, ket] array as [k, bra, ket]."""
    pieces = []
    for part, start in zip(stored.parts, stored.starts):
        low, high = max(first - start, 0), min(first + count - start, len(part))
        if low < high:
            pieces.append(part[low:high, direction])
    block = np.array(pieces[0]) if len(pieces) == 1 else np.concatenate(pieces)
    return block if stored.factor == 1.0 else block * stored.factor


def omegas(energy, vx, vy, spin, orbital, degenerate):
    """[3][k, n]: -2 Im sum_m j_nm v_mn / dE^2 for the three currents."""
    gap = energy[:, :, None] - energy[:, None, :]
    skip = np.abs(gap) < degenerate
    gap[skip] = 1.0
    weight = -2.0 / gap**2
    weight[skip] = 0.0
    field = vy.conj() * weight  # <m|v|n> = conj <n|v|m>
    currents = [vx] + [(o @ vx + vx @ o) / 2 for o in (spin, orbital)]
    return [np.einsum("knm,knm->kn", j.real, field.imag) + np.einsum("knm,knm->kn", j.imag, field.real) for j in currents]


def run(grid, options):
    """One pass; returns seconds (read, products, histogram) and the histogram [3, bins]."""
    seconds = np.zeros(3)
    histogram = np.zeros((3, options.bins + 1))
    scale = options.bins / (options.to - options.start)
    clock = time.perf_counter
    for first in range(0, grid.points, options.chunk):
        count = min(options.chunk, grid.points - first)
        t0 = clock()
        energy = grid.energy.read(first, count)
        vx, vy = component(grid.velocity, first, count, 0), component(grid.velocity, first, count, 1)
        spin = component(grid.moments["spin"], first, count, 2)
        orbital = component(grid.moments["orbital"], first, count, 2)
        t1 = clock()
        omega = omegas(energy, vx, vy, spin, orbital, options.degenerate)
        t2 = clock()
        bins = np.clip((energy - options.start) * scale, 0, options.bins).astype(np.int64).ravel()
        for c, o in enumerate(omega):
            histogram[c] += np.bincount(bins, weights=o.ravel(), minlength=options.bins + 1)
        seconds += [t1 - t0, t2 - t1, clock() - t2]
    return seconds, histogram


def main():
    parser = argparse.ArgumentParser(description="NumPy pass (i) over a band grid, timed")
    parser.add_argument("grid")
    parser.add_argument("--chunk", type=int, default=16)
    parser.add_argument("--bins", type=int, default=4000)
    parser.add_argument("--from", dest="start", type=float, default=-20.0, help="eV, absolute")
    parser.add_argument("--to", type=float, default=40.0, help="eV, absolute")
    parser.add_argument("--degenerate", type=float, default=1e-6)
    parser.add_argument("--repeat", type=int, default=3)
    options = parser.parse_args()
    grid = oracle.Grid(options.grid)
    run_all = [run(grid, options) for _ in range(options.repeat)]
    seconds = np.median([s for s, _ in run_all], axis=0)
    cumulative = np.cumsum(run_all[0][1], axis=1)
    picks = np.linspace(0, options.bins, 11).astype(int)[1:]
    print(
        json.dumps(
            {
                "numpy": np.__version__,
                "points": grid.points,
                "bands": grid.bands,
                "chunk": options.chunk,
                "seconds": dict(zip(["read", "products", "histogram"], seconds.tolist())),
                "points_per_second": grid.points / seconds.sum(),
                "points_per_second_without_reading": grid.points / seconds[1:].sum(),
                "level_eV": (options.start + picks * (options.to - options.start) / options.bins).tolist(),
                "curves": (cumulative[:, picks - 1] / grid.points).tolist(),
            }
        )
    )


if __name__ == "__main__":
    main()
