// npy.ts: the header of a .npy file (versions 1, 2, 3), read and written; knows nothing of manifests.
// Source of the layout: NumPy Enhancement Proposal 1 and its version 2 and 3 amendments.

/** What a .npy header says. */
export interface NpyHeader {
  /** Byte order and type, such as "<c16". */
  readonly descr: string;
  readonly fortranOrder: boolean;
  readonly shape: readonly number[];
  /** Where the numbers begin, bytes. */
  readonly dataOffset: number;
}

/** Bytes of a file that are enough to hold any header that is read. */
export const npyPrefixBytes = 65536;

const magic = [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59];

/** True when `prefix`, the first bytes of a file, carry the mark of a .npy file. */
export function isNpy(prefix: Uint8Array): boolean {
  return magic.every((byte, index) => prefix[index] === byte);
}

/** Parses the header in `prefix`, the first bytes of a file; returns a text that says what is wrong with a bad one. */
export function parseNpy(prefix: Uint8Array): NpyHeader | string {
  if (!isNpy(prefix)) return "it does not begin with the mark of a .npy file";
  if (prefix.length < 12) return "its header ends early";
  const version = prefix[6];
  if (version < 1 || version > 3) return `its .npy version is ${version}; 1, 2 and 3 are known`;
  const view = new DataView(prefix.buffer, prefix.byteOffset, prefix.byteLength);
  const start = version === 1 ? 10 : 12;
  const length = version === 1 ? view.getUint16(8, true) : view.getUint32(8, true);
  if (start + length > npyPrefixBytes) return `its header claims ${length} bytes`;
  if (start + length > prefix.length) return "its header ends early";
  const text = Buffer.from(prefix.buffer, prefix.byteOffset + start, length).toString(
    version === 3 ? "utf8" : "latin1",
  );
  const fields = parseFields(text);
  return typeof fields === "string" ? fields : { ...fields, dataOffset: start + length };
}

const fieldPattern =
  /^\s*(['"])(descr|fortran_order|shape)\1\s*:\s*(?:(['"])([^'"\\]{1,32})\3|(True|False)|\(([\d\sL,]{0,400})\))\s*(,|$)/;

function parseFields(text: string): Omit<NpyHeader, "dataOffset"> | string {
  const body = /^\s*\{([\s\S]*)\}\s*$/.exec(text)?.[1];
  if (body === undefined) return "its header is not a Python dictionary";
  const found = new Map<string, string>();
  let rest = body;
  while (rest.trim() !== "") {
    const match = fieldPattern.exec(rest);
    if (match === null) return "its header has an entry other than a plain descr, fortran_order and shape";
    if (found.has(match[2])) return `its header gives ${match[2]} twice`;
    const kind = match[4] !== undefined ? "descr" : match[5] !== undefined ? "fortran_order" : "shape";
    if (kind !== match[2]) return `its header gives a value of the wrong kind for ${match[2]}`;
    found.set(match[2], match[4] ?? match[5] ?? match[6]);
    rest = rest.slice(match[0].length);
  }
  const [descr, order, dimensions] = ["descr", "fortran_order", "shape"].map((name) => found.get(name));
  if (descr === undefined || order === undefined || dimensions === undefined) {
    return "its header lacks descr, fortran_order or shape";
  }
  const shape = parseShape(dimensions);
  return shape === undefined ? "its shape is not a list of sizes" : { descr, fortranOrder: order === "True", shape };
}

function parseShape(text: string): number[] | undefined {
  const trimmed = text.trim().replace(/,$/, "").trim();
  if (trimmed === "") return [];
  const shape: number[] = [];
  for (const part of trimmed.split(",")) {
    const digits = /^\s*(\d{1,16})L?\s*$/.exec(part)?.[1];
    if (digits === undefined || !Number.isSafeInteger(Number(digits))) return undefined;
    shape.push(Number(digits));
  }
  return shape;
}

/** A version 1 header for numbers of type `descr` in C order, padded so that the numbers begin at a multiple of 64. */
export function npyHeader(descr: string, shape: readonly number[]): Buffer {
  const sizes = shape.length === 1 ? `${shape[0]},` : shape.join(", ");
  const text = `{'descr': '${descr}', 'fortran_order': False, 'shape': (${sizes}), }`;
  const total = Math.ceil((10 + text.length + 1) / 64) * 64;
  const head = Buffer.from([...magic, 1, 0, 0, 0]);
  head.writeUInt16LE(total - 10, 8);
  return Buffer.concat([head, Buffer.from(`${text.padEnd(total - 11)}\n`, "latin1")]);
}
