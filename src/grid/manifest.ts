// manifest.ts: which fields bandgrid.json has and which values each may take.
import { z } from "zod";
import { energyUnits, hessianUnits, lengthUnits, momentUnits, namesOf, velocityUnits } from "./units.js";

/** Name of the manifest inside a band grid directory. */
export const manifestName = "bandgrid.json";
/** Value of its `format` field. */
export const formatName = "bandgrid/1";
/** More bands than this cannot be indexed: the 2 x 6 x bands^2 numbers of a k point's hessian must stay below 2^31. */
export const mostBands = 13000;

const longest = 4096;
const anyNumber = z.number();
const count = z.int().min(1);
const triple = z.tuple([anyNumber, anyNumber, anyNumber]);
const countTriple = z.tuple([count, count, count]);
const digest = z.string().regex(/^[0-9a-f]{64}$/i, "64 hexadecimal digits");

/** How the numbers of an array may be stored. */
export const numberTypes = ["float32", "float64", "complex64", "complex128"] as const;
/** The axes an array may have. */
export const axisNames = ["k", "band", "direction", "pair", "bra", "ket"] as const;

/** Components of an array with directions, and of one with pairs of directions. */
export const directionNames = ["x", "y", "z"] as const;
export const pairNames = ["xx", "yy", "zz", "yz", "zx", "xy"] as const;

/** An object that may have a `value` for each component. */
function perComponent<T extends z.ZodType>(value: T) {
  const one = value.optional();
  return z.strictObject({ x: one, y: one, z: one, xx: one, yy: one, zz: one, yz: one, zx: one, xy: one });
}

const fileNames = z.union([
  z.string().min(1).max(longest),
  z.array(z.string().min(1).max(longest)).min(1).max(100_000),
]);
const digests = z.union([digest, z.array(digest)]);

function arraySchema<T extends object>(units: T) {
  return z.strictObject({
    files: z.union([...fileNames.options, perComponent(fileNames)]),
    type: z.enum(numberTypes),
    axes: z.array(z.enum(axisNames)).min(1).max(5),
    unit: z.enum(namesOf(units)),
    byteOrder: z.enum(["little", "big"]).default("little"),
    sha256: z.union([...digests.options, perComponent(digests)]).optional(),
  });
}

const momentSchema = arraySchema(momentUnits).extend({
  underTimeReversal: z.enum(["odd", "even"]).default("odd"),
  kind: z.enum(["axial", "polar", "scalar"]).default("axial"),
});

// A moment's name becomes part of response names (spin:xy:z) and of file names.
const momentName = z
  .string()
  .max(64)
  .regex(/^\p{L}[\p{L}\p{N}_.-]*$/u, "a letter, then letters, digits, _ . -");

const plainArray = arraySchema({ "1": 1 }).extend({ unit: z.enum(["1"]).default("1") });

const rotation = z.tuple([triple, triple, triple]);

/** The manifest as it stands in the file; fields not listed are refused. */
export const manifestSchema = z.strictObject({
  format: z.literal(formatName),
  title: z.string().max(longest).default(""),
  lattice: z.strictObject({
    unit: z.enum(namesOf(lengthUnits)),
    vectors: z.tuple([triple, triple, triple]),
    periodic: z.union([z.literal(3), z.literal(2)]),
  }),
  mesh: z.strictObject({ divisions: countTriple, offset: triple.default([0, 0, 0]) }).optional(),
  patch: z.strictObject({ divisions: countTriple, cells: z.string().min(1).max(longest) }).optional(),
  patches: z.array(z.string().min(1).max(longest)).optional(),
  points: count.optional(),
  symmetry: z.array(z.strictObject({ rotation, timeReversal: z.boolean().default(false) })).optional(),
  bands: count.max(mostBands),
  electronsPerBand: z.union([z.literal(1), z.literal(2)]),
  level: z.strictObject({
    unit: z.enum(namesOf(energyUnits)),
    fermi: anyNumber.optional(),
    electrons: anyNumber.optional(),
  }),
  arrays: z.strictObject({
    energy: arraySchema(energyUnits),
    velocity: arraySchema(velocityUnits),
    moments: z.record(momentName, momentSchema).default({}),
    hessian: z.union([z.literal("free-electron"), arraySchema(hessianUnits)]).optional(),
    point: plainArray.optional(),
    weight: plainArray.optional(),
  }),
  tags: z.record(z.string().max(longest), z.union([z.string(), z.number(), z.boolean()])).default({}),
  provenance: z.unknown().optional(),
});

/** A manifest with its defaults filled in. */
export type Manifest = z.output<typeof manifestSchema>;
/** The entry of one array, whatever its role. */
export type ArrayEntry = Omit<z.output<ReturnType<typeof arraySchema>>, "unit"> & { readonly unit: string };
export type NumberType = (typeof numberTypes)[number];
export type Axis = (typeof axisNames)[number];
