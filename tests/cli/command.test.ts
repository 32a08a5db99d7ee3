// command.test.ts: does the built command keep the promises of the whole command line: help, streams, exit status?
import { describe, expect, it } from "vitest";
import { runCommand } from "../tooling/command.js";

describe("tidegauge", () => {
  it("prints its version and its help on stdout, with status 0", async () => {
    const version = await runCommand(["--version"]);
    expect(version).toMatchObject({ status: 0, stderr: "" });
    expect(version.stdout).toMatch(/^\d+\.\d+\.\d+\n$/);
    const help = await runCommand(["--help"]);
    expect(help).toMatchObject({ status: 0, stderr: "" });
    expect(help.stdout).toContain("Exit status: 0 done");
  });

  it("ends wrong usage with status 2, two lines on stderr and nothing on stdout", async () => {
    for (const args of [["--jsn"], ["swep"], ["--out"]]) {
      const { status, stdout, stderr } = await runCommand(args);
      expect({ args, status, stdout }).toEqual({ args, status: 2, stdout: "" });
      expect(stderr).toMatch(/^tidegauge: .*\n {2}.*\n$/);
    }
  });

  it("shows its help on stderr, with status 2, when nothing is asked of it", async () => {
    const { status, stdout, stderr } = await runCommand([]);
    expect({ status, stdout }).toEqual({ status: 2, stdout: "" });
    expect(stderr).toContain("Usage: tidegauge");
  });
});
