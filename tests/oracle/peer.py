# peer.py: the benchmark's peer: the NumPy pass a physicist would write, timed over a grid directory.
"""
peer.py GRID [--chunk POINTS...] [--bins N] [--from EV --to EV] [--degenerate EV] [--repeat N]

Pass (i): charge:xy, spin:xy:z, orbital:xy:z of every k point, each band's curvature added to a histogram over energy.
Matrix products are batched matmul on one BLAS thread; only v_x, v_y, S_z, L_z are read. Several chunk sizes are tried
and the fastest is reported, so that the peer is at its best on the machine at hand (chunks that fit the L2 cache win).
Use a NumPy with an optimised BLAS: a distribution's NumPy on the reference BLAS is about half as fast.

Reading (bytes to arrays), products and histogram are timed apart; prints JSON, medians over the repetitions. `curves`
holds the T = 0 curves (sums over the bins below a level, per k point, in angstrom^2, no prefactors) at ten levels, to
check that two programs have done the same work.
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
    """[3][k, n]: -2 sum_m Im(j_nm conj v_nm) / dE^2 for the three currents."""
    gap = energy[:, :, None] - energy[:, None, :]
    skip = np.abs(gap) < degenerate
    gap[skip] = 1.0
    weight = -2.0 / gap**2
    weight[skip] = 0.0
    # Im(j conj v) is the dot product of (Re, Im) pairs of j and i v: a real einsum over views, no copies.
    field = (1j * weight * vy).view(np.float64)
    currents = [vx] + [(o @ vx + vx @ o) / 2 for o in (spin, orbital)]
    return [np.einsum("knm,knm->kn", j.view(np.float64), field) for j in currents]


def run(grid, options, chunk):
    """One pass: seconds (read, products, histogram) and histogram [3, bins + 1] (the last bin: what lies above)."""
    seconds = np.zeros(3)
    histogram = np.zeros((3, options.bins + 1))
    scale = options.bins / (options.to - options.start)
    clock = time.perf_counter
    for first in range(0, grid.points, chunk):
        count = min(chunk, grid.points - first)
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
    parser.add_argument("--chunk", nargs="+", type=int, default=[8, 16, 32, 64])
    parser.add_argument("--bins", type=int, default=4000)
    parser.add_argument("--from", dest="start", type=float, default=-20.0, help="eV, absolute")
    parser.add_argument("--to", type=float, default=40.0, help="eV, absolute")
    parser.add_argument("--degenerate", type=float, default=1e-6)
    parser.add_argument("--repeat", type=int, default=3)
    options = parser.parse_args()
    grid = oracle.Grid(options.grid)
    if options.repeat < 1:
        parser.error("--repeat must be at least 1")
    tries = {chunk: [] for chunk in options.chunk}
    for _ in range(options.repeat):  # interleaved, so that a busy moment of the machine hits all alike
        for chunk in options.chunk:
            seconds, histogram = run(grid, options, chunk)
            tries[chunk].append(seconds)
    medians = {chunk: np.median(seconds, axis=0) for chunk, seconds in tries.items()}
    chunk = min(medians, key=lambda size: medians[size].sum())
    seconds = medians[chunk]
    cumulative = np.cumsum(histogram, axis=1)
    picks = np.linspace(0, options.bins, 11).astype(int)[1:]
    print(
        json.dumps(
            {
                "numpy": np.__version__,
                "points": grid.points,
                "bands": grid.bands,
                "chunk": chunk,
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
