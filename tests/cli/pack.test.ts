// pack.test.ts: do arrays that NumPy wrote become a grid by one command, and does packing keep to words, files and statuses?
import { execFileSync } from "node:child_process";
import { existsSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { freshDirectory } from "../tooling/command.js";
import { runInProcess } from "../tooling/in-process.js";
import { describeWithNumpy } from "../tooling/python.js";

const root = freshDirectory();
afterAll(() => rmSync(root, { recursive: true, force: true }));
const at = (name: string): string => join(root, name);

// Massive Dirac electrons on a square lattice, u = -1: Chern number +1 below the gap, so charge:xy is -1 e^2/h there
// (Qi, Wu and Zhang, Phys. Rev. B 74, 085308 (2006)).
const writer = `
import sys, json, numpy as np
out, n, a = sys.argv[1] + "/", 24, 3.0
sigma = np.array([[[0, 1], [1, 0]], [[0, -1j], [1j, 0]], [[1, 0], [0, -1]]])
x, y = np.meshgrid(*(2 * np.pi * np.arange(n) / n,) * 2, indexing="ij")
d = np.stack([np.sin(x), np.sin(y), -1 + np.cos(x) + np.cos(y)], -1)
e, c = np.linalg.eigh(np.einsum("xyi,iab->xyab", d, sigma))
z = 0 * x
slopes = a * np.stack([np.stack(q, -1) for q in ([np.cos(x), z, -np.sin(x)], [z, np.cos(y), -np.sin(y)], [z, z, z])], 2)
between = lambda o: np.einsum("xyam,xygab,xybn->xygmn", c.conj(), o, c)
v = between(np.einsum("xygi,iab->xygab", slopes, sigma))
s = between(np.broadcast_to(sigma / 2, (n, n, 3, 2, 2)))
np.save(out + "e.npy", e); np.save(out + "v.npy", v); np.save(out + "s.npy", s.astype(">c8"))
np.save(out + "v-fortran.npy", np.asfortranarray(v.reshape(n * n, 3, 2, 2)))
for g, name in enumerate("xyz"): v[:, :, g].tofile(out + f"v{name}.raw")
facts = {"title": "layer", "lattice": {"unit": "angstrom", "vectors": [[a, 0, 0], [0, a, 0], [0, 0, 10]], "periodic": 2},
  "electronsPerBand": 1, "level": {"unit": "eV", "fermi": 0, "electrons": 1},
  "arrays": {"energy": {"files": "e.npy", "unit": "eV"}, "velocity": {"files": out + "v.npy", "unit": "eV*angstrom"},
    "moments": {"spin": {"files": "s.npy", "unit": "hbar"}}}}
def save(name, velocity):
    facts["arrays"]["velocity"] = {**velocity, "unit": "eV*angstrom"}
    json.dump(facts, open(out + name, "w"))
save("facts.json", {"files": out + "v.npy"})
save("fortran.json", {"files": "v-fortran.npy"})
save("split.json", {"files": {g: f"v{g}.raw" for g in "xyz"}, "type": "complex128", "axes": ["k", "bra", "ket"]})
`;

const chern = async (grid: string): Promise<number> => {
  const window = ["--from", "0", "--to", "0", "--points", "1", "--temperature", "0", "--method", "points"];
  const { stdout } = await runInProcess([
    "sweep",
    grid,
    "--response",
    "charge:xy",
    ...window,
    "--workers",
    "1",
    "--json",
  ]);
  return JSON.parse(stdout).responses[0].value[0][0];
};

describeWithNumpy("arrays that NumPy wrote", (python) => {
  beforeAll(() => {
    writeFileSync(at("write.py"), writer);
    execFileSync(python, [at("write.py"), root]);
  });

  it("become a grid with the known answer, and it is said what was inferred", async () => {
    const { status, stdout, stderr } = await runInProcess([
      "pack",
      "--from",
      at("facts.json"),
      "--out",
      at("a"),
      "--check",
    ]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
    expect(stdout).toContain("inferred: bands: 2 (from the shape (24, 24, 2) of e.npy)");
    expect(stdout).toContain("sound; every number was read");
    // As a plain sum over this mesh, see data/format.md.
    expect(await chern(at("a"))).toBeCloseTo(-1.00000024, 8);
  });

  it.each(["fortran.json", "split.json"])("give the same grid as %s", async (facts) => {
    expect((await runInProcess(["pack", "--from", at(facts), "--out", at("b")])).status).toBe(0);
    for (const name of readdirSync(at("b")).filter((each) => each !== "bandgrid.json"))
      expect(readFileSync(join(at("b"), name)).equals(readFileSync(join(at("a"), name)))).toBe(true);
    expect(readdirSync(at("b")).sort()).toEqual(readdirSync(at("a")).sort());
  });

  it("exchanged by mistake are told by their shape", async () => {
    const facts = JSON.parse(readFileSync(at("facts.json"), "utf8"));
    [facts.arrays.energy.files, facts.arrays.velocity.files] = [facts.arrays.velocity.files, facts.arrays.energy.files];
    writeFileSync(at("exchanged.json"), JSON.stringify(facts));
    const { status, stderr } = await runInProcess(["pack", "--from", at("exchanged.json"), "--out", at("no")]);
    expect(status).toBe(3);
    expect(stderr.trimEnd().split("\n")).toHaveLength(2);
    expect(stderr).toMatch(/arrays\.energy: "v\.npy"/);
    expect(existsSync(at("no"))).toBe(false);
  });
});

describe("tidegauge pack", () => {
  beforeAll(async () => {
    await runInProcess(["sample", "haldane", "--mesh", "6", "6", "--out", at("haldane"), "--quiet"]);
  });

  it("packs a grid again, and --json embeds what was done", async () => {
    const args = ["pack", at("haldane"), "--precision", "single", "--split", "--digests", "--check", "--json", "--out"];
    const { status, stdout, stderr } = await runInProcess([...args, at("single")]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
    const result = JSON.parse(stdout);
    expect(result).toMatchObject({ format: "tidegauge.pack/1", points: 36, check: { sound: true } });
    expect(result.bytes).toBeLessThan(result.source.bytes);
    expect(existsSync(join(at("single"), "velocity-x.c64"))).toBe(true);
    expect((await runInProcess(["inspect", at("single"), "--digests", "--quiet"])).stdout).toMatch(/files agree/);
  });

  it("refuses what is wrong in two lines that say what would be right", async () => {
    const cases: [string[], number, RegExp][] = [
      [["--out", at("x")], 2, /nothing to pack is named\n.*--from FACTS\.json/],
      [[at("haldane"), "--from", "f.json", "--out", at("x")], 2, /both named/],
      [[at("haldane")], 2, /--out is missing/],
      [[at("haldane"), "--precision", "half", "--out", at("x")], 2, /--precision half/],
      [[at("haldane"), "--order", "k", "bra", "--out", at("x")], 2, /expected each of k, direction, bra, ket once/],
      [[at("nowhere"), "--out", at("x")], 3, /there is no such file/],
      [["--from", at("nowhere.json"), "--out", at("x")], 3, /there is no such file\n.*JSON file/],
      [[at("haldane"), "--out", root], 2, /is not empty, and is not a band grid/],
    ];
    for (const [args, expected, message] of cases) {
      const { status, stderr } = await runInProcess(["pack", ...args]);
      expect({ args, status }).toEqual({ args, status: expected });
      expect(stderr).toMatch(message);
      expect(stderr.trimEnd().split("\n")).toHaveLength(2);
    }
    expect(existsSync(at("x"))).toBe(false);
  });
});
