// terminal.test.ts: is nothing printed that could move the cursor, and do progress lines come rarely and tell the truth?
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { durationWords, lines } from "../../src/cli/progress.js";
import { sanitise } from "../../src/cli/terminal.js";

describe("sanitise", () => {
  it("leaves words, line ends and tabs alone", () => {
    expect(sanitise("Pt, 24³ – η = 0.1\n\tspin")).toBe("Pt, 24³ – η = 0.1\n\tspin");
  });

  it("takes the escape out of escape sequences and the turn out of turned text", () => {
    expect(sanitise("a\u001b[31mb\rc\u0007d\u009be\u202ef")).toBe("a\ufffd[31mb\ufffdc\ufffdd\ufffde\ufffdf");
  });

  it("lets no control character through, whatever the text", () => {
    fc.assert(
      fc.property(fc.string({ unit: "binary", maxLength: 40 }), (text) => {
        expect(sanitise(text)).not.toMatch(/(?![\n\t])\p{Cc}/u);
      }),
      { seed: 3 },
    );
  });
});

describe("progress without a terminal", () => {
  it("is silent for half a minute, then says how far and how long, and stops at the end", () => {
    const said: string[] = [];
    let now = 100;
    const progress = lines({ note: (text) => void said.push(text) }, "reading", () => now);
    for (let done = 0; done <= 100; done += 10) {
      progress.advance(done, 100);
      now += 8;
    }
    progress.end();
    expect(said).toEqual(["reading: 40%, 48 s left", "reading: 80%, 16 s left"]);
  });

  it("writes durations in the two largest units", () => {
    expect([0.2, 59.4, 61, 3599, 7800].map(durationWords)).toEqual([
      "0 s",
      "59 s",
      "1 min 1 s",
      "59 min 59 s",
      "2 h 10 min",
    ]);
  });
});
