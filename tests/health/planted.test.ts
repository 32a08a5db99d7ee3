// planted.test.ts: is every planted mistake recognised and rightly named, on a metal, a layer and a magnetic crystal?
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { checkHealth, fullEffort } from "../../src/health/health.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { countBelow } from "../../src/studies/reference.js";
import {
  axes,
  foreign,
  fractions,
  type Mistake,
  planted,
  type Sampled,
  sampled,
  scaledEnergy,
  scaledHessian,
  scaledMoment,
  scaledVelocity,
  transposed,
} from "./plant.js";

const root = mkdtempSync(join(tmpdir(), "tidegauge-health-"));
afterAll(() => rmSync(root, { recursive: true, force: true }));

let copies = 0;
/** What the full checks say aloud of a sample with a mistake in it. */
function findings(sample: Sampled, mistake: Mistake) {
  const directory = join(root, `grid-${copies++}`);
  const grid = planted(sample, directory, mistake);
  const health = checkHealth(grid, fullEffort, (level) => countBelow(grid.facts, level));
  rmSync(directory, { recursive: true });
  return health.findings.filter(({ severity }) => severity !== "note");
}

const hartreeBohr = 27.211386245981 * 0.529177210544;
const gold = sampled(buildSample("metal"), [6, 6, 6]);
const layer = sampled(buildSample("kane-mele"), [12, 12, 1]);
const magnet = sampled(buildSample("random"), [8, 8, 8]);

/** Mistake, id of the finding that must come first, words that its message must hold. */
type Case = readonly [string, Mistake, string, RegExp];

const reversedOrder = (flat: number, [n1, n2, n3]: readonly [number, number, number]): number => {
  const [i1, i2, i3] = [Math.floor(flat / (n2 * n3)), Math.floor(flat / n3) % n2, flat % n3];
  return (i3 * n2 + i2) * n1 + i1;
};

const onGold: Case[] = [
  ["velocity in hartree*bohr", scaledVelocity(1 / hartreeBohr), "velocity-unit", /hartree\*bohr/],
  ["velocity in rydberg*bohr", scaledVelocity(2 / hartreeBohr), "velocity-unit", /rydberg\*bohr/],
  ["velocity in m/s", scaledVelocity(1 / 6.582119569e-6), "velocity-unit", /m\/s/],
  ["velocity divided by hbar in eV fs", scaledVelocity(1 / 0.6582119569), "velocity-unit", /angstrom\/fs/],
  ["velocity in eV*bohr", scaledVelocity(1 / 0.529177210544), "velocity-unit", /lengths are in bohr/],
  ["2 pi too many", scaledVelocity(2 * Math.PI), "velocity-unit", /2 pi/],
  ["sign of the velocity", scaledVelocity(-1), "velocity-sign", /sign/],
  ["x and y exchanged", axes([1, 0, 2]), "velocity-axes", /y, x, z/],
  ["axes turned round", axes([2, 0, 1]), "velocity-axes", /permuted/],
  ["energies in hartree", scaledEnergy(1 / 27.211386245981), "energy-unit", /energies are in hartree/],
  ["energies in rydberg", scaledEnergy(2 / 27.211386245981), "energy-unit", /energies are in rydberg/],
  [
    "lattice in bohr",
    {
      manifest: (m) => {
        m.lattice.vectors = m.lattice.vectors.map((r: number[]) => r.map((x) => x / 0.529177210544));
      },
    },
    "lattice-unit",
    /in bohr/,
  ],
  [
    "reciprocal vectors for real ones",
    {
      manifest: (m) => {
        m.lattice.vectors = [
          [-1, 1, 1],
          [1, -1, 1],
          [1, 1, -1],
        ].map((r) => r.map((x) => (x * 2 * Math.PI) / 4.08));
      },
    },
    "lattice",
    /reciprocal/,
  ],
  ["derivative to fractions", fractions(gold.model), "velocity-fractions", /fractions/],
  ["Pauli matrices as hbar", scaledMoment("spin", 2), "spin-factor", /Pauli/],
  ["hbar as half-hbar", scaledMoment("spin", 0.5), "spin-factor", /half-hbar/],
  ["spin transposed", transposed("spin"), "bra-ket", /moments\.spin/],
  ["orbital transposed", transposed("orbital"), "bra-ket", /moments\.orbital/],
  ["velocity transposed", transposed("velocity"), "bra-ket", /in velocity/],
  ["all transposed", transposed("velocity", "spin", "orbital", "hessian"), "commutator-sign", /all matrices/],
  ["spin of a second diagonalisation", foreign("spin", 18), "foreign-basis", /different diagonalisations/],
  [
    "second derivative in hartree*bohr^2",
    scaledHessian(1 / (hartreeBohr * 0.529177210544)),
    "hessian-unit",
    /hartree\*bohr\^2/,
  ],
  ["free electrons claimed", { hessian: "free-electron" }, "completeness", /free-electron/],
  ["bands cut off", { bands: 12 }, "completeness", /too few bands/],
  [
    "electronsPerBand",
    {
      manifest: (m) => {
        m.electronsPerBand = 2;
      },
    },
    "level",
    /each band holds 1/,
  ],
  [
    "level in rydberg",
    {
      manifest: (m) => {
        m.level.fermi /= 13.605693;
      },
    },
    "level",
    /rydberg/,
  ],
];

