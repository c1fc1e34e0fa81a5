/** A two-sided 95 % interval of the normal distribution. */
const Z_95 = 1.959963984540054;

/**
 * Interval for a probability of which `successes` of `trials` (one or more) were seen, about 95 %, dimensionless: the score interval of
 * E. B. Wilson, J. Am. Stat. Assoc. 22 (1927) 209, which stays inside 0 to 1 and does not collapse at either end.
 */
export function wilsonInterval(successes: number, trials: number): { readonly low: number; readonly high: number } {
  const fraction = successes / trials;
  const z2 = Z_95 ** 2;
  const middle = fraction + z2 / (2 * trials);
  const half = Z_95 * Math.sqrt((fraction * (1 - fraction)) / trials + z2 / (4 * trials * trials));
  const scale = 1 + z2 / trials;
  return {
    low: successes === 0 ? 0 : (middle - half) / scale,
    high: successes === trials ? 1 : (middle + half) / scale,
  };
}
