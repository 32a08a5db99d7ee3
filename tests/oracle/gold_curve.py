# gold_curve.py: whole level curves of spin:hall and orbital:hall of the two-centre metal, with the reference's own error.
"""
gold_curve.py PARAMETERS --levels FROM TO NUMBER --temperature T... [--reference EV | --filling K] [--output FILE]

Plain sums by the formulas of points.py and gold.py, exact Fermi factors, over two meshes that share no point:
  first   the unshifted N^3 mesh of the primitive cell (--divisions N), which holds every symmetric point;
  second  the points (2i + 1, 2j + 1, 2l + 1) of the cube of side 4 pi / a in steps of 2 pi / (a M) (--second M, even), M^3 / 2
          points per zone, which holds neither zone centre nor X, L, W nor a plane k_a = 0.
Both have the whole cubic group, so one point stands for its star (the rotational mean :hall is a scalar of that group).
Their difference bounds the error of either where the sum has not converged (low temperature, T = 0: levels enter one
point at a time), and overstates the first's where both have.

Levels are relative to --reference, an absolute energy in eV, or to the level of all electrons at --filling kelvin on the
first mesh. `filled`: both responses with the level refilled at each temperature above 0. Without --output, prints.
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

RESPONSES = {"spin_hall": "spin:hall", "orbital_hall": "orbital:hall"}
UNIT = "(hbar/e) S/cm"


def primitive_stars(crystal, n):
    """k [point, 3] in 1/angstrom and weights of mean 1 of the unshifted n^3 mesh."""
    index, weight = gold.cubic_stars(n)
    return index / n @ crystal.reciprocal(), weight


def shifted_cube_stars(crystal, m):
    """The same of the odd points of the conventional cube; k and k + (2 pi / a)(1, 1, 1) are the same state."""
    odd = np.sort(2 * np.indices((m // 2,) * 3).reshape(3, -1).T + 1, axis=1)
    code = lambda o: (o[:, 0] * m + o[:, 1]) * m + o[:, 2]
    # Reflected back into the octant, o + m is m - o: a second name of the same point.
    least = np.minimum(code(odd), code(np.sort(m - odd, axis=1)))
    kept, count = np.unique(least, return_counts=True)
    k = np.stack([kept // m**2, kept // m % m, kept % m], axis=1)
    return k * (2 * np.pi / (crystal.a * m)), count / count.mean()


def bands(crystal, k, degenerate, chunk=256):
    """energy [point, 18] in eV and curvatures by response [point, 18] in angstrom^2."""
    energy, omega = [], {r: [] for r in RESPONSES}
    for first in range(0, len(k), chunk):
        rows = [crystal.at(one) for one in k[first : first + chunk]]
        e, v = np.array([row[0] for row in rows]), np.array([row[1] for row in rows])
        moments = {name: np.array([row[2][name] for row in rows]) for name in crystal.moments}
        energy.append(e)
        for r, name in RESPONSES.items():
            omega[r].append(oracle.response_curvature(name, e, v, moments, degenerate))
    return np.concatenate(energy), {r: np.concatenate(o) for r, o in omega.items()}


class Mesh:
    """A mesh's energies and curvatures; sums(mu, T) gives electrons and both responses."""

    def __init__(self, crystal, stars, degenerate):
        k, self.weight = stars
        self.volume = crystal.a**3 / 4
        self.electrons = crystal.electrons
        self.energy, self.omega = bands(crystal, k, degenerate)

    def sums(self, mu, temperature):
        filled = oracle.occupation(self.energy, mu, temperature) * self.weight[:, None]
        row = {"electrons": filled.sum() / len(filled)}
        for r, name in RESPONSES.items():
            factor = oracle.prefactor(name, False, self.volume)[0]
            row[r] = factor * np.sum(filled * self.omega[r]) / len(filled)
        return row

    def level(self, temperature):
        return gold.chemical_potential(self.energy, self.electrons, temperature, self.weight)

    def curves(self, mu, temperatures):
        """electrons, spin_hall, orbital_hall as [T][level], and `filled` with its own level for each T > 0."""
        rows = [[self.sums(m, t) for m in mu] for t in temperatures]
        curve = {q: np.array([[one[q] for one in row] for row in rows]) for q in ["electrons", *RESPONSES]}
        filled = []
        for t in temperatures:
            if t > 0:
                level = self.level(t)
                filled.append({"temperature_K": t, "level_eV": level, **self.sums(level, t)})
        return curve, filled


