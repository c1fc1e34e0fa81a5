/** What one bench found. */
export interface BenchReport {
  readonly lines: readonly string[];
  /** What could not be measured on this machine, and why. */
  readonly missing: readonly string[];
  /** What was measured and is wrong (a check value that differs, say). */
  readonly failures: readonly string[];
}

/** One bench: a name and a function that measures; one file each. */
export interface Bench {
  readonly name: string;
  readonly run: () => Promise<BenchReport>;
}
