import { median } from "../../src/numerics/quantile.ts";

/** Something to time: one call runs the whole of it and returns microseconds per unit of work. */
export interface Timed {
  readonly name: string;
  readonly run: () => number;
}

/** Microseconds per unit of each, round by round: all of them in each round, one after another. */
export function interleaved(timed: readonly Timed[], rounds: number): ReadonlyMap<string, readonly number[]> {
  const times = new Map<string, number[]>(timed.map(({ name }) => [name, []]));
  for (const { run } of timed) run(); // compiled and in the caches before the first round counts
  for (let round = 0; round < rounds; round++) for (const { name, run } of timed) times.get(name)!.push(run());
  return times;
}

/** Median of the ratios of two within each round. */
export const medianRatio = (above: readonly number[], below: readonly number[]): number =>
  median(above.map((value, round) => value / below[round]!));

/** A line with the median of the rounds and their range. */
export const timingLine = (name: string, values: readonly number[], unit: string): string =>
  `${name.padEnd(28)} ${median([...values])
    .toFixed(3)
    .padStart(9)} us ${unit} (${Math.min(...values).toFixed(3)} to ${Math.max(...values).toFixed(3)})`;

/** Runs `pass` often enough to last some milliseconds and returns microseconds per unit, `units` of them in a pass. */
export function microsecondsPer(units: number, repeats: number, pass: () => void): number {
  const started = performance.now();
  for (let r = 0; r < repeats; r++) pass();
  return ((performance.now() - started) * 1000) / (repeats * units);
}
