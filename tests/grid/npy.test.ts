// npy.test.ts: headers as NumPy writes them are understood; hostile ones are refused with a text, never with a crash.
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { isNpy, npyHeader, npyPrefixBytes, parseNpy } from "../../src/grid/npy.js";

const mark = [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59];

function header(version: number, text: string, claimed = text.length): Buffer {
  const head = Buffer.from([...mark, version, 0, 0, 0, 0, 0]);
  if (version === 1) head.writeUInt16LE(claimed & 0xffff, 8);
  else head.writeUInt32LE(claimed >>> 0, 8);
  return Buffer.concat([head.subarray(0, version === 1 ? 10 : 12), Buffer.from(text, "latin1")]);
}

const good = "{'descr': '<c16', 'fortran_order': False, 'shape': (8, 3, 4, 4), }          \n";

describe("parseNpy", () => {
  it.each([1, 2, 3])("reads version %i", (version) => {
    expect(parseNpy(header(version, good))).toEqual({
      descr: "<c16",
      fortranOrder: false,
      shape: [8, 3, 4, 4],
      dataOffset: (version === 1 ? 10 : 12) + good.length,
    });
  });

  it.each([
    ["{'shape': (5,), 'fortran_order': True, 'descr': '>f8'}", { descr: ">f8", fortranOrder: true, shape: [5] }],
    ['{"descr":"<f4","fortran_order":False,"shape":()}', { descr: "<f4", fortranOrder: false, shape: [] }],
    ["{'descr': '<f8', 'fortran_order': False, 'shape': (3L, 4L), }", { shape: [3, 4] }],
  ])("reads %s", (text, expected) => {
    expect(parseNpy(header(1, text))).toMatchObject(expected);
  });

  it.each([
    ["nothing", Buffer.alloc(0)],
    ["the mark alone", Buffer.from(mark)],
    ["version 0", header(0, good)],
    ["version 9", header(9, good)],
    ["a length beyond the file", header(1, good, 60000)],
    ["a length of 4 GB", header(2, good, 0xffffffff)],
    ["no dictionary", header(1, "descr <f8")],
    ["an unknown key", header(1, "{'descr': '<f8', 'fortran_order': False, 'shape': (3,), 'x': 'y'}")],
    ["a key twice", header(1, "{'descr': '<f8', 'descr': '<f8', 'fortran_order': False, 'shape': (3,)}")],
    ["a key missing", header(1, "{'descr': '<f8', 'shape': (3,)}")],
    ["a wrong kind", header(1, "{'descr': (3,), 'fortran_order': False, 'shape': (3,)}")],
    ["a structured type", header(1, "{'descr': [('a', '<f8')], 'fortran_order': False, 'shape': (3,)}")],
    ["a negative size", header(1, "{'descr': '<f8', 'fortran_order': False, 'shape': (-3,)}")],
    ["a size too large to count", header(1, "{'descr': '<f8', 'fortran_order': False, 'shape': (9999999999999999,)}")],
    ["an empty size", header(1, "{'descr': '<f8', 'fortran_order': False, 'shape': (3,,4)}")],
    ["code", header(1, "{'descr': '<f8', 'fortran_order': __import__('os'), 'shape': (3,)}")],
    ["deep nesting", header(1, `{'descr': ${"(".repeat(50000)}`)],
  ])("refuses %s", (_, bytes) => {
    expect(typeof parseNpy(bytes)).toBe("string");
  });

  it("never crashes on random bytes behind the mark", () => {
    const bytes = fc.uint8Array({ maxLength: 300 });
    const parts = fc.array(fc.constantFrom("{", "}", "'descr'", ":", ",", "(", "3", "'<f8'", "True", " ", "\n"));
    fc.assert(
      fc.property(bytes, fc.integer({ min: 0, max: 4 }), parts, (tail, version, text) => {
        parseNpy(Buffer.concat([Buffer.from([...mark, version, 0]), tail]));
        parseNpy(header(version, text.join("")));
      }),
    );
  });
});

describe("npyHeader", () => {
  it("is read back and aligned to 64 bytes", () => {
    const shapes = fc.array(fc.integer({ min: 0, max: 2 ** 40 }), { maxLength: 5 });
    fc.assert(
      fc.property(fc.constantFrom("<f4", ">c16"), shapes, (descr, shape) => {
        const bytes = npyHeader(descr, shape);
        expect(isNpy(bytes)).toBe(true);
        expect(bytes.length % 64).toBe(0);
        expect(bytes.length).toBeLessThan(npyPrefixBytes);
        expect(parseNpy(bytes)).toEqual({ descr, fortranOrder: false, shape, dataOffset: bytes.length });
      }),
    );
  });
});
