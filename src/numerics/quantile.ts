import { AppError } from "../errors.ts";

/**
 * The quantile of `values` (any order, at least one, all finite) at `probability` from 0 to 1.
 *
 * Linear between order statistics: definition 7 of R. J. Hyndman and Y. Fan, The American Statistician 50 (1996) 361. Same unit as the values.
 *
 * @throws AppError "numerics-input" for an empty list, a value that is not finite, or a probability outside 0 to 1.
 */
export function quantile(values: ArrayLike<number>, probability: number): number {
  const sorted = Float64Array.from(values).sort();
  if (sorted.length === 0 || !(probability >= 0 && probability <= 1) || !sorted.every(Number.isFinite))
    throw new AppError("numerics-input", `expected finite values and a probability from 0 to 1, got ${probability}`, {
      count: sorted.length,
      probability,
    });
  const position = (sorted.length - 1) * probability;
  const below = Math.floor(position);
  const low = sorted[below]!;
  const high = sorted[Math.min(below + 1, sorted.length - 1)]!;
  return low + (position - below) * (high - low);
}

/** The median of `values`: the quantile at 0.5. */
export function median(values: ArrayLike<number>): number {
  return quantile(values, 0.5);
}
