// runs.ts: published models through files and the built command: a band grid from `sample`, its curves from `sweep --json`.
import { rmSync } from "node:fs";
import { join } from "node:path";
import { afterAll, expect } from "vitest";
import type { CurvesResult } from "../../src/curves/result.js";
import { freshDirectory, runCommand } from "../tooling/command.js";

export const methods = ["points", "cells"] as const;
export type Method = (typeof methods)[number];

const made: string[] = [];

afterAll(() => {
  for (const path of made) rmSync(path, { recursive: true, force: true });
});

/** A directory of its own, removed after the file's tests. */
export function scratchDirectory(): string {
  const path = freshDirectory();
  made.push(path);
  return path;
}

/** Boltzmann constant in eV/K, CODATA 2022. */
const boltzmannEvPerK = 8.617333262e-5;

/** The temperature whose k_B T is this energy in eV, with every digit: publications state k_B T, the command takes kelvin. */
export const kelvinOf = (thermalEv: number): number => thermalEv / boltzmannEvPerK;

/** Runs the command, which must end with status 0 and write one JSON document; returns that document. */
export async function answer(args: readonly (string | number)[]): Promise<unknown> {
  const { status, stdout, stderr } = await runCommand([...args.map(String), "--json", "--quiet"]);
  expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
  return JSON.parse(stdout);
}

export interface SampleChoice {
  readonly mesh: readonly number[];
  readonly offset?: readonly number[];
  readonly set?: Readonly<Record<string, string | number>>;
}

/** Writes a sample model to disk with `tidegauge sample`; returns the directory of the grid. */
export async function sampled(name: string, { mesh, offset, set }: SampleChoice): Promise<string> {
  const directory = join(scratchDirectory(), "grid");
  const settings = Object.entries(set ?? {}).map(([key, value]) => `${key}=${value}`);
  const args = [...(settings.length > 0 ? ["--set", ...settings] : []), ...(offset ? ["--offset", ...offset] : [])];
  await answer(["sample", name, "--mesh", ...mesh, ...args, "--out", directory]);
  return directory;
}

export interface SweepChoice {
  readonly method: Method;
  readonly response: readonly string[];
  /** First level, last level, number of levels; relative to the grid's reference level. A single number is one level. */
  readonly levels: readonly [from: number, to: number, points: number] | number;
  /** k_B T in eV. */
  readonly thermalEv?: readonly number[];
  readonly more?: readonly (string | number)[];
}

/** The curves that `tidegauge sweep --json` prints for a grid on disk. */
export async function swept(directory: string, choice: SweepChoice): Promise<CurvesResult> {
  const { method, response, levels, thermalEv = [0], more = [] } = choice;
  const [from, to, points] = typeof levels === "number" ? [levels, levels, 1] : levels;
  const window = ["--from", from, "--to", to, "--points", points, "--temperature", ...thermalEv.map(kelvinOf)];
  return (await answer([
    ...["sweep", directory, "--response", ...response, "--method", method],
    // One worker: these grids take less time than a second one takes to start.
    ...[...window, "--workers", 1, ...more],
  ])) as CurvesResult;
}

/** Index of a level and of a temperature in a result; throws when either was not asked for. */
export function place(result: CurvesResult, levelEv: number, thermalEv = 0): { level: number; temperature: number } {
  const level = result.level_eV.findIndex((candidate) => Math.abs(candidate - levelEv) < 1e-9);
  const temperature = result.temperature_K.findIndex((kelvin) => Math.abs(kelvin - kelvinOf(thermalEv)) < 1e-9);
  if (level < 0 || temperature < 0) throw new Error(`no level ${levelEv} eV at k_B T = ${thermalEv} eV in the result`);
  return { level, temperature };
}

/** Value of a response at a level (eV, relative to the reference) and a temperature (k_B T in eV). */
export function curveValue(result: CurvesResult, name: string, levelEv: number, thermalEv = 0): number {
  const response = result.responses.find((candidate) => candidate.name === name);
  if (response === undefined) throw new Error(`no response ${name} in the result`);
  const { level, temperature } = place(result, levelEv, thermalEv);
  return response.value[temperature][level];
}

/** Expects |value - published| < tolerance, and says the difference when not. */
export function expectWithin(value: number, published: number, tolerance: number, what: string): void {
  const difference = value - published;
  expect({ what, value, difference, within: Math.abs(difference) < tolerance }).toMatchObject({ what, within: true });
}