const onLayer: Case[] = [
  ["velocity in hartree*bohr", scaledVelocity(1 / hartreeBohr), "velocity-unit", /hartree\*bohr/],
  ["a missing 2 pi", scaledVelocity(1 / (2 * Math.PI)), "velocity-unit", /2 pi/],
  ["sign of the velocity", scaledVelocity(-1), "velocity-sign", /sign/],
  ["x and y exchanged", axes([1, 0, 2]), "velocity-axes", /y, x/],
  ["y mirrored", axes([0, 1, 2], [1, -1, 1]), "velocity-axes", /x, -y/],
  ["derivative to fractions", fractions(layer.model), "velocity-fractions", /fractions/],
  ["energies in hartree", scaledEnergy(1 / 27.211386245981), "energy-unit", /energies are in hartree/],
  [
    "lattice in bohr",
    {
      manifest: (m) => {
        m.lattice.unit = "bohr";
      },
    },
    "lattice-unit",
    /angstrom, but declared as bohr/,
  ],
  ["Pauli matrices as hbar", scaledMoment("spin", 2), "spin-factor", /Pauli/],
  ["spin transposed", transposed("spin"), "bra-ket", /moments\.spin/],
  ["all transposed", transposed("velocity", "spin", "hessian"), "commutator-sign", /all matrices/],
  [
    "hessian pairs row by row",
    { point: (p) => ({ ...p, hessian: [0, 5, 4, 1, 3, 2].map((i) => p.hessian![i]!) }) },
    "hessian-pairs",
    /xx, xy, xz/,
  ],
  ["hessian sign", scaledHessian(-1), "hessian-unit", /sign/],
];

const onMagnet: Case[] = [
  ["velocity in rydberg*bohr", scaledVelocity(2 / hartreeBohr), "velocity-unit", /rydberg\*bohr/],
  ["velocity in m/s", scaledVelocity(1 / 6.582119569e-6), "velocity-unit", /m\/s/],
  ["2 pi too many", scaledVelocity(2 * Math.PI), "velocity-unit", /2 pi/],
  ["z and x exchanged", axes([2, 1, 0]), "velocity-axes", /z, y, x/],
  ["i1 runs fastest", { order: reversedOrder }, "velocity-axes", /order/],
  [
    "vectors in columns",
    {
      manifest: (m) => {
        const v = m.lattice.vectors;
        m.lattice.vectors = [0, 1, 2].map((i) => v.map((r: number[]) => r[i]));
      },
    },
    "lattice",
    /columns/,
  ],
  [
    "reciprocal vectors for real ones",
    {
      manifest: (m) => {
        m.lattice.vectors = reciprocal(m.lattice.vectors);
      },
    },
    "lattice",
    /reciprocal/,
  ],
  ["energies in meV", scaledEnergy(1000), "energy-unit", /meV/],
  [
    "lattice in nm",
    {
      manifest: (m) => {
        m.lattice.vectors = m.lattice.vectors.map((r: number[]) => r.map((x) => x / 10));
      },
    },
    "lattice-unit",
    /nm/,
  ],
  ["Pauli matrices as hbar", scaledMoment("spin", 2), "spin-factor", /Pauli/],
  ["spin transposed", transposed("spin"), "bra-ket", /moments\.spin/],
  ["orbital transposed", transposed("orbital"), "bra-ket", /moments\.orbital/],
  ["velocity transposed", transposed("velocity"), "bra-ket", /in velocity/],
  ["hessian transposed", transposed("hessian"), "bra-ket", /hessian/],
  ["spin of a second diagonalisation", foreign("spin", 6), "foreign-basis", /different diagonalisations/],
  [
    "energies of other points",
    { point: (p, flat) => ({ ...p, energyEv: magnet.points[(flat * 37) % 512]!.energyEv }) },
    "velocity-slopes",
    /not the slope/,
  ],
  ["half of the second derivative", scaledHessian(0.5), "hessian-unit", /factor 2 is missing/],
];

function reciprocal(v: number[][]): number[][] {
  const cross = (a: number[], b: number[]) => [
    a[1]! * b[2]! - a[2]! * b[1]!,
    a[2]! * b[0]! - a[0]! * b[2]!,
    a[0]! * b[1]! - a[1]! * b[0]!,
  ];
  const c = [cross(v[1]!, v[2]!), cross(v[2]!, v[0]!), cross(v[0]!, v[1]!)];
  const volume = v[0]!.reduce((sum, x, i) => sum + x * c[0]![i]!, 0);
  return c.map((row) => row.map((x) => (2 * Math.PI * x) / volume));
}

for (const [name, sample, cases] of [
  ["gold 6^3", gold, onGold],
  ["a layer 12^2", layer, onLayer],
  ["a magnetic crystal 8^3", magnet, onMagnet],
] as const)
  describe(`mistakes planted in ${name}`, () => {
    it.each(cases)("%s", (_what, mistake, id, words) => {
      const [first] = findings(sample, mistake);
      expect(first).toMatchObject({ id, message: expect.stringMatching(words) });
    });
  });
