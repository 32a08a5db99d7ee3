# write_plain.py DIRECTORY: a band grid from Python's standard library alone (raw binary files).
# Model: massive Dirac electrons on a square lattice (Qi, Wu and Zhang, Phys. Rev. B 74, 085308 (2006)),
# H = t [sin(kx a) sx + sin(ky a) sy + (u + cos(kx a) + cos(ky a)) sz] + t0 [cos(kx a) + cos(ky a)],
# spin = sigma / 2 (in hbar).
# Known result: with u = -1 the lower band has Chern number +1, so charge:xy = -1 e^2/h in the gap (level 0).
import array, json, math, os, sys

out = sys.argv[1] if len(sys.argv) > 1 else "dirac-plain"
n, a, t, t0, u = 24, 3.0, 1.0, 0.2, -1.0  # mesh, lattice constant in angstrom, hoppings in eV, mass
field = lambda e, x, y, z: ((e + z, x - 1j * y), (x + 1j * y, e - z))  # e + x sx + y sy + z sz
energy, velocity, spin = array.array("d"), array.array("d"), array.array("d")

for i1 in range(n):
    for i2 in range(n):  # i2 runs fastest
        x, y = 2 * math.pi * i1 / n, 2 * math.pi * i2 / n  # kx a, ky a: the 2 pi belongs to b1, b2
        dx, dy, dz = t * math.sin(x), t * math.sin(y), t * (u + math.cos(x) + math.cos(y))
        e, d, w = t0 * (math.cos(x) + math.cos(y)), math.sqrt(dx * dx + dy * dy + dz * dz), dx + 1j * dy
        s = math.sqrt(2 * d * (d + abs(dz)))  # eigenvectors of d.sigma, the form that never divides by zero
        upper, lower = (((d + dz) / s, w / s), (-w.conjugate() / s, (d + dz) / s)) if dz >= 0 else \
                       ((w.conjugate() / s, (d - dz) / s), ((d - dz) / s, -w / s))
        bands = [lower, upper]  # ascending in energy
        energy.extend([e - d, e + d])
        dh = [field(-t0 * a * math.sin(x), t * a * math.cos(x), 0, -t * a * math.sin(x)),  # dH/dkx, dH/dky, dH/dkz
              field(-t0 * a * math.sin(y), 0, t * a * math.cos(y), -t * a * math.sin(y)), field(0, 0, 0, 0)]
        halves = [field(0, 0.5, 0, 0), field(0, 0, 0.5, 0), field(0, 0, 0, 0.5)]
        for target, operators in ((velocity, dh), (spin, halves)):
            for o in operators:  # direction, then bra, then ket: the same eigenvectors for all of them
                for bra in bands:
                    for ket in bands:
                        v = sum(complex(bra[i]).conjugate() * o[i][j] * ket[j] for i in (0, 1) for j in (0, 1))
                        target.extend([v.real, v.imag])

os.makedirs(out, exist_ok=True)
for name, values in (("energy.f64", energy), ("velocity.c128", velocity), ("spin.c128", spin)):
    with open(os.path.join(out, name), "wb") as file:
        values.tofile(file)
order = {"byteOrder": sys.byteorder}
matrix = {"type": "complex128", "axes": ["k", "direction", "bra", "ket"], **order}
manifest = {
    "format": "bandgrid/1",
    "title": "Massive Dirac electrons on a square lattice, from plain Python",
    "lattice": {"unit": "angstrom", "vectors": [[a, 0, 0], [0, a, 0], [0, 0, 10]], "periodic": 2},
    "mesh": {"divisions": [n, n, 1], "offset": [0, 0, 0]},
    "bands": 2,
    "electronsPerBand": 1,
    "level": {"unit": "eV", "fermi": 0.0, "electrons": 1},
    "arrays": {
        "energy": {"files": "energy.f64", "type": "float64", "axes": ["k", "band"], "unit": "eV", **order},
        "velocity": {"files": "velocity.c128", "unit": "eV*angstrom", **matrix},
        "moments": {"spin": {"files": "spin.c128", "unit": "hbar", **matrix}},
    },
}
with open(os.path.join(out, "bandgrid.json"), "w") as file:
    json.dump(manifest, file, indent=2)
