// page-sections.ts: what does the page show of each result besides sweeps: which pictures, which text?
import { dataFault, isFault } from "../base/errors.js";
import type { CurvesResult } from "../curves/result.js";
import type { AngleResult } from "../studies/angle-result.js";
import type { DopeResult } from "../studies/dope-result.js";
import { angleText } from "./angle-text.js";
import type { AnyResult } from "./any-result.js";
import { convergeText } from "./converge-text.js";
import { dopeText } from "./dope-text.js";
import { inspectText } from "./inspect-text.js";
import { locateText } from "./locate-text.js";
import { requestText } from "./request-text.js";
import { seriesText } from "./series-text.js";
import { angleSvg } from "./svg/angle.js";
import { convergeSvg } from "./svg/converge.js";
import { dopeSvg } from "./svg/dope.js";
import { locateMapSvg, locatePathSvg } from "./svg/locate.js";
import { requestSvg } from "./svg/request.js";
import { seriesSvg } from "./svg/series.js";

/** A picture as an SVG document, and what it shows in words. */
export interface SectionPicture {
  readonly words: string;
  readonly svg: string;
}

/** What a page shows of one result; all texts are plain. */
export interface PageSection {
  readonly heading: string;
  readonly pictures: readonly SectionPicture[];
  readonly text: string;
}

/** Columns of a text in the page. */
const width = 92;

/** The sweep of a `dope` result among the given ones: dope writes it beside its own. */
function sweepOf(dope: DopeResult, sweeps: readonly CurvesResult[]): CurvesResult | undefined {
  const found = sweeps.find(
    ({ grid, temperature_K: kelvins, responses }) =>
      grid.sha256 === dope.grid.sha256 &&
      dope.temperature_K.every((kelvin) => kelvins.includes(kelvin)) &&
      dope.responses.every(({ name }) => responses.some((each) => each.name === name)),
  );
  if (found === undefined) return undefined;
  const responses = dope.responses.flatMap(({ name }) => found.responses.filter((each) => each.name === name));
  return { ...found, responses };
}

/** The curves that an `angle` result carries, in the form of a sweep. */
function curvesOfAngle(result: AngleResult): CurvesResult {
  const { version, grid, job, reference_eV, level_eV, sampling, notes } = result;
  const responses = result.responses.map(({ name, unit, curve, curve_error: error }) => {
    return { name, unit, value: curve, error, error_sampling: [], error_model: [], points: [] };
  });
  const none = { electrons_per_cell: [], doping_per_cell: [], doping_density: [], states_per_eV: [] };
  return {
    format: "tidegauge.curves/1",
    ...{ version, grid, job, reference_eV, level_eV, sampling, notes, responses, ...none },
    temperature_K: result.responses[0]?.curve_temperature_K ?? [],
    doping_density_unit: grid.periodic === 3 ? "per_cm3" : "per_cm2",
  };
}

function dopeSection(result: DopeResult, sweeps: readonly CurvesResult[]): PageSection {
  const curves = sweepOf(result, sweeps);
  const missing = curves ? "" : "\n\nNo picture: give the curves.json that dope wrote beside dope.json as well.";
  const words = "Responses against doping, peaks marked";
  return {
    heading: "Doping",
    pictures: curves ? [{ words, svg: dopeSvg(result, curves) }] : [],
    text: dopeText(result, { width }) + missing,
  };
}

function drawn(result: Exclude<AnyResult, CurvesResult>, sweeps: readonly CurvesResult[]): PageSection {
  switch (result.format) {
    case "tidegauge.dope/1":
      return dopeSection(result, sweeps);
    case "tidegauge.angle/1": {
      const svg = angleSvg(result, curvesOfAngle(result));
      const words = "Hall angles and conductivities against measured values";
      return { heading: "Hall angle", pictures: [{ words, svg }], text: angleText(result, { width }) };
    }
    case "tidegauge.converge/1": {
      const words = "Errors of plain sums and refined values against the level, mesh by mesh";
      const pictures = [{ words, svg: convergeSvg(result) }];
      return { heading: "Convergence", pictures, text: convergeText(result, width) };
    }
    case "tidegauge.series/1": {
      const pictures = [{ words: `Responses against ${result.tag}`, svg: seriesSvg(result) }];
      return { heading: "Series", pictures, text: seriesText(result, { width }) };
    }
    case "tidegauge.locate/1": {
      const map = { words: "Map of the integrand in the zone", svg: locateMapSvg(result) };
      const path = result.path ? [{ words: "Bands and integrand along a path", svg: locatePathSvg(result) }] : [];
      return { heading: "Where it comes from", pictures: [map, ...path], text: locateText(result, { width }) };
    }
    case "tidegauge.request/1": {
      const pictures = [{ words: "Error left against the number of cells computed next", svg: requestSvg(result) }];
      return { heading: "What to compute next", pictures, text: requestText(result, { width }) };
    }
    case "tidegauge.inspect/1":
      return { heading: "The grid", pictures: [], text: inspectText(result, width) };
  }
}

/** The section of one result; `source` names its file in errors. Throws a data Fault where the result is not whole. */
export function pageSection(
  result: Exclude<AnyResult, CurvesResult>,
  sweeps: readonly CurvesResult[],
  source: string,
): PageSection {
  try {
    return drawn(result, sweeps);
  } catch (cause) {
    if (isFault(cause)) throw cause;
    throw dataFault(
      `${source} is no whole ${result.format} result.`,
      "Write it again with the command it is from.",
      cause,
    );
  }
}
