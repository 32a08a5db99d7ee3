// errors.ts: the one error type that people see, and how it maps to an exit status.

/** What went wrong, as the shell sees it. */
export type FaultKind = "usage" | "data" | "accuracy" | "interrupted" | "internal";

/** Exit status of each kind: 2 wrong usage, 3 bad input data, 4 accuracy not reached, 130 interrupted, 1 anything else. */
export const exitStatus: Record<FaultKind, number> = {
  usage: 2,
  data: 3,
  accuracy: 4,
  interrupted: 130,
  internal: 1,
};

/**
 * An error meant for the person at the terminal: `message` says what is wrong and where (file, array, k point, band,
 * expected, found), `cure` says what to do. Both are single sentences without line breaks.
 */
export class Fault extends Error {
  readonly kind: FaultKind;
  readonly cure: string;
  constructor(kind: FaultKind, message: string, cure: string, cause?: unknown) {
    super(message, cause === undefined ? undefined : { cause });
    this.name = "Fault";
    this.kind = kind;
    this.cure = cure;
  }
}

/** Bad input data (exit status 3). */
export const dataFault = (message: string, cure: string, cause?: unknown): Fault =>
  new Fault("data", message, cure, cause);

/** Wrong usage (exit status 2). */
export const usageFault = (message: string, cure: string): Fault => new Fault("usage", message, cure);

/** True for a Fault of this module, also when it crossed a worker boundary as a plain object. */
export function isFault(error: unknown): error is Fault {
  return error instanceof Error && error.name === "Fault" && "kind" in error && "cure" in error;
}
