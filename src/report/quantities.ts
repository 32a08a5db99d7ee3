// quantities.ts: what is a response called in words?
import { cleanLine } from "./clean.js";

const quantities: Record<string, string> = {
  charge: "Anomalous Hall conductivity",
  spin: "Spin Hall conductivity",
  orbital: "Orbital Hall conductivity",
};

/** "spin:xy:z" -> "Spin Hall conductivity"; another moment is named by its own name. */
export function quantityWords(response: string): string {
  const moment = cleanLine(response).split(":")[0];
  return Object.hasOwn(quantities, moment) ? quantities[moment] : `Hall conductivity of ${moment}`;
}
