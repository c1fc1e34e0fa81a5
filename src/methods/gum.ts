/** Uncertainty of a result by the law of propagation, JCGM 100:2008 (GUM), sections 4, 5 and annex G. */

/** How the possible values of a quantity lie about its best estimate. */
export type Distribution = "triangular" | "rectangular" | "normal";

/** An input quantity: its best estimate, and how far it may be off. */
export interface Quantity {
  readonly name: string;
  readonly value: number;
  readonly unit: string;
  readonly distribution: Distribution;
  /** Half-width of a triangular or rectangular distribution; of a normal one the standard uncertainty itself. In `unit`, >= 0. */
  readonly halfWidth: number;
  /** How well `halfWidth` is known; Infinity for limits that a standard or a certificate sets. */
  readonly degreesOfFreedom: number;
}

/** A quantity with what it does to the result. */
export interface Propagated extends Quantity {
  readonly standardUncertainty: number; // in `unit`
  readonly sensitivity: number; // result per unit
  readonly contribution: number; // |sensitivity| x standard uncertainty, in the unit of the result
}

/** A result with its uncertainty. */
export interface Propagation {
  readonly value: number;
  readonly combined: number; // u_c, in the unit of the result
  readonly effectiveDegreesOfFreedom: number;
  readonly inputs: readonly Propagated[]; // in the order given
}

const DIVISOR: Readonly<Record<Distribution, number>> = {
  triangular: Math.sqrt(6), // JCGM 100, 4.3.9
  rectangular: Math.sqrt(3), // 4.3.7
  normal: 1,
};

/** Standard uncertainty of limits or of a normal quantity, in its unit (JCGM 100, 4.3). */
export const standardUncertaintyOf = (quantity: Pick<Quantity, "distribution" | "halfWidth">): number =>
  quantity.halfWidth / DIVISOR[quantity.distribution];

/**
 * Degrees of freedom of a figure that is itself known to this relative uncertainty (JCGM 100, G.4.2, equation G.3): a quarter gives 8.
 * @param relative dimensionless, > 0
 */
export const degreesOfFreedomOf = (relative: number): number => 1 / (2 * relative ** 2);

/** Welch and Satterthwaite: degrees of freedom of a sum of independent contributions (JCGM 100, G.4.1, equation G.2b); Infinity where all have it. */
export function effectiveDegreesOfFreedom(
  parts: readonly { readonly contribution: number; readonly degreesOfFreedom: number }[],
): number {
  const variance = parts.reduce((sum, p) => sum + p.contribution ** 2, 0);
  const spread = parts.reduce((sum, p) => sum + p.contribution ** 4 / p.degreesOfFreedom, 0);
  return spread > 0 ? variance ** 2 / spread : Number.POSITIVE_INFINITY;
}

/**
 * The value of a result and its combined standard uncertainty from independent quantities. Sensitivities are half the change of the
 * result from one standard uncertainty below to one above the estimate (JCGM 100, 5.1.3, note 2).
 * @param measurand the result from the values of the quantities, in their order
 */
export function propagate(
  quantities: readonly Quantity[],
  measurand: (values: readonly number[]) => number,
): Propagation {
  const values = quantities.map((q) => q.value);
  const inputs = quantities.map((quantity, i): Propagated => {
    const standardUncertainty = standardUncertaintyOf(quantity);
    const at = (shift: number): number => measurand(values.with(i, quantity.value + shift));
    const change = standardUncertainty > 0 ? (at(standardUncertainty) - at(-standardUncertainty)) / 2 : 0;
    const sensitivity = standardUncertainty > 0 ? change / standardUncertainty : 0;
    return { ...quantity, standardUncertainty, sensitivity, contribution: Math.abs(change) };
  });
  return {
    value: measurand(values),
    combined: Math.sqrt(inputs.reduce((sum, p) => sum + p.contribution ** 2, 0)),
    effectiveDegreesOfFreedom: effectiveDegreesOfFreedom(inputs),
    inputs,
  };
}
