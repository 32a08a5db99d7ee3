# zincblende.py: spin:hall of a zincblende crystal in plane waves, integrated ray by ray about the zone's centre; prints JSON.
"""
zincblende.py --level EV... --temperature K... [--material GaAs] [--bands 30] [--angles 24] [--radii 48] [--mesh 24]

Needs SciPy beside NumPy. Written apart from src/samples: form factors of M. L. Cohen and T. K. Bergstresser, Phys. Rev. 141, 789 (1966) (from memory),
spin-orbit coupling of Gaussian wells at both atoms, scaled to the splitting of the valence top; sums over the lowest bands.

A mesh sees the near-degenerate spin-split holes point by point and does not converge (scatter of tens of (hbar/e) S/cm at 10^5
points). Holes around k = 0 are a star-shaped region, so: sum = (all valence bands full: smooth, a mesh does)
- (sum over holes, in polar coordinates: along a ray bands and pair numerators are smooth and are splined, so that any temperature
is exact; in the angles Gauss nodes crowd towards [100] and [111], where the holes' splitting vanishes or all but vanishes).
"""
import argparse
import json
import os

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
import numpy as np  # noqa: E402

RYDBERG, BOHR, KB = 27.211386245981 / 2, 0.529177210544, 8.617333262e-5
HBAR2_OVER_M = 2 * RYDBERG * BOHR**2
E2_OVER_HBAR = 2.434134805788e-4
MATERIALS = {  # a (angstrom), symmetric form factors 3, 8, 11, antisymmetric 3, 4, 11 (Ry), splitting, splittings of the atoms
    "GaAs": (5.64, (-0.23, 0.01, 0.06), (0.07, 0.05, 0.01), 0.34, (0.174, 0.421)),
    "ZnSe": (5.65, (-0.23, 0.01, 0.06), (0.18, 0.12, 0.03), 0.43, (0.07, 0.48)),
}
WELL = 0.25
PAULI = np.array([[[0, 1], [1, 0]], [[0, -1j], [1j, 0]], [[1, 0], [0, -1]]])
EVEN = [(0, 1, 2), (1, 2, 0), (2, 0, 1)]
VALENCE = 8


class Crystal:
    def __init__(self, name, cutoff=12):
        self.a, sym, anti, splitting, atoms = MATERIALS[name]
        self.unit = 2 * np.pi / self.a
        reach = range(-4, 5)
        waves = [(x, y, z) for x in reach for y in reach for z in reach if len({x % 2, y % 2, z % 2}) == 1]
        self.g = np.array([w for w in waves if np.dot(w, w) <= cutoff], dtype=float)
        q = self.g[:, None] - self.g[None]
        q2 = np.rint((q**2).sum(-1)).astype(int)
        phase = np.pi / 4 * q.sum(-1)
        table = lambda keys, values: np.vectorize(lambda x: dict(zip(keys, values)).get(x, 0.0))(q2)
        potential = table((3, 8, 11), sym) * np.cos(phase) + 1j * table((3, 4, 11), anti) * np.sin(phase)
        cation, anion = np.array(atoms) / np.mean(atoms)
        depth = np.exp(-q2 * (self.unit * WELL) ** 2 / 2)
        well = depth * ((cation + anion) / 2 * np.cos(phase) + 1j * (cation - anion) / 2 * np.sin(phase))
        # -i s(q) (k + G) x (k + G') . sigma = -i s(q) (G x G' + k x (G' - G)) . sigma
        spin = lambda field: np.einsum("ij,ijc,cst->isjt", -1j * well, field, PAULI).reshape(2 * len(self.g), -1)
        constant = spin(np.cross(self.g[:, None], self.g[None]))
        linear = [spin(np.cross(np.broadcast_to(e, q.shape), -q)) for e in np.eye(3)]
        self.base = np.kron(potential * RYDBERG, np.eye(2))
        top = lambda s: np.linalg.eigvalsh(self.base + s * constant + np.diag(self.kinetic(np.zeros(3))))
        gap = lambda s: top(s)[4:8].mean() - top(s)[2:4].mean() - splitting
        x, y = 0.0, 1e-3
        for _ in range(60):
            if abs(gap(y)) < 1e-11:
                break
            x, y = y, y - gap(y) * (y - x) / (gap(y) - gap(x))
        self.top = top(y)[VALENCE - 1]
        self.base = self.base + y * constant
        self.linear = [y * one for one in linear]
        self.spin = [np.kron(np.eye(len(self.g)), s / 2) for s in PAULI]

    def kinetic(self, k):
        return np.repeat(HBAR2_OVER_M / 2 * self.unit**2 * ((self.g + k) ** 2).sum(-1), 2)

    def at(self, k, bands):
        """Energies and, for pairs (n, m), the rotational mean of -2 Im <n|j|m><m|v|n>; k in units of 2 pi / a."""
        h = self.base + sum(x * m for x, m in zip(k, self.linear)) + np.diag(self.kinetic(k))
        e, c = np.linalg.eigh(h)
        c = c[:, :bands]
        kin = [np.repeat(HBAR2_OVER_M * self.unit * (self.g[:, i] + k[i]), 2) for i in range(3)]
        v = [c.conj().T @ (kin[i][:, None] * c + self.linear[i] @ c / self.unit) for i in range(3)]
        s = [c.conj().T @ (m @ c) for m in self.spin]
        total = np.zeros((bands, bands))
        for a, b, g in EVEN:
            for flow, field, sign in ((a, b, 1), (b, a, -1)):
                j = (s[g] @ v[flow] + v[flow] @ s[g]) / 2
                total += sign / 6 * -2 * (j * v[field].T).imag
        return e[:bands] - self.top, total


