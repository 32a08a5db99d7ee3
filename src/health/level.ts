// level.ts: does the stated level hold the stated electrons, and which slip would make it so?
import { hartreeEv, rydbergEv } from "../base/constants.js";
import type { GridFacts } from "../grid/grid.js";
import { type HealthFinding, shown } from "./finding.js";

/** Electrons per cell in stored states up to a level, eV. */
export type Count = (levelEv: number) => number;

/**
 * 2% of the electrons of a cell, at least 0.1: beyond what the sharp step of a usual mesh leaves open, below any slip in counting. On a small mesh
 * a star of points with its pairs of bands (48 states in a crystal, 24 in a layer) may lie on either side.
 */
const allowed = ({ electrons = 0, points, periodic }: GridFacts): number =>
  Math.max(0.1, 0.02 * electrons, (periodic === 3 ? 48 : 24) / points);

interface Guess {
  readonly counted: number;
  readonly words: string;
  readonly cure: string;
}

function guesses({ fermiEv = 0, electrons = 0, electronsPerBand }: GridFacts, count: Count, counted: number): Guess[] {
  const factors: [number, string, string][] = [
    [hartreeEv, "level.fermi is in hartree", "hartree"],
    [rydbergEv, "level.fermi is in rydberg", "rydberg"],
    [1 / hartreeEv, "level.fermi is in eV, but declared as hartree", "eV"],
    [1 / rydbergEv, "level.fermi is in eV, but declared as rydberg", "eV"],
    [2, "level.fermi is in hartree, but declared as rydberg", "hartree"],
    [0.5, "level.fermi is in rydberg, but declared as hartree", "rydberg"],
    [1e-3, "level.fermi is in meV", "meV"],
    [1e3, "level.fermi is in eV, but declared as meV", "eV"],
  ];
  const other = electronsPerBand === 1 ? 2 : 1;
  return [
    {
      counted: (counted * other) / electronsPerBand,
      words: `each band holds ${other} electron${other === 2 ? "s" : ""}, not ${electronsPerBand}`,
      cure: `Set electronsPerBand to ${other}.`,
    },
    ...factors.map(([factor, words, unit]) => ({
      counted: count(fermiEv * factor),
      words,
      cure: `Set level.unit to "${unit}".`,
    })),
    { counted: counted, words: "", cure: "" },
  ].filter(({ words, counted: n }) => words !== "" && electrons > 0 && n > 0);
}

/** Compares level.fermi with level.electrons. `count` reads all energies. */
export function checkLevel(facts: GridFacts, count: Count): HealthFinding[] {
  const { fermiEv, electrons, bands, electronsPerBand } = facts;
  if (fermiEv === undefined || electrons === undefined) return [];
  const counted = count(fermiEv);
  const room = allowed(facts);
  if (Math.abs(counted - electrons) <= room) return [];
  const found = guesses(facts, count, counted).filter((guess) => Math.abs(guess.counted - electrons) <= room);
  const [first] = found;
  return [
    {
      id: "level",
      severity: "warn",
      message: `level.fermi and level.electrons disagree${first === undefined ? "" : `: ${found.map(({ words }) => words).join(", or ")}`}`,
      evidence: `up to ${fermiEv.toFixed(4)} eV the mesh holds ${shown(counted, 5)} electrons per cell (of ${bands * electronsPerBand} at most), stated are ${electrons}${first === undefined ? "" : `; put right it holds ${shown(first.counted, 5)}`}`,
      measured: "states of the stored mesh up to the level, every point with equal weight",
      cure:
        first?.cure ??
        "Check level.fermi and its unit, level.electrons (valence electrons in these bands) and electronsPerBand.",
    },
  ];
}
