"""Writes the NumPy band grid of this folder. Run: python3 make.py (NumPy 1.24 was used).

velocity[k, d, b, c] = 100 (k + 1) + 10 d + min(b, c) + 0.1 max(b, c) + i (b - c) (k + d + 1), energy[k, b] = k + 2 b - 0.3.
"""
import json
import os
import numpy as np

here = os.path.join(os.path.dirname(os.path.abspath(__file__)), "numpy")
os.makedirs(here, exist_ok=True)
k, d, b, c = np.ogrid[0:6, 0:3, 0:2, 0:2]
velocity = 100 * (k + 1) + 10 * d + np.minimum(b, c) + 0.1 * np.maximum(b, c) + 1j * (b - c) * (k + d + 1)
energy = np.arange(6)[:, None] + 2.0 * np.arange(2)[None, :] - 0.3

np.save(os.path.join(here, "energy.npy"), np.asfortranarray(energy.astype(">f4")))
for first in range(0, 6, 2):
    np.save(os.path.join(here, f"v{first + 8}.npy"), velocity[first : first + 2])
(2 * velocity / 1000).astype("<c8").transpose(1, 0, 3, 2).tofile(os.path.join(here, "spin.c64"))
with open(os.path.join(here, "bandgrid.json"), "w") as out:
    json.dump(
        {
            "format": "bandgrid/1",
            "title": "numpy",
            "lattice": {"unit": "bohr", "vectors": np.eye(3).tolist(), "periodic": 3},
            "mesh": {"divisions": [1, 2, 3], "offset": [0, 0, 0.5]},
            "bands": 2,
            "electronsPerBand": 2,
            "level": {"unit": "meV", "fermi": 1500, "electrons": 2},
            "arrays": {
                "energy": {"files": "energy.npy", "type": "float32", "byteOrder": "big", "axes": ["band", "k"], "unit": "eV"},
                "velocity": {"files": "v*.npy", "type": "complex128", "axes": ["k", "direction", "bra", "ket"], "unit": "eV*angstrom"},
                "moments": {
                    "spin": {"files": "spin.c64", "type": "complex64", "axes": ["direction", "k", "ket", "bra"], "unit": "half-hbar"}
                },
            },
        },
        out,
        indent=1,
    )
