// finding.ts: what a health check says: what is wrong, how that was seen, and what to change.

/** One thing that a check found. */
export interface HealthFinding {
  /** Short and stable, e.g. "velocity-unit". */
  readonly id: string;
  /** fault: certain, results would be wrong. warn: look at it before results are believed. note: good to know. */
  readonly severity: "fault" | "warn" | "note";
  /** One plain sentence without a full stop. */
  readonly message: string;
  /** The numbers that it rests on. */
  readonly evidence: string;
  /** How they were measured. */
  readonly measured: string;
  /** What to change, in the manifest or in the calculation; empty for what needs no change. */
  readonly cure: string;
}

/** Three digits, as a person reads them. */
export const shown = (value: number, digits = 3): string => String(Number(value.toPrecision(digits)));
