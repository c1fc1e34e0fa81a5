/** What one bench found. */
export interface BenchReport {
  readonly lines: readonly string[];
  /** What could not be measured on this machine, and why. */
  readonly missing: readonly string[];
  /** What was measured and is wrong (a check value that differs, say). */
  readonly failures: readonly string[];
}

/** What the command line may ask of a bench; each uses what it knows. */
export interface BenchOptions {
  readonly count?: number; // how often what is measured is done
  readonly brief?: string; // ids of acceptance briefs, by commas
}

/** One bench: a name and a function that measures; one file each. */
export interface Bench {
  readonly name: string;
  readonly run: (options: BenchOptions) => Promise<BenchReport>;
}
