// doping-options.ts: the options that `dope` and `series` share beside those of a sweep.
import type { Command } from "commander";
import { z } from "zod";
import { addSweepOptions } from "./sweep-options.js";
import { typedNumber, typedShare } from "./validated.js";

/** How they are typed. */
export const typedDopings = {
  doping: z.array(typedNumber()).optional(),
  dopingUnit: z.string().optional(),
  prominence: typedShare.optional(),
};

/** Adds the options of a sweep and of dopings to a command. */
export function addDopingOptions(command: Command): Command {
  return addSweepOptions(command)
    .option("--doping <N...>", "dopings at which to tell the responses; positive: added electrons")
    .option("--doping-unit <UNIT>", "of --doping: per_cell (default), per_cm3 for a crystal, per_cm2 for a layer")
    .option(
      "--prominence <SHARE>",
      "leave out peaks that stand out by less, in parts of the largest value (default 2%)",
    );
}
