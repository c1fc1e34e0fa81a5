import { readFileSync } from "node:fs";
import type { GivenConstant } from "../../src/chemistry/calculators/types.ts";

/** How far the program may be from the printed figure; half a unit of the last printed digit for significant figures. */
export interface Tolerance {
  readonly absolute?: number;
  readonly relative?: number;
  readonly significantFigures?: number;
}

/** A printed figure; `disagreement` says why the print is known to be off the exact calculation. */
export interface Point {
  readonly pH?: number;
  readonly free?: number;
  readonly volumeML?: number;
  readonly expected: number;
  readonly disagreement?: string;
}

interface Toleranced {
  readonly tolerance: Tolerance;
}
type Amounts = Readonly<Record<string, number>>;

export type Check = Toleranced &
  (
    | {
        readonly kind: "ligand-fraction";
        readonly pKa: readonly number[];
        readonly quantity: Quantity;
        readonly points: readonly Point[];
      }
    | {
        readonly kind: "metal-fraction";
        readonly metal: string;
        readonly log10Beta: readonly number[];
        readonly quantity: Quantity;
        readonly points: readonly Point[];
      }
    | {
        readonly kind: "metal-hydroxide";
        readonly metal: string;
        readonly log10Beta: Amounts;
        readonly pKw: number;
        readonly points: readonly Point[];
      }
    | {
        readonly kind: "metal-alpha-sum";
        readonly metal: string;
        readonly log10Beta: readonly number[];
        readonly free: number;
        readonly log10AlphaOH: number;
        readonly pH: number;
        readonly expected: number;
      }
    | {
        readonly kind: "cumulative";
        readonly metal: string;
        readonly stepwise: readonly number[];
        readonly expected: readonly number[];
      }
    | {
        readonly kind: "curve";
        readonly constants: readonly GivenConstant[];
        readonly log10H: number;
        readonly sample: { readonly volumeML: number; readonly totals: Amounts };
        readonly titrant: { readonly id: string; readonly molPerL: number };
        readonly free?: Amounts;
        readonly follow: string;
        readonly points: readonly Point[];
      }
    | {
        readonly kind: "equilibrium-point";
        readonly constants: readonly GivenConstant[];
        readonly log10H: number;
        readonly totals: Amounts;
        readonly component: string;
        readonly expected: number;
      }
    | {
        readonly kind: "conditional-constant";
        readonly constants: readonly GivenConstant[];
        readonly log10H: number;
        readonly free?: Amounts;
        readonly metal: string;
        readonly ligand: string;
        readonly expected: number;
      }
    | {
        readonly kind: "transition";
        readonly constants: readonly GivenConstant[];
        readonly metal: string;
        readonly dye: string;
        readonly freeDyeMolPerL: number;
        readonly points: readonly Point[];
      }
    | {
        readonly kind: "titration-error";
        readonly log10K: number;
        readonly sampleMolPerL: number;
        readonly titrantMolPerL: number;
        readonly endPointPM: number;
        readonly expectedPercent: number;
      }
    | {
        readonly kind: "error-criterion";
        readonly log10CK: number;
        readonly offsetPM: number;
        readonly expectedPercent: number;
      }
    | {
        readonly kind: "minimum-pH";
        readonly metal: string;
        readonly log10K: number;
        readonly pKa: readonly number[];
        readonly log10ConditionalK: number;
        readonly expected: number;
      }
    | {
        readonly kind: "supersaturation";
        readonly constants: readonly GivenConstant[];
        readonly log10H: number;
        readonly totals: Amounts;
        readonly pKsp: number;
        readonly expected: number;
      }
    | {
        readonly kind: "known-constant";
        readonly components: Amounts;
        readonly less?: Amounts;
        readonly temperatureC: number;
        readonly ionicStrengthMolPerL: number;
        readonly expected: number;
        readonly disagreement?: string;
      }
    | {
        readonly kind: "known-solid";
        readonly solid: string;
        readonly expected: number;
        readonly disagreement?: string;
      }
    | {
        readonly kind: "known-transition";
        readonly indicator: string;
        readonly ion: string;
        readonly points: readonly Point[];
      }
    | { readonly kind: "known-glassware"; readonly ware: string; readonly nominalML: number; readonly expected: number }
    | {
        readonly kind: "uncertainty-budget";
        readonly of: string;
        readonly factor: number;
        readonly over: readonly KnownQuantity[]; // multiplied
        readonly under: readonly KnownQuantity[]; // divided by
        readonly expected: number;
        readonly expectedStandardUncertainty: number;
        readonly disagreement?: string; // of the uncertainty
      }
    | { readonly kind: "known-molar-mass"; readonly standard: string; readonly expected: number }
    | {
        readonly kind: "buffer-pH";
        readonly buffer: string;
        readonly acidMolPerL: number;
        readonly baseMolPerL: number;
        readonly expected: number;
      }
    | {
        readonly kind: "known-kinetics";
        readonly ion: string;
        readonly titrant: string;
        readonly consequences: readonly string[];
      }
  );
/** An input of an uncertainty budget as it is printed. */
export interface KnownQuantity {
  readonly name: string;
  readonly value: number;
  readonly standardUncertainty: number;
}
export type Quantity = "fraction" | "log10Alpha";
export type CheckOf<K extends Check["kind"]> = Extract<Check, { readonly kind: K }>;

/** One published or recomputable example. */
export interface Example {
  readonly id: string;
  readonly title: string;
  readonly source: { readonly citation: string; readonly basis: "read" | "partly read" | "memory" | "computed" };
  readonly independent: boolean;
  readonly whyNotIndependent?: string;
  readonly note?: string;
  readonly checks?: readonly Check[];
  readonly unchecked?: string;
}

/** One figure compared: what was printed, what the program gives, and whether the two agree within the stated tolerance. */
export interface Comparison {
  readonly label: string;
  readonly expected: number;
  readonly actual: number;
  readonly agrees: boolean;
  readonly disagreement: string | null; // the known reason why the print is off, where there is one
}

/** All examples of the file beside this one. */
export function loadExamples(): readonly Example[] {
  const text = readFileSync(new URL("worked-examples.json", import.meta.url), "utf8");
  return (JSON.parse(text) as { readonly examples: readonly Example[] }).examples;
}

/** Compares one figure under a tolerance. */
export function compare(
  label: string,
  actual: number,
  expected: number,
  tolerance: Tolerance,
  disagreement?: string,
): Comparison {
  const off = Math.abs(actual - expected);
  const slack = 1 + 1e-9; // for figures that stand exactly on the limit
  const agrees =
    (tolerance.absolute !== undefined && off <= tolerance.absolute * slack) ||
    (tolerance.relative !== undefined && off <= tolerance.relative * Math.abs(expected) * slack) ||
    (tolerance.significantFigures !== undefined && off <= halfUnit(expected, tolerance.significantFigures) * slack);
  return { label, expected, actual, agrees, disagreement: disagreement ?? null };
}

function halfUnit(value: number, figures: number): number {
  return 0.5 * 10 ** (Math.floor(Math.log10(Math.abs(value))) - figures + 1);
}
