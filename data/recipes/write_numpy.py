# write_numpy.py DIRECTORY: a band grid from NumPy (.npy files).
# Model: massive Dirac electrons on a square lattice (Qi, Wu and Zhang, Phys. Rev. B 74, 085308 (2006)),
# H = t [sin(kx a) sx + sin(ky a) sy + (u + cos(kx a) + cos(ky a)) sz] + t0 [cos(kx a) + cos(ky a)],
# spin = sigma / 2 (in hbar).
# Known result: with u = -1 the lower band has Chern number +1, so charge:xy = -1 e^2/h in the gap (level 0).
import json, os, sys
import numpy as np

out = sys.argv[1] if len(sys.argv) > 1 else "dirac-numpy"
n, a, t, t0, u = 24, 3.0, 1.0, 0.2, -1.0  # mesh, lattice constant in angstrom, hoppings in eV, mass
sigma = np.array(  # 1, sx, sy, sz
    [[[1, 0], [0, 1]], [[0, 1], [1, 0]], [[0, -1j], [1j, 0]], [[1, 0], [0, -1]]]
)

fraction = np.stack(np.meshgrid(np.arange(n) / n, np.arange(n) / n, indexing="ij"), -1).reshape(-1, 2)  # i2 fastest
x, y = 2 * np.pi * fraction.T  # kx a, ky a: the 2 pi belongs to b1, b2
field = lambda *d: np.einsum("dk,dij->kij", np.broadcast_arrays(*d, x)[:4], sigma)  # e + x sx + y sy + z sz
h = field(t0 * (np.cos(x) + np.cos(y)), t * np.sin(x), t * np.sin(y), t * (u + np.cos(x) + np.cos(y)))
dhx = a * field(-t0 * np.sin(x), t * np.cos(x), 0, -t * np.sin(x))
dhy = a * field(-t0 * np.sin(y), 0, t * np.cos(y), -t * np.sin(y))

energy, vectors = np.linalg.eigh(h)  # ascending; the columns of vectors[k] are the kets
bra = vectors.conj().swapaxes(1, 2)[:, None]  # one set of eigenvectors for every matrix
os.makedirs(out, exist_ok=True)
np.save(f"{out}/energy.npy", energy)
np.save(f"{out}/velocity.npy", bra @ np.stack([dhx, dhy, 0 * h], 1) @ vectors[:, None])  # [k, direction, bra, ket]
np.save(f"{out}/spin.npy", bra @ (sigma[1:] / 2) @ vectors[:, None])

matrix = {"type": "complex128", "axes": ["k", "direction", "bra", "ket"]}
manifest = {
    "format": "bandgrid/1",
    "title": "Massive Dirac electrons on a square lattice, from NumPy",
    "lattice": {"unit": "angstrom", "vectors": [[a, 0, 0], [0, a, 0], [0, 0, 10]], "periodic": 2},
    "mesh": {"divisions": [n, n, 1], "offset": [0, 0, 0]},
    "bands": 2,
    "electronsPerBand": 1,
    "level": {"unit": "eV", "fermi": 0.0, "electrons": 1},
    "arrays": {
        "energy": {"files": "energy.npy", "type": "float64", "axes": ["k", "band"], "unit": "eV"},
        "velocity": {"files": "velocity.npy", "unit": "eV*angstrom", **matrix},
        "moments": {"spin": {"files": "spin.npy", "unit": "hbar", **matrix}},
    },
}
with open(f"{out}/bandgrid.json", "w") as file:
    json.dump(manifest, file, indent=2)
