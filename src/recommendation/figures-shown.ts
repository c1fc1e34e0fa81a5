/** Below this a percentage or an amount is zero for every purpose of a bench; printing 1e-13 would pretend otherwise. */
const NOTHING = 1e-12;

/** A figure to so many digits; what is nothing is 0. */
export const signif = (value: number, digits = 6): number =>
  Number.isFinite(value) && Math.abs(value) > NOTHING ? Number(value.toPrecision(digits)) : 0;

/** A fraction as a percentage to four decimals; never a minus zero. */
export const percentOf = (fraction: number): number => Number((100 * fraction).toFixed(4)) + 0;