def rounded(curve, filled):
    """Six decimals of electrons and level, four of the responses, which is far below their error."""
    places = lambda q: 4 if q in RESPONSES else 6
    table = {q: np.round(values, places(q)).tolist() for q, values in curve.items()}
    return {**table, "filled": [{q: round(x, places(q)) for q, x in row.items()} for row in filled]}


def disagreement(one, other):
    """Per response and temperature: rms over levels of the meshes' difference, as a fraction of the curve's maximum."""
    rms = lambda r: np.sqrt(np.mean((one[r] - other[r]) ** 2, axis=1)) / np.abs(one[r]).max(axis=1)
    return {r: [float(f"{x:.3g}") for x in rms(r)] for r in RESPONSES}


def compact(document):
    """JSON with one line for each field and each curve."""
    text = json.dumps(document, indent=1)
    lines, depth, out = text.split("\n"), 0, ""
    for line in lines:
        body = line.strip()
        inner = body.rstrip(",")[-1:] in "0123456789" and not body.startswith('"')
        out += (" " if out.endswith(",") else "") + body if inner else ("\n" if not body.startswith("]") else "") + body
    return out.strip() + "\n"


def parse():
    parser = argparse.ArgumentParser(description="level curves of the two-centre fcc crystal from two meshes")
    parser.add_argument("parameters")
    parser.add_argument("--levels", nargs=3, type=float, required=True, metavar=("FROM", "TO", "NUMBER"))
    parser.add_argument("--temperature", nargs="+", type=float, required=True)
    parser.add_argument("--divisions", type=int, default=96)
    parser.add_argument("--second", type=int, default=120)
    parser.add_argument("--reference", type=float, help="eV, absolute")
    parser.add_argument("--filling", type=float, default=300.0, help="K at which the reference level is found")
    parser.add_argument("--side", type=float, help="angstrom")
    parser.add_argument("--xi", type=float, help="eV")
    parser.add_argument("--electrons", type=float)
    parser.add_argument("--degenerate", type=float, default=1e-6)
    parser.add_argument("--output")
    options = parser.parse_args()
    if options.second % 2:
        parser.error("--second must be even: the centring of the reciprocal lattice has to map the mesh on itself")
    return options


def main():
    options = parse()
    with open(options.parameters) as file:
        parameters = json.load(file)
    parameters["lattice"]["a_angstrom"] = options.side or parameters["lattice"]["a_angstrom"]
    parameters["xi_d_eV"] = parameters["xi_d_eV"] if options.xi is None else options.xi
    parameters["electrons"] = options.electrons or parameters["electrons"]
    crystal = gold.Crystal(parameters)
    n, m = options.divisions, options.second
    first = Mesh(crystal, primitive_stars(crystal, n), options.degenerate)
    second = Mesh(crystal, shifted_cube_stars(crystal, m), options.degenerate)
    reference = first.level(options.filling) if options.reference is None else options.reference
    start, stop, number = options.levels
    levels = np.linspace(start, stop, int(number))
    (one, filled), (other, refilled) = (mesh.curves(reference + levels, options.temperature) for mesh in (first, second))
    told = [a for i, a in enumerate(sys.argv[1:], 1) if a != "--output" and sys.argv[i - 1] != "--output"]
    document = {
        "source": "python3 tests/oracle/gold_curve.py " + " ".join(told),
        "unit": UNIT,
        "reference_eV": round(reference, 9),
        "level_eV": np.round(levels, 9).tolist(),
        "temperature_K": options.temperature,
        "rms_difference_over_maximum": disagreement(one, other),
        "first": {"mesh": f"{n}^3 of the primitive cell, unshifted", "stars": len(first.energy), **rounded(one, filled)},
        "second": {
            "mesh": f"{m}^3 / 2, odd points of the cube of side 4 pi / a",
            "stars": len(second.energy),
            **rounded(other, refilled),
        },
    }
    text = compact(document)
    assert json.loads(text) == document
    if options.output is None:
        print(text, end="")
    else:
        with open(options.output, "w") as file:
            file.write(text)


if __name__ == "__main__":
    main()