def curvature(e, pair, n):
    gap = e[n] - e
    safe = np.abs(gap) > 1e-7
    return np.sum(np.where(safe, pair[n] / np.where(safe, gap, 1) ** 2, 0))


def full_valence(crystal, n, bands):
    """Zone mean of the sum over all valence bands; odd points of the conventional cube, folded to the wedge by symmetry."""
    odd = (2 * np.arange(n // 2) + 1) / n
    total = count = 0
    for i, x in enumerate(odd):
        for j, y in enumerate(odd[: i + 1]):
            for z in odd[: j + 1]:
                k = np.array([x, y, z])
                images = [k, np.sort(1 - k)[::-1]]  # k + (2 pi / a)(1, 1, 1), reflected back: the same state
                folded = min(images, key=lambda one: one @ one)
                e, pair = crystal.at(folded, bands)
                weight = len({(x, y, z), (x, z, y), (y, x, z), (y, z, x), (z, x, y), (z, y, x)})
                total += weight * sum(pair[m, c] / (e[m] - e[c]) ** 2 for m in range(VALENCE) for c in range(VALENCE, bands))
                count += weight
    return total / count


def graded(n):
    """Gauss nodes and weights on [0, 1], crowded at both ends."""
    x, w = np.polynomial.legendre.leggauss(n)
    s, w = (x + 1) / 2, w / 2
    return s**2 * (3 - 2 * s), w * 6 * s * (1 - s)


def spline(x, y, fine):
    from scipy.interpolate import CubicSpline

    return CubicSpline(x, y, axis=0)(fine)


def rays(crystal, bands, angles, radii):
    """For every ray of the wedge kx >= ky >= kz >= 0: weight, radii, valence energies, near-pair numerators, curvature of the rest."""
    near = np.arange(2, VALENCE)
    for u, wu in zip(*graded(angles)):
        for w, ww in zip(*graded(angles)):
            direction = np.array([1.0, u, u * w])
            length = np.linalg.norm(direction)
            direction /= length
            face = min(1 / direction[0], 1.5 / direction.sum())
            # A cubic spline needs no node at r = 0, where degenerate bands have no numerators of their own.
            r = face * (np.arange(radii) + 0.5) / radii
            energy, numerator, rest = [], [], []
            for one in r:
                e, pair = crystal.at(one * direction, bands)
                energy.append(e[near])
                numerator.append(pair[np.ix_(near, near)])
                far = [m for m in range(bands) if m not in near]
                rest.append([np.sum(pair[n, far] / (e[n] - e[far]) ** 2) for n in near])
            yield wu * ww * u / length**3, r, np.array(energy), np.array(numerator), np.array(rest), face


def holes(weight, r, energy, numerator, rest, face, levels, kelvins, fine):
    """Integral of (1 - f) Omega r^2 dr along one ray, times the ray's solid angle: [temperature][level]."""
    edge = r[0] + (np.arange(fine) + 0.5) * (r[-1] - r[0]) / fine
    step = (r[-1] - r[0]) / fine
    e, p, o = spline(r, energy, edge), spline(r, numerator, edge), spline(r, rest, edge)
    gap = e[:, :, None] - e[:, None, :]
    np.einsum("rnn->rn", gap)[...] = np.inf
    omega = o + np.sum(p / gap**2, axis=2)
    out = np.zeros((len(kelvins), len(levels)))
    for t, kelvin in enumerate(kelvins):
        for l, level in enumerate(levels):
            empty = 1 / (1 + np.exp(np.clip((level - e) / (KB * kelvin), -700, 700)))
            out[t, l] = weight * step * np.sum(empty * omega * edge[:, None] ** 2)
    return out


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--level", nargs="+", type=float, required=True)
    parser.add_argument("--temperature", nargs="+", type=float, required=True)
    parser.add_argument("--material", default="GaAs", choices=MATERIALS)
    parser.add_argument("--bands", type=int, default=30)
    parser.add_argument("--angles", type=int, default=24)
    parser.add_argument("--radii", type=int, default=48)
    parser.add_argument("--mesh", type=int, default=24)
    options = parser.parse_args()
    crystal = Crystal(options.material)
    volume = crystal.a**3 / 4
    smooth = full_valence(crystal, options.mesh, options.bands)
    total = np.zeros((len(options.temperature), len(options.level)))
    for ray in rays(crystal, options.bands, options.angles, options.radii):
        total += holes(*ray, options.level, options.temperature, 8000)
    # 48 wedges; the zone's volume is 4 in units of (2 pi / a)^3; the wedge's solid angle is 4 pi / 48.
    value = E2_OVER_HBAR * 1e8 / volume * (smooth - 48 * total / 4)
    print(json.dumps({
        "unit": "(hbar/e) S/cm",
        "valence_top_eV": crystal.top,
        "full_valence": E2_OVER_HBAR * 1e8 / volume * smooth,
        "level_eV": options.level,
        "temperature_K": options.temperature,
        "spin_hall": value.tolist(),
    }))


if __name__ == "__main__":
    main()
