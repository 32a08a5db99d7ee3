// sweep.ts: a made-up but plausible sweep for the tests of reports; not physics, only its shape.
import type { CurvesResult, ResponseCurve, Table } from "../../src/curves/result.js";

export interface SweepOptions {
  responses?: string[];
  temperatureK?: number[];
  levels?: number;
  title?: string;
}

/** Peaks of both signs that broaden with temperature, on a smooth background. */
function shape(seed: number, levelEv: number, temperatureK: number): number {
  const peaks = [0, 1, 2, 3, 4].map((n) => {
    const centre = Math.sin(12.9898 * (seed + 1) * (n + 1)) * 2.2;
    const width = 0.03 + 0.04 * n + 1.8e-4 * temperatureK;
    const height = Math.cos(78.233 * (seed + 2) * (n + 1)) * 40;
    return (height / width) * 0.1 * (1 / (1 + ((levelEv - centre) / width) ** 2));
  });
  return (180 * Math.sin(0.7 * levelEv + seed) + peaks.reduce((sum, peak) => sum + peak, 0) * 6) * (1 + seed / 2);
}

const tableOf = (temperatureK: number[], levelEv: number[], f: (t: number, e: number) => number): Table =>
  temperatureK.map((t) => levelEv.map((e) => f(t, e)));

function response(name: string, seed: number, temperatureK: number[], levelEv: number[]): ResponseCurve {
  const of = (f: (t: number, e: number) => number) => tableOf(temperatureK, levelEv, f);
  const sampling = (t: number, e: number) => 4 + 0.04 * Math.abs(shape(seed, e, t)) + 800 / (t + 80);
  const model = (t: number, e: number) => 2 + Math.cos(3 * e) ** 2 * (1 + t / 1000);
  return {
    name,
    unit: name.startsWith("charge") ? "S/cm" : "(hbar/e) S/cm",
    value: of((t, e) => shape(seed, e, t)),
    error: of((t, e) => (e > 1.9 && seed === 0 ? Number.NaN : Math.hypot(sampling(t, e), model(t, e)))),
    error_sampling: of(sampling),
    error_model: of(model),
    points: of((t, e) => shape(seed, e, t) + (3000 / (t + 40)) * Math.sin(57 * e + seed) * Math.sin(31 * e)),
  };
}

export function sweep(options: SweepOptions = {}): CurvesResult {
  const {
    responses = ["spin:xy:z"],
    temperatureK = [300],
    levels = 401,
    title = "platinum-like d metal, 18 bands",
  } = options;
  const levelEv = Array.from({ length: levels }, (_, e) => Number((-2 + (4 * e) / (levels - 1)).toFixed(6)));
  const of = (f: (t: number, e: number) => number) => tableOf(temperatureK, levelEv, f);
  const states = (t: number, e: number) => 1.4 + Math.sin(4 * e) ** 2 * 1.5 * (1 - t / 3000) + (e > 0.8 ? -1.1 : 0.3);
  return {
    format: "tidegauge.curves/1",
    version: "0.1.0",
    grid: { title, sha256: "ab".repeat(32), bands: 18, divisions: [24, 24, 24], periodic: 3, points: 13824 },
    job: { response: responses, temperature: temperatureK, method: "refine", accuracy: 0.01 },
    reference_eV: 6.431,
    level_eV: levelEv,
    temperature_K: temperatureK,
    electrons_per_cell: of((_, e) => 10 + 1.7 * e),
    doping_per_cell: of((_, e) => 1.7 * e),
    doping_density: of((_, e) => (1.7 * e) / 1.51e-23),
    doping_density_unit: "per_cm3",
    states_per_eV: of(states),
    responses: responses.map((name, seed) => response(name, seed, temperatureK, levelEv)),
    sampling: { method: "refine", stored: 13824, samples: 412345, deepest: 5 },
    notes: ["intrinsic only, rigid band"],
  };
}
