import type { Knowledge } from "../../src/constants/knowledge.ts";
import * as given from "./check-given.ts";
import * as known from "./check-known.ts";
import type { Check, Comparison, Example } from "./example.ts";

/** Every figure of an example against the program; empty for an example that nothing checks. */
export function checkExample(example: Example, knowledge: Knowledge): Comparison[] {
  return (example.checks ?? []).flatMap((check) => checkOne(check, knowledge));
}

function checkOne(check: Check, knowledge: Knowledge): Comparison[] {
  switch (check.kind) {
    case "ligand-fraction":
      return given.ligandFraction(check);
    case "metal-fraction":
      return given.metalFraction(check);
    case "metal-hydroxide":
      return given.metalHydroxide(check);
    case "metal-alpha-sum":
      return given.metalAlphaSum(check);
    case "cumulative":
      return given.cumulative(check);
    case "curve":
      return given.curve(check, knowledge);
    case "equilibrium-point":
      return given.equilibriumPoint(check, knowledge);
    case "conditional-constant":
      return given.conditional(check, knowledge);
    case "transition":
      return given.transition(check);
    case "titration-error":
      return given.titrationError(check);
    case "error-criterion":
      return given.errorCriterion(check);
    case "minimum-pH":
      return given.minimumPH(check);
    case "uncertainty-budget":
      return given.uncertaintyBudget(check);
    case "supersaturation":
      return given.supersaturation(check, knowledge);
    case "known-constant":
      return known.knownConstant(check, knowledge);
    case "known-solid":
      return known.knownSolid(check, knowledge);
    case "known-transition":
      return known.knownTransition(check, knowledge);
    case "known-glassware":
      return known.knownGlassware(check, knowledge);
    case "known-molar-mass":
      return known.knownMolarMass(check, knowledge);
    case "buffer-pH":
      return known.bufferPH(check, knowledge);
    case "known-kinetics":
      return known.knownKinetics(check, knowledge);
  }
}

/** What a report says of one example. */
export interface Verdict {
  readonly example: Example;
  readonly comparisons: readonly Comparison[];
  readonly status: "agrees" | "disagrees" | "unchecked";
}

/** Checks all examples. An example agrees when every figure of it does. */
export function verdicts(examples: readonly Example[], knowledge: Knowledge): Verdict[] {
  return examples.map((example) => {
    const comparisons = checkExample(example, knowledge);
    const status = comparisons.length === 0 ? "unchecked" : comparisons.every((c) => c.agrees) ? "agrees" : "disagrees";
    return { example, comparisons, status };
  });
}
