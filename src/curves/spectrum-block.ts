// spectrum-block.ts: how do the weights on energy nodes travel with a result, so that it can be read at any temperature later?

/** Weights of one kind: little-endian doubles in base64, first [column] below the axis, then [node][column]. */
export type PackedWeights = string;

/** The spectra that a sweep's curves were read from; left out where they would be larger than `mostPackedNumbers`. */
export interface SpectrumBlock {
  /** Uniform nodes in absolute energy. */
  start_eV: number;
  step_eV: number;
  count: number;
  /** Densities at 0 K are taken over this energy. */
  resolution_eV: number;
  /** The neighbours' correction is read at no less than this kT: the mesh does not show it colder. */
  warm_eV: number;
  /** Names of the responses in order, and last "states". */
  columns: string[];
  /** [column]: a sum of weights times this is the response in its unit, the electrons per cell. */
  factor: number[];
  weights: PackedWeights;
  /** The neighbours' correction, where there was a refinement. */
  correction?: PackedWeights;
  /** The plain mesh sum beside it. */
  points?: PackedWeights;
}

/** 40,000 doubles are 430 kB in base64. */
export const mostPackedNumbers = 40_000;

const bytesAtOnce = 0x8000;

/** Packs base and nodes: see PackedWeights. */
export function packWeights(base: Float64Array, nodes: Float64Array): PackedWeights {
  const bytes = new Uint8Array(8 * (base.length + nodes.length));
  const view = new DataView(bytes.buffer);
  base.forEach((value, at) => {
    view.setFloat64(8 * at, value, true);
  });
  nodes.forEach((value, at) => {
    view.setFloat64(8 * (base.length + at), value, true);
  });
  let text = "";
  for (let at = 0; at < bytes.length; at += bytesAtOnce)
    text += String.fromCharCode(...bytes.subarray(at, at + bytesAtOnce));
  return btoa(text);
}

/** The inverse of packWeights; undefined where the text does not hold `columns` x (count + 1) doubles. */
export function unpackWeights(
  packed: PackedWeights,
  { count, columns }: Pick<SpectrumBlock, "count" | "columns">,
): { readonly base: Float64Array; readonly nodes: Float64Array } | undefined {
  const text = atob(packed);
  const numbers = columns.length * (count + 1);
  if (text.length !== 8 * numbers) return undefined;
  const bytes = Uint8Array.from(text, (character) => character.charCodeAt(0));
  const view = new DataView(bytes.buffer);
  const all = Float64Array.from({ length: numbers }, (_, at) => view.getFloat64(8 * at, true));
  return { base: all.slice(0, columns.length), nodes: all.slice(columns.length) };
}
