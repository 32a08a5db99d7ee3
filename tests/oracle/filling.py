# filling.py: electrons and density of states of the two-centre fcc crystal on a dense mesh, from energies alone.
"""
filling.py PARAMETERS --divisions N --levels FROM TO NUMBER --temperature T...

Levels are absolute, in eV. One point of each cubic star of the unshifted N^3 mesh stands for all of it (gold.py). Prints one JSON
document: electrons_per_cell and states_per_eV as [temperature][level]; states_per_eV is null at T = 0.
"""
import argparse
import json
import os
import sys

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
import numpy as np  # noqa: E402

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import gold  # noqa: E402
import points as oracle  # noqa: E402


def main():
    parser = argparse.ArgumentParser(description="electrons and density of states, energies only")
    parser.add_argument("parameters")
    parser.add_argument("--divisions", type=int, required=True)
    parser.add_argument("--levels", nargs=3, required=True, metavar=("FROM", "TO", "NUMBER"))
    parser.add_argument("--temperature", nargs="+", type=float, required=True)
    options = parser.parse_args()
    with open(options.parameters) as file:
        crystal = gold.Crystal(json.load(file))
    index, weight = gold.cubic_stars(options.divisions)
    reciprocal = crystal.reciprocal()
    energy = np.array([energies(crystal, i / options.divisions @ reciprocal) for i in index])
    levels = np.linspace(float(options.levels[0]), float(options.levels[1]), int(options.levels[2]))
    mean = lambda values: float(np.mean(values.sum(axis=1) * weight))
    electrons = [[mean(oracle.occupation(energy, mu, t)) for mu in levels] for t in options.temperature]
    states = [[mean(oracle.slope(energy, mu, t)) for mu in levels] if t > 0 else None for t in options.temperature]
    print(json.dumps({"points": len(index), "electrons_per_cell": electrons, "states_per_eV": states}))


def energies(crystal, k):
    """The 18 levels at k (1/angstrom), eV."""
    h, s, _ = crystal.bloch(k * gold.BOHR)
    value, u = np.linalg.eigh(s)
    x = (u / np.sqrt(value)) @ u.conj().T
    return np.linalg.eigvalsh(np.kron(np.eye(2), x @ h @ x * gold.RYDBERG) + crystal.spin_orbit)


if __name__ == "__main__":
    main()
