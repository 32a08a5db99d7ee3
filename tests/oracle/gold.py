# gold.py: a two-centre s, p, d crystal (fcc) from its parameter file, independent of the TypeScript sampler.
"""
gold.py PARAMETERS levels                                     zone-centre levels in rydberg
gold.py PARAMETERS sample --k F1 F2 F3 [F1 F2 F3 ...]         gauge-invariant quantities at fractional k points, JSON
gold.py PARAMETERS mesh --divisions N [--temperature T...] [--electrons X | --level EV]
                                                              plain sums of spin:hall and orbital:hall on an N^3 mesh;
                                                              --reduce: one point of each cubic star, with its weight
gold.py PARAMETERS write DIRECTORY --divisions N [--files M]  a bandgrid/1 directory (18 bands, spin and orbital)

PARAMETERS is a JSON file with lattice.a_angstrom, electrons, xi_d_eV, lambda2, cutoff, width, onsite, H and S, in
rydberg and bohr. Method: Mehl and Papaconstantopoulos, Phys. Rev. B 54, 4519 (1996); Slater and Koster, Phys. Rev. 94,
1498 (1954).
  F(R) = 1 / (1 + exp((R - cutoff) / width + 5)), zero beyond the cutoff
  rho = sum_neighbours exp(-lambda2 R) F(R);  on-site a + b rho^(2/3) + c rho^(4/3) + d rho^2
  two-centre (a + b R + c R^2) exp(-d2 R) F(R)
The angular parts are built from tensors, not from the table: s = 1, p = unit vectors, d = symmetric traceless
matrices D with D:D = 1 (the orbital r.D.r). Bloch sums exp(i k.R); Loewdin orthogonalisation at each k; xi L.S on d
after it; spin sigma/2; orbital moment L on p and d in the orthogonalised basis. Basis: (up, down) x 9 orbitals.
--side, --xi and --electrons replace the file's lattice constant (angstrom), coupling (eV) and filling.
"""
import argparse
import itertools
import json
import os
import sys

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
import numpy as np  # noqa: E402

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import points as oracle  # noqa: E402  (curvature, Fermi factors, prefactors)

RYDBERG = oracle.HARTREE / 2
BOHR = oracle.BOHR
FCC = np.array([[0, 1, 1], [1, 0, 1], [1, 1, 0]]) / 2

EPSILON = np.zeros((3, 3, 3))
for _a, _b, _c in [(0, 1, 2), (1, 2, 0), (2, 0, 1)]:
    EPSILON[_a, _b, _c], EPSILON[_b, _a, _c] = 1, -1


def d_tensors():
    """xy, yz, zx, x2-y2, 3z2-r2 as symmetric traceless matrices, D:D = 1."""
    d = np.zeros((5, 3, 3))
    for m, (i, j) in enumerate([(0, 1), (1, 2), (2, 0)]):
        d[m, i, j] = d[m, j, i] = np.sqrt(0.5)
    d[3] = np.diag([1, -1, 0]) / np.sqrt(2)
    d[4] = np.diag([-1, -1, 2]) / np.sqrt(6)
    return d


D = d_tensors()


def angular_momentum():
    """L[a] in the basis s, px, py, pz, 5 d: (L_a)_bc = -i eps_abc on p, the commutator on d."""
    ell = -1j * EPSILON
    total = np.zeros((3, 9, 9), complex)
    total[:, 1:4, 1:4] = ell
    for a in range(3):
        turned = ell[a] @ D - D @ ell[a]
        total[a, 4:, 4:] = np.einsum("mij,nij->mn", D, turned)
    return total


def two_centre(n, v):
    """<i at 0| . |j at R> for R along n; v holds the ten integrals by name."""
    block = np.zeros((9, 9))
    dn = D @ n
    sigma = np.sqrt(1.5) * (dn @ n)  # overlap of each d with the one along n
    pi = 2 * (dn @ dn.T - np.outer(dn @ n, dn @ n))
    delta = np.eye(5) - np.outer(sigma, sigma) - pi
    p_pi = np.sqrt(2) * (dn.T - np.outer(n, dn @ n))  # [p, d]
    block[0, 0] = v["sss"]
    block[0, 1:4] = v["sps"] * n
    block[1:4, 0] = -v["sps"] * n
    block[0, 4:] = block[4:, 0] = v["sds"] * sigma
    block[1:4, 1:4] = v["pps"] * np.outer(n, n) + v["ppp"] * (np.eye(3) - np.outer(n, n))
    block[1:4, 4:] = v["pds"] * np.outer(n, sigma) + v["pdp"] * p_pi
    block[4:, 1:4] = -block[1:4, 4:].T
    block[4:, 4:] = v["dds"] * np.outer(sigma, sigma) + v["ddp"] * pi + v["ddd"] * delta
    return block


