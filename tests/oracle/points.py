# points.py: the plain mesh sum of a band grid by the literal definitions, independent of the TypeScript code.
"""
points.py GRID --levels FROM TO NUMBER --temperature T... --response NAME... --degenerate EV [--reference EV]

Kubo formula, clean limit, intrinsic interband part:
  j = v_a (charge) or (O v_a + v_a O) / 2 (moment O);  v = dH/dk in eV angstrom
  Omega_n = -2 Im sum_{m != n} <n|j|m><m|v_b|n> / (E_n - E_m)^2
  charge:  sigma_ab   = -(e^2/hbar) (1/V) mean_k sum_n f_n Omega_n   S/cm;         layer: e^2/h
  moments: sigma^g_ab = +(e^2/hbar) (1/V) mean_k sum_n f_n Omega_n   (hbar/e) S/cm; layer: e/2pi
V is the cell's volume, for a layer its area. A response NAME is charge:ab, MOMENT:ab:g, MOMENT:ab (one direction only)
or MOMENT:hall = (1/6) sum_abg eps_abg sigma^g_ab. electronsPerBand multiplies everything.

Conventions that are not in the formulas:
  - a pair with |E_n - E_m| < the --degenerate tolerance, or exactly equal energies, is skipped;
  - T = 0: f = 1 for E < mu, 1/2 for E == mu exactly, 0 above; states_per_eV is null;
  - levels are relative to the manifest's level.fermi (or --reference, an absolute energy in eV);
  - plain sums over a full mesh; reduced grids are refused, patches are ignored.
Prints one JSON document.
"""
import argparse
import glob
import json
import os
import re

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
import numpy as np  # noqa: E402  (after the thread count is set)

# CODATA 2022
BOLTZMANN = 8.617333262e-5  # eV/K
HARTREE = 27.211386245981  # eV
BOHR = 0.529177210544  # angstrom
HBAR = 6.582119569e-16  # eV s
E2_OVER_HBAR = 2.434134805788e-4  # S

ENERGY = {"eV": 1.0, "meV": 1e-3, "hartree": HARTREE, "rydberg": HARTREE / 2}
LENGTH = {"angstrom": 1.0, "bohr": BOHR, "nm": 10.0}
VELOCITY = {"eV*angstrom": 1.0, "hartree*bohr": HARTREE * BOHR, "rydberg*bohr": HARTREE / 2 * BOHR, "m/s": HBAR * 1e10}
MOMENT = {"hbar": 1.0, "half-hbar": 0.5, "1": 1.0}
TYPES = {"float32": "f4", "float64": "f8", "complex64": "c8", "complex128": "c16"}
AXIS = {"x": 0, "y": 1, "z": 2}


def natural(name):
    """Sorting key: digits count as numbers, so that 2 comes before 10."""
    return [(0, int(part), "") if part.isdigit() else (1, 0, part) for part in re.split(r"(\d+)", name) if part]


class Stored:
    """One array of the grid, k first: read(first, count) gives it in the order of `axes`, converted."""

    def __init__(self, directory, entry, sizes, axes, factor):
        order = list(entry["axes"])
        if "direction" in axes and "direction" not in order and sizes["direction"] == 1:
            order.insert(1, "direction")  # a scalar moment may leave it out
        if order[0] != "k" or sorted(order) != sorted(axes):
            raise SystemExit(f"axes {order}: this script wants k first, then any order of {axes[1:]}")
        self.turn = [order.index(axis) for axis in axes]
        self.factor = factor
        patterns = entry["files"] if isinstance(entry["files"], list) else [entry["files"]]
        names = [sorted(glob.glob(os.path.join(glob.escape(directory), p)), key=natural) for p in patterns]
        dtype = np.dtype({"big": ">"}.get(entry.get("byteOrder", "little"), "<") + TYPES[entry["type"]])
        inner = [sizes[axis] for axis in order[1:]]
        self.parts = [self.open(name, dtype, inner) for group in names for name in group]
        self.starts = np.cumsum([0] + [len(part) for part in self.parts])
        if self.starts[-1] != sizes["k"]:
            raise SystemExit(f"{entry['files']}: {self.starts[-1]} k points, expected {sizes['k']}")

    @staticmethod
    def open(name, dtype, inner):
        if name.endswith(".npy"):
            return np.load(name, mmap_mode="r").reshape([-1] + inner)
        return np.memmap(name, dtype=dtype, mode="r").reshape([-1] + inner)

    def read(self, first, count):
        pieces = []
        for part, start in zip(self.parts, self.starts):
            low, high = max(first - start, 0), min(first + count - start, len(part))
            if low < high:
                pieces.append(np.asarray(part[low:high]))
        block = np.concatenate(pieces).transpose(self.turn)
        wide = np.complex128 if np.iscomplexobj(block) else np.float64
        return np.ascontiguousarray(block, dtype=wide) * self.factor


