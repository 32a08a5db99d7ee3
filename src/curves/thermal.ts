// thermal.ts: what current does a temperature gradient drive? The Mott integral of every column, from the weights on the nodes alone.
import { boltzmannEvPerK } from "../base/constants.js";
import { fermiReach } from "../spectrum/axis.js";
import type { CurveSampler, NodeWeights, Reading } from "./occupation.js";

/**
 * Entropy of a state in units of k_B, -f ln f - (1 - f) ln(1 - f), at x = (E - mu) / kT: what a step of the cold curve at E adds to
 * integral de (-df/de) ((e - mu) / kT) W(e), since the integral of y (-df/dy) from x on is x f(x) + ln(1 + e^-x).
 */
export function stateEntropy(x: number): number {
  const size = Math.abs(x);
  const small = Math.exp(-size);
  return (size * small) / (1 + small) + Math.log1p(small);
}

/**
 * integral de (-df/de) ((e - mu) / kT) W(e) of the occupied weight W at 0 K, exact for weights on nodes; zero at T = 0, as T goes to
 * 0 it is (pi^2 / 3) kT dW/dmu. Times -(k_B / e) and the prefactor of the response this is the Mott integral (M. Cutler, N. F. Mott,
 * Phys. Rev. 181, 1336 (1969)).
 */
export function thermalWeight({ axis, columns, nodes }: NodeWeights): CurveSampler {
  return (levelEv, temperatureK, out) => {
    out.fill(0);
    if (temperatureK <= 0) return;
    const scale = temperatureK * boltzmannEvPerK;
    const centre = (levelEv - axis.startEv) / axis.stepEv;
    const reach = (scale * fermiReach) / axis.stepEv;
    const first = Math.max(0, Math.ceil(centre - reach));
    const last = Math.min(axis.count - 1, Math.floor(centre + reach));
    for (let i = first; i <= last; i++) {
      const part = stateEntropy(((i - centre) * axis.stepEv) / scale);
      for (let c = 0, at = i * columns; c < columns; c++, at++) out[c] += part * nodes[at];
    }
  };
}

/** integral |x| (-df/dx) dx: the most that an unsure curve can do to its Mott integral. */
const largestPart = 2 * Math.LN2;

/** Reads Mott integrals; a smooth part that is known at a higher temperature only is taken as linear in temperature below it. */
export const thermalReading: Reading = {
  read: thermalWeight,
  warmed: (askedK, warmK) => (warmK > 0 ? askedK / warmK : 1),
  gain: (temperatureK, detailEv) =>
    Math.min(largestPart, ((Math.PI ** 2 / 3) * temperatureK * boltzmannEvPerK) / Math.max(detailEv, Number.MIN_VALUE)),
};