class Crystal:
    """Real-space tables in rydberg and bohr; at(k) gives eigenvalues and matrices in eV and angstrom."""

    def __init__(self, parameters):
        self.p = parameters
        self.a = parameters["lattice"]["a_angstrom"]
        self.electrons = parameters["electrons"]
        lattice = FCC * self.a / BOHR
        r = (np.indices((11, 11, 11)).reshape(3, -1).T - 5) @ lattice
        r = r[np.any(r != 0, axis=1)]
        length = np.linalg.norm(r, axis=1)
        self.r = r[length < parameters["cutoff"]]
        length = length[length < parameters["cutoff"]]
        cut = 1 / (1 + np.exp((length - parameters["cutoff"]) / parameters["width"] + 5))
        rho = np.sum(np.exp(-parameters["lambda2"] * length) * cut)
        third = rho ** (2 / 3)
        level = lambda q: q["a"] + q["b"] * third + q["c"] * third**2 + q["d"] * third**3
        self.onsite = np.diag(np.repeat([level(parameters["onsite"][l]) for l in "spd"], [1, 3, 5]))
        radial = lambda q, x: (q["a"] + q["b"] * x + q["c"] * x**2) * np.exp(-q["d2"] * x)
        at = lambda kind, x: {name: radial(q, x) for name, q in parameters[kind].items()}
        table = lambda kind: np.array([f * two_centre(r / x, at(kind, x)) for r, x, f in zip(self.r, length, cut)])
        self.h, self.s = table("H"), table("S")
        orbital = angular_momentum()
        pauli = np.array([[[0, 1], [1, 0]], [[0, -1j], [1j, 0]], [[1, 0], [0, -1]]])
        on_d = orbital.copy()
        on_d[:, 1:4, 1:4] = 0
        xi = parameters["xi_d_eV"]
        self.spin_orbit = xi * sum(np.kron(pauli[i] / 2, on_d[i]) for i in range(3))
        self.moments = {
            "spin": np.array([np.kron(s / 2, np.eye(9)) for s in pauli]),
            "orbital": np.array([np.kron(np.eye(2), l) for l in orbital]),
        }

    def bloch(self, k):
        """H, S and their k derivatives in the non-orthogonal basis; k Cartesian, 1/bohr."""
        phase = np.exp(1j * (self.r @ k))
        total = lambda t, w: np.tensordot(w, t, 1)
        h, s = self.onsite + total(self.h, phase), np.eye(9) + total(self.s, phase)
        waves = [1j * self.r[:, a] * phase for a in range(3)]
        return h, s, [(total(self.h, w), total(self.s, w)) for w in waves]

    def hamiltonian(self, k):
        """H~ (eV) and dH~/dk (eV angstrom) of one spin without spin-orbit coupling; k in 1/angstrom."""
        h, s, slopes = self.bloch(k * BOHR)
        value, u = np.linalg.eigh(s)
        root = np.sqrt(value)
        x = (u / root) @ u.conj().T
        # (s_i^-1/2 - s_j^-1/2) / (s_i - s_j), written so that it needs no limit
        quotient = -1 / (np.outer(root, root) * (root[:, None] + root[None, :]))
        dh = []
        for slope_h, slope_s in slopes:
            dx = u @ ((u.conj().T @ slope_s @ u) * quotient) @ u.conj().T
            half = dx @ h @ x
            dh.append((half + half.conj().T + x @ slope_h @ x) * RYDBERG * BOHR)
        return x @ h @ x * RYDBERG, np.array(dh)

    def at(self, k):
        """energy [18], velocity [3, 18, 18], moments by name [3, 18, 18] in the eigenbasis; k in 1/angstrom."""
        h, dh = self.hamiltonian(k)
        energy, c = np.linalg.eigh(np.kron(np.eye(2), h) + self.spin_orbit)
        turn = lambda o: c.conj().T @ o @ c
        velocity = np.array([turn(np.kron(np.eye(2), d)) for d in dh])
        return energy, velocity, {name: np.array([turn(o) for o in m]) for name, m in self.moments.items()}

    def reciprocal(self):
        """Rows b1, b2, b3 in 1/angstrom."""
        return 2 * np.pi * np.linalg.inv(FCC * self.a).T

    def mesh(self, n, offset=(0, 0, 0), index=None):
        """Arrays of a full n^3 mesh, i3 fastest; or of the given mesh indices [point, 3]."""
        index = np.indices((n, n, n)).reshape(3, -1).T if index is None else index
        rows = [self.at((i + offset) / n @ self.reciprocal()) for i in index]
        stack = lambda pick: np.array([pick(row) for row in rows])
        moments = {name: stack(lambda row: row[2][name]) for name in self.moments}
        return stack(lambda row: row[0]), stack(lambda row: row[1]), moments


