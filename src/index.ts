// index.ts: the public API: what a program that uses tidegauge as a library may import.
export { Fault, type FaultKind, isFault } from "./base/errors.js";
export type { CompanionCurve, CurvesResult, DrudeCurve, ResponseCurve, Table } from "./curves/result.js";
export type { RunOptions } from "./engine/run.js";
export type { Block, BlockReader, GridFacts, MatrixBlock, MomentFacts, Triple, Want } from "./grid/grid.js";
export { type Grid, openGrid } from "./grid/open.js";
export { openReader, viewOf } from "./grid/reader.js";
export {
  createGridWriter,
  type GridDescription,
  type GridLayout,
  type GridWriter,
  type PointData,
} from "./grid/writer.js";
export { curvesCsv } from "./report/csv.js";
export { curvesJson } from "./report/json.js";
export { curvesSvg } from "./report/svg/curves.js";
export { curvesText } from "./report/text.js";
export { buildSample, sampleCatalogue } from "./samples/catalogue.js";
export { writeSample } from "./samples/write.js";
export { type AngleOptions, angle, angleOptions } from "./studies/angle.js";
export type { AngleResult } from "./studies/angle-result.js";
export { type ConvergeOptions, converge, convergeOptions } from "./studies/converge.js";
export type { ConvergeResult } from "./studies/converge-result.js";
export { type DopeOptions, dope, dopeOptions } from "./studies/dope.js";
export type { DopeResult } from "./studies/dope-result.js";
export { inspect, inspectOptions } from "./studies/inspect.js";
export { type LocateOptions, locate, locateOptions } from "./studies/locate.js";
export type { LocateResult } from "./studies/locate-result.js";
export { type PackOptions, type PackSource, pack, packOptions } from "./studies/pack.js";
export type { PackResult } from "./studies/pack-result.js";
export { type SeriesOptions, series, seriesOptions } from "./studies/series.js";
export type { SeriesResult } from "./studies/series-result.js";
export { type SweepOptions, sweep, sweepOptions } from "./studies/sweep.js";