class Grid:
    """A full-mesh band grid: facts in eV and angstrom, and its arrays."""

    def __init__(self, directory):
        with open(os.path.join(directory, "bandgrid.json")) as file:
            manifest = json.load(file)
        if manifest["format"] != "bandgrid/1" or "points" in manifest or "point" in manifest["arrays"]:
            raise SystemExit("this script reads full meshes of bandgrid/1 only")
        self.manifest = manifest
        self.vectors = np.array(manifest["lattice"]["vectors"], float) * LENGTH[manifest["lattice"]["unit"]]
        self.layer = manifest["lattice"]["periodic"] == 2
        self.bands = manifest["bands"]
        self.per_band = manifest["electronsPerBand"]
        self.points = int(np.prod(manifest["mesh"]["divisions"]))
        level = manifest.get("level", {})
        self.fermi = level["fermi"] * ENERGY[level["unit"]] if "fermi" in level else None
        arrays = manifest["arrays"]
        sizes = {"k": self.points, "band": self.bands, "bra": self.bands, "ket": self.bands, "direction": 3}
        axes = ["k", "direction", "bra", "ket"]
        entry = arrays["energy"]
        self.energy = Stored(directory, entry, sizes, ["k", "band"], ENERGY[entry["unit"]])
        self.velocity = Stored(directory, arrays["velocity"], sizes, axes, VELOCITY[arrays["velocity"]["unit"]])
        self.moments = {}
        for name, entry in arrays.get("moments", {}).items():
            here = dict(sizes, direction=1 if entry.get("kind") == "scalar" else 3)
            self.moments[name] = Stored(directory, entry, here, axes, MOMENT[entry["unit"]])

    def measure(self):
        """Volume of the cell in angstrom^3; of a layer the area in angstrom^2."""
        if self.layer:
            return np.linalg.norm(np.cross(self.vectors[0], self.vectors[1]))
        return abs(np.linalg.det(self.vectors))


def terms_of(name):
    """A response as a list of (weight, moment or None, flow, field, component)."""
    parts = name.split(":")
    if parts[0] == "charge":
        return [(1.0, None, AXIS[parts[1][0]], AXIS[parts[1][1]], 0)]
    if parts[1] == "hall":
        even = [(0, 1, 2), (1, 2, 0), (2, 0, 1)]
        return [(1 / 6, parts[0], a, b, g) for a, b, g in even] + [(-1 / 6, parts[0], b, a, g) for a, b, g in even]
    component = AXIS[parts[2]] if len(parts) > 2 else 0
    return [(1.0, parts[0], AXIS[parts[1][0]], AXIS[parts[1][1]], component)]


def prefactor(name, layer, measure):
    """(factor, unit): multiplies mean_k sum_n f_n Omega_n, with Omega in angstrom^2 and the measure of the cell."""
    charge = name.startswith("charge:")
    sign = -1.0 if charge else 1.0
    if layer:  # integral d2k/(2 pi)^2 = mean / area; (e^2/hbar) = 2 pi e^2/h
        return sign * 2 * np.pi / measure, "e^2/h" if charge else "e/2pi"
    return sign * E2_OVER_HBAR * 1e8 / measure, "S/cm" if charge else "(hbar/e) S/cm"


def curvature(energy, current, field, degenerate):
    """Omega[k, n] of a current operator [k, bra, ket] against the field's velocity; close pairs are skipped."""
    gap = energy[:, :, None] - energy[:, None, :]
    skip = (np.abs(gap) < degenerate) | (gap == 0)
    inverse = np.where(skip, 0.0, 1.0 / np.where(skip, 1.0, gap) ** 2)
    return -2.0 * np.sum((current * field.swapaxes(1, 2)).imag * inverse, axis=2)


