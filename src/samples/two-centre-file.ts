// two-centre-file.ts: what a two-centre parameter file holds, and how one is read and checked.
import { readFileSync } from "node:fs";
import { z } from "zod";
import { dataFault } from "../base/errors.js";
import { integralNames } from "./two-centre-integrals.js";

const number = z.number();
const positive = z.number().positive();
const vector = z.tuple([number, number, number]);

const radial = z.strictObject({ a: number, b: number, c: number, d2: number });
const onsite = z.strictObject({ a: number, b: number, c: number, d: number });
const integrals = z.strictObject({
  sss: radial,
  sps: radial,
  pps: radial,
  ppp: radial,
  sds: radial,
  pds: radial,
  pdp: radial,
  dds: radial,
  ddp: radial,
  ddd: radial,
});

const lattice = z
  .strictObject({
    kind: z.enum(["fcc", "bcc", "sc", "vectors"]),
    a_angstrom: positive.optional(),
    c_over_a: positive.optional(),
    vectors_angstrom: z.tuple([vector, vector, vector]).optional(),
  })
  .refine((it) => (it.kind === "vectors") === (it.vectors_angstrom !== undefined), {
    message: 'kind "vectors" goes with vectors_angstrom, and only with it',
  })
  .refine((it) => (it.kind === "vectors") !== (it.a_angstrom !== undefined), {
    message: "fcc, bcc and sc need a_angstrom; vectors must not have one",
  })
  .refine((it) => it.kind !== "vectors" || it.c_over_a === undefined, {
    message: "c_over_a stretches fcc, bcc or sc; vectors must not have one",
  });

const schema = z.strictObject({
  title: z.string().min(1),
  source: z.string().min(1),
  units: z.literal("Rydberg, bohr"),
  formulas: z.array(z.string()).optional(),
  lattice,
  electrons: z.number().positive().lt(18),
  xi_d_eV: z.number(),
  lambda2: positive,
  cutoff: positive,
  width: positive,
  onsite: z.strictObject({ s: onsite, p: onsite, d: onsite }),
  H: integrals,
  S: integrals.optional(),
  reference: z.strictObject({ fermi_Ry: number, how: z.string().min(1) }).optional(),
});

/**
 * A checked parameter file of a monatomic metal with orbitals s, p, d (format: data/metals/README.md). Energies in
 * Rydberg, lengths in bohr, except where a name says otherwise. Without S the orbitals are orthogonal. `reference` is
 * the Fermi level of the file as it stands: any override makes it void.
 */
export type TwoCentreFile = z.infer<typeof schema>;

/** Checks an already parsed file. Throws a data Fault that names `where`, the field, what was expected and found. */
export function checkTwoCentreFile(content: unknown, where: string): TwoCentreFile {
  const result = schema.safeParse(content);
  if (result.success) return result.data;
  const issue = result.error.issues[0];
  const field = issue.path.length === 0 ? "the top level" : issue.path.join(".");
  const more = result.error.issues.length > 1 ? ` (and ${result.error.issues.length - 1} more)` : "";
  throw dataFault(
    `${where}: two-centre parameters: at ${field}: ${issue.message}${more}`,
    `Correct ${field}; the fields are title, source, units "Rydberg, bohr", lattice, electrons, xi_d_eV, lambda2, cutoff, width, onsite {s, p, d}, H and optionally S {${integralNames.join(", ")}}.`,
  );
}

/** Reads and checks a parameter file. Throws a data Fault where it cannot be read, is not JSON, or a field is wrong. */
export function readTwoCentreFile(path: string): TwoCentreFile {
  let text: string;
  try {
    text = readFileSync(path, "utf8");
  } catch (cause) {
    throw dataFault(
      `${path}: the parameter file cannot be read`,
      "Give the path of a two-centre parameter file (JSON).",
      cause,
    );
  }
  let content: unknown;
  try {
    content = JSON.parse(text);
  } catch (cause) {
    const reason = cause instanceof Error ? cause.message.split("\n")[0] : "";
    throw dataFault(`${path}: the parameter file is not valid JSON: ${reason}`, "Correct the JSON syntax.", cause);
  }
  return checkTwoCentreFile(content, path);
}
