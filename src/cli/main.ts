// main.ts: runs the command line of this process and leaves its exit status.
import { openContext } from "./context.js";
import { report } from "./outcome.js";
import { createProgram } from "./program.js";
import { endWithClosedPipe } from "./terminal.js";

let quiet = false;
const context = openContext(() => quiet);
endWithClosedPipe();
const endAtOnce = (error: unknown): never => process.exit(report(error, context.terminal));
process.on("uncaughtException", endAtOnce);
process.on("unhandledRejection", endAtOnce);

try {
  const program = await createProgram(context, process.argv.slice(2));
  program.hook("preAction", () => {
    quiet = program.opts().quiet === true;
  });
  await program.parseAsync(process.argv);
  process.exitCode = context.status;
} catch (error) {
  process.exitCode = report(error, context.terminal);
}
