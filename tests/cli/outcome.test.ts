// outcome.test.ts: does every way of failing end in the agreed status and in at most two lines?
import { CommanderError } from "commander";
import { afterEach, describe, expect, it, vi } from "vitest";
import { dataFault, Fault, usageFault } from "../../src/base/errors.js";
import { outcomeOf, report } from "../../src/cli/outcome.js";
import type { Terminal } from "../../src/cli/terminal.js";

function listening(): { terminal: Terminal; text: () => string } {
  const lines: string[] = [];
  const terminal = { fail: (label: string, text: string) => void lines.push(`${label} ${text}`.trimStart()) };
  return { terminal: terminal as Terminal, text: () => lines.join("\n") };
}

afterEach(() => vi.unstubAllEnvs());

describe("the outcome of an error", () => {
  it("has the status of its kind", () => {
    expect(outcomeOf(usageFault("m", "c")).status).toBe(2);
    expect(outcomeOf(dataFault("m", "c")).status).toBe(3);
    expect(outcomeOf(new Fault("accuracy", "m", "c")).status).toBe(4);
    expect(outcomeOf(new Fault("interrupted", "m", "c")).status).toBe(130);
    expect(outcomeOf(new Error("m")).status).toBe(1);
    expect(outcomeOf("a string").status).toBe(1);
    expect(outcomeOf(undefined).status).toBe(1);
  });

  it("says what the system refused, and where, without blaming the program", () => {
    const refused = Object.assign(new Error("EACCES: ..."), { code: "EACCES", path: "out/curves.csv" });
    expect(outcomeOf(refused)).toMatchObject({ status: 1, message: "out/curves.csv: permission denied" });
  });

  it("turns the parser's refusal into one sentence and its guess into the cure", () => {
    const refusal = new CommanderError(
      1,
      "commander.unknownOption",
      "error: unknown option '--jsn'\n(Did you mean --json?)",
    );
    expect(outcomeOf(refusal)).toEqual({ status: 2, message: "unknown option '--jsn'", cure: "Did you mean --json?" });
    expect(outcomeOf(new CommanderError(0, "commander.helpDisplayed", "(outputHelp)"))).toEqual({ status: 0 });
  });
});

describe("the report of an error", () => {
  it("is two lines, whatever the message holds, and no trace", () => {
    const { terminal, text } = listening();
    expect(report(dataFault("first\n  second", "do\nthis"), terminal)).toBe(3);
    expect(text()).toBe("tidegauge: first second\n  do this".replace("\n  ", "\n"));
  });

  it("adds the trace and its causes with TIDEGAUGE_TRACE=1", () => {
    vi.stubEnv("TIDEGAUGE_TRACE", "1");
    const { terminal, text } = listening();
    report(dataFault("outer", "c", new Error("inner")), terminal);
    expect(text()).toContain("outcome.test.ts");
    expect(text()).toContain("caused by Error: inner");
  });
});