def cubic_stars(n):
    """Mesh indices [point, 3] of one point per cubic star of the unshifted n^3 mesh, and weights of mean 1."""
    index = np.indices((n, n, n)).reshape(3, -1).T
    cartesian = index @ np.rint(np.linalg.inv(FCC).T).astype(int)  # in 2 pi / (n a)
    least = np.full(n**3, n**3)
    for order in itertools.permutations(range(3)):
        for signs in itertools.product((1, -1), repeat=3):
            turned = np.rint((cartesian[:, order] * signs) @ FCC.T).astype(int) % n
            least = np.minimum(least, (turned[:, 0] * n + turned[:, 1]) * n + turned[:, 2])
    kept, count = np.unique(least, return_counts=True)
    return index[kept], count / count.mean()


def groups(energy, tolerance):
    """Runs of bands whose neighbours are closer than the tolerance: Kramers pairs, or more at symmetric points."""
    cuts = np.flatnonzero(np.diff(energy) >= tolerance) + 1
    return np.split(np.arange(len(energy)), cuts)


RESPONSES = ["charge:xy", "spin:xy:z", "spin:yz:x", "spin:hall", "orbital:xy:z", "orbital:zx:y", "orbital:hall"]


def sample(crystal, fractions, degenerate):
    """Per k point: energies and, per degenerate group, traces of v and summed curvatures in angstrom^2: gauge-free."""
    document = []
    for fraction in fractions:
        energy, velocity, moments = crystal.at(fraction @ crystal.reciprocal())
        sets = groups(energy, degenerate)
        total = lambda values: [float(np.sum(values[s])) for s in sets]
        one = {name: m[None] for name, m in moments.items()}
        each = lambda r: oracle.response_curvature(r, energy[None], velocity[None], one, degenerate)[0]
        document.append(
            {
                "fraction": fraction.tolist(),
                "energy_eV": energy.tolist(),
                "groups": [s.tolist() for s in sets],
                "velocity_trace_eVA": [total(np.diagonal(v).real) for v in velocity],
                "curvature_A2": {r: total(each(r)) for r in RESPONSES},
            }
        )
    return document


def chemical_potential(energy, electrons, temperature, weight=1.0):
    """mu at which mean_k weight sum_n f = electrons, by bisection (T > 0)."""
    low, high = energy.min() - 5, energy.max() + 5
    for _ in range(200):
        middle = (low + high) / 2
        filled = np.mean(oracle.occupation(energy, middle, temperature).sum(axis=1) * weight)
        low, high = (middle, high) if filled < electrons else (low, middle)
    return (low + high) / 2


def mesh_values(crystal, options):
    """Plain sums at the level of `electrons` per temperature, or at a fixed --level."""
    index, weight = cubic_stars(options.divisions) if options.reduce else (None, 1.0)
    energy, velocity, moments = crystal.mesh(options.divisions, np.full(3, options.offset), index)
    volume = crystal.a**3 / 4
    result = {"divisions": options.divisions, "offset": options.offset, "points": len(energy), "rows": []}
    # :hall is a scalar of the cubic group, so one point stands for its star; a single component is not.
    names = ["spin:hall", "orbital:hall"] + ([] if options.reduce else ["spin:xy:z", "orbital:xy:z"])
    omega = {r: oracle.response_curvature(r, energy, velocity, moments, options.degenerate) for r in names}
    for temperature in options.temperature:
        mu = options.level
        if mu is None:
            mu = chemical_potential(energy, crystal.electrons, options.filling or temperature, weight)
        filled = oracle.occupation(energy, mu, temperature)
        row = {"temperature_K": temperature, "mu_eV": mu, "mu_Ry": mu / RYDBERG}
        row["electrons"] = np.mean(filled.sum(axis=1) * weight)
        for r in names:
            row[r] = oracle.prefactor(r, False, volume)[0] * np.mean((filled * omega[r]).sum(axis=1) * weight)
        result["rows"].append(row)
    return result


