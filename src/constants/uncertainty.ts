import type { Basis, Confidence } from "./knowledge.ts";

/**
 * Standard uncertainty of a log10 K where the source states none: the compilation says nothing of such values, and critical
 * compilations of the same constant differ by 0.1 to 0.3. The middle of that, taken as a standard uncertainty.
 */
export const UNSTATED_LOG10K = 0.2;
/** Added in quadrature to a value that the compilers printed in parentheses: common practice for their own reserve. */
export const DOUBTFUL_LOG10K = 0.3;
/** Smallest standard uncertainty given to any stated value: agreement between workers is not accuracy. */
export const FLOOR_LOG10K = 0.03;
/** Standard uncertainty of a value recalled from memory, by confidence; wider than what was read. */
const RECALLED_LOG10K: Readonly<Record<Confidence, number>> = { high: 0.2, medium: 0.3, low: 0.5 };

/** A standard uncertainty in log10 units, and whether it rests on a statement of the source. */
export interface StandardUncertainty {
  readonly value: number;
  readonly stated: boolean;
}

/**
 * Standard uncertainty (log10 units) of a printed log10 K from its error column: "+/-5" is the spread between workers in units
 * of the last digit printed ("9.57" with "+/-5" is 9.52 to 9.62), "-4" or "+6" a spread to one side, "0" none stated. A spread is read as the half-width
 * of a rectangular distribution (divided by root 3; to one side, half the spread is the half-width), never below 0.03.
 * Throws a RangeError for an error column of another form.
 */
export function printedUncertainty(value: string, error: string, doubtful: boolean): StandardUncertainty {
  const extra = doubtful ? DOUBTFUL_LOG10K : 0;
  if (error === "0") return doubtful ? UNSTATED_DOUBTFUL : UNSTATED; // three values in four
  const match = /^(\+\/-|\+|-)(\d+)$/.exec(error);
  if (match === null) throw new RangeError(`error column: expected "0", "+/-n", "+n" or "-n", found "${error}"`);
  const spread = Number(match[2]) * lastDigit(value);
  const halfWidth = match[1] === "+/-" ? spread : spread / 2;
  return { value: Math.hypot(Math.max(halfWidth / Math.sqrt(3), FLOOR_LOG10K), extra), stated: true };
}

const UNSTATED: StandardUncertainty = { value: UNSTATED_LOG10K, stated: false };
const UNSTATED_DOUBTFUL: StandardUncertainty = { value: Math.hypot(UNSTATED_LOG10K, DOUBTFUL_LOG10K), stated: false };

/** Unit of the last digit printed: "9.57" is 0.01, "34" is 1. */
function lastDigit(value: string): number {
  const point = value.indexOf(".");
  return point < 0 ? 1 : 10 ** -(value.length - point - 1);
}

/** Standard uncertainty (log10 units) of a value that is not printed in a compilation and states none: by basis and confidence. */
export function assumedUncertainty(basis: Basis, confidence: Confidence): StandardUncertainty {
  return { value: basis === "memory" ? RECALLED_LOG10K[confidence] : UNSTATED_LOG10K, stated: false };
}