def response_curvature(name, energy, velocity, moments, degenerate):
    """Omega[k, n] of a whole response; velocity and moments are [k, direction, bra, ket]."""
    total = np.zeros(energy.shape)
    for weight, moment, flow, field, component in terms_of(name):
        current = velocity[:, flow]
        if moment is not None:
            operator = moments[moment][:, component]
            current = (operator @ current + current @ operator) / 2
        total += weight * curvature(energy, current, velocity[:, field], degenerate)
    return total


def occupation(energy, mu, temperature):
    """Fermi factors; at T = 0 the step, 1/2 at E == mu."""
    if temperature == 0:
        return np.where(energy < mu, 1.0, np.where(energy == mu, 0.5, 0.0))
    return 0.5 * (1.0 - np.tanh((energy - mu) / (2 * BOLTZMANN * temperature)))


def slope(energy, mu, temperature):
    """-df/dE in 1/eV, T > 0."""
    half = np.clip(np.abs(energy - mu) / (2 * BOLTZMANN * temperature), None, 300)
    return 1.0 / (4 * BOLTZMANN * temperature * np.cosh(half) ** 2)


def mesh_sum(grid, responses, mu, temperatures, degenerate, chunk=256):
    """electrons[T][mu], states[T][mu], value[response][T][mu] of the plain mesh sum."""
    shape = (len(temperatures), len(mu))
    electrons, states = np.zeros(shape), np.zeros(shape)
    values = np.zeros((len(responses),) + shape)
    needed = {term[1] for name in responses for term in terms_of(name)} - {None}
    for first in range(0, grid.points, chunk):
        count = min(chunk, grid.points - first)
        energy, velocity = grid.energy.read(first, count), grid.velocity.read(first, count)
        moments = {name: grid.moments[name].read(first, count) for name in needed}
        omega = [response_curvature(name, energy, velocity, moments, degenerate) for name in responses]
        for t, temperature in enumerate(temperatures):
            for i, level in enumerate(mu):
                filled = occupation(energy, level, temperature)
                electrons[t, i] += filled.sum()
                states[t, i] += slope(energy, level, temperature).sum() if temperature > 0 else 0.0
                for r, o in enumerate(omega):
                    values[r, t, i] += np.sum(filled * o)
    scale = grid.per_band / grid.points
    for r, name in enumerate(responses):
        values[r] *= scale * prefactor(name, grid.layer, grid.measure())[0]
    return electrons * scale, states * scale, values


def main():
    parser = argparse.ArgumentParser(description="plain mesh sum of a band grid")
    parser.add_argument("grid")
    parser.add_argument("--levels", nargs=3, required=True, metavar=("FROM", "TO", "NUMBER"))
    parser.add_argument("--temperature", nargs="+", type=float, default=[0.0])
    parser.add_argument("--response", nargs="+", default=["charge:xy"])
    parser.add_argument("--degenerate", type=float, required=True, help="eV")
    parser.add_argument("--reference", type=float, help="eV, absolute; default: the manifest's fermi")
    options = parser.parse_args()
    grid = Grid(options.grid)
    reference = grid.fermi if options.reference is None else options.reference
    if reference is None:
        parser.error("the manifest has no level.fermi: give --reference")
    levels = np.linspace(float(options.levels[0]), float(options.levels[1]), int(options.levels[2]))
    electrons, states, values = mesh_sum(
        grid, options.response, reference + levels, options.temperature, options.degenerate
    )
    document = {
        "reference_eV": reference,
        "level_eV": levels.tolist(),
        "temperature_K": options.temperature,
        "electrons_per_cell": electrons.tolist(),
        "states_per_eV": [row.tolist() if t > 0 else None for t, row in zip(options.temperature, states)],
        "responses": [
            {"name": name, "unit": prefactor(name, grid.layer, 1.0)[1], "value": value.tolist()}
            for name, value in zip(options.response, values)
        ],
    }
    print(json.dumps(document))


if __name__ == "__main__":
    main()
