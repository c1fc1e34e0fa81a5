/** What one bench found. */
export interface BenchReport {
  readonly lines: readonly string[];
  /** What could not be measured on this machine, and why. */
  readonly missing: readonly string[];
  /** What was measured and is wrong (a check value that differs, say). */
  readonly failures: readonly string[];
  /** Bars that the figures do not reach: on a busy machine to be measured again before anything is made of them. */
  readonly missed: readonly string[];
}

/** Says beside a figure whether it reaches its bar; appends to `missed` where it does not. */
export function atBar(figure: string, holds: boolean, bar: string, missed: string[]): string {
  if (!holds) missed.push(`${figure} (${bar} wanted)`);
  return `${figure} (${bar} wanted: ${holds ? "holds" : "missed"})`;
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