def write(crystal, options):
    """A bandgrid/1 directory; every array in --files files along k."""
    energy, velocity, moments = crystal.mesh(options.divisions, np.full(3, options.offset))
    os.makedirs(options.directory, exist_ok=True)

    def store(name, array, dtype):
        for i, part in enumerate(np.array_split(array, options.files)):
            part.astype(dtype).tofile(os.path.join(options.directory, f"{name}-{i}.bin"))
        return {"files": f"{name}-*.bin", "type": {"<f8": "float64", "<c16": "complex128"}[dtype]}

    axes = {"axes": ["k", "direction", "bra", "ket"]}
    fermi = options.level
    if fermi is None:
        fermi = chemical_potential(energy, crystal.electrons, options.filling or 1000.0)
    manifest = {
        "format": "bandgrid/1",
        "title": crystal.p.get("title", "two-centre crystal"),
        "lattice": {"unit": "angstrom", "vectors": (FCC * crystal.a).tolist(), "periodic": 3},
        "mesh": {"divisions": [options.divisions] * 3, "offset": [options.offset] * 3},
        "bands": 18,
        "electronsPerBand": 1,
        "level": {"unit": "eV", "fermi": fermi, "electrons": crystal.electrons},
        "arrays": {
            "energy": {**store("energy", energy, "<f8"), "axes": ["k", "band"], "unit": "eV"},
            "velocity": {**store("velocity", velocity, "<c16"), **axes, "unit": "eV*angstrom"},
            "moments": {name: {**store(name, m, "<c16"), **axes, "unit": "hbar"} for name, m in moments.items()},
        },
    }
    with open(os.path.join(options.directory, "bandgrid.json"), "w") as file:
        json.dump(manifest, file, indent=1)
    return {"written": options.directory, "points": len(energy), "fermi_eV": fermi}


def main():
    parser = argparse.ArgumentParser(description="two-centre fcc crystal")
    parser.add_argument("parameters")
    parser.add_argument("task", choices=["levels", "sample", "mesh", "write"])
    parser.add_argument("directory", nargs="?")
    parser.add_argument("--k", nargs="+", type=float, help="fractions of b1, b2, b3, three for each point")
    parser.add_argument("--divisions", type=int, default=12)
    parser.add_argument("--offset", type=float, default=0.0)
    parser.add_argument("--temperature", nargs="+", type=float, default=[300.0])
    parser.add_argument("--electrons", type=float)
    parser.add_argument("--side", type=float, help="angstrom")
    parser.add_argument("--xi", type=float, help="eV")
    parser.add_argument("--filling", type=float, help="K at which the level is found (default: the row's temperature)")
    parser.add_argument("--level", type=float, help="absolute level in eV instead of a filling")
    parser.add_argument("--degenerate", type=float, default=1e-6)
    parser.add_argument("--reduce", action="store_true", help="use the cubic group (mesh, offset 0)")
    parser.add_argument("--files", type=int, default=1)
    options = parser.parse_args()
    if options.reduce and options.offset != 0:
        parser.error("--reduce needs --offset 0: a shifted fcc mesh has not the whole cubic group")
    with open(options.parameters) as file:
        parameters = json.load(file)
    if options.side is not None:
        parameters["lattice"]["a_angstrom"] = options.side
    if options.xi is not None:
        parameters["xi_d_eV"] = options.xi
    if options.electrons is not None:
        parameters["electrons"] = options.electrons
    crystal = Crystal(parameters)
    if options.task == "levels":
        energy, _, _ = crystal.at(np.zeros(3))
        result = {"zone_centre_Ry": (energy[::2] / RYDBERG).tolist()}
    elif options.task == "sample":
        result = sample(crystal, np.array(options.k).reshape(-1, 3), options.degenerate)
    else:
        result = mesh_values(crystal, options) if options.task == "mesh" else write(crystal, options)
    print(json.dumps(result))


if __name__ == "__main__":
    main()
