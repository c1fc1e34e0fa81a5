import type { Knowledge } from "../constants/knowledge.ts";
import {
  budgetInputs,
  CHELATE_BALANCE_RELATIVE,
  DILUTION_FLASK_ML,
  EXPANSION_PER_K,
  HALF_DROP_ML,
  PIPETTE_ML,
  READING_ML,
  STANDARD_FLASK_ML,
  STANDARDISATIONS,
  TEMPERATURE_K,
  WEIGHING_G,
  type BudgetInputs,
  type Standardisation,
} from "./budget-inputs.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { Task } from "./types.ts";

/** One term of the budget: standard uncertainty relative to the result, dimensionless. */
export interface BudgetTerm {
  readonly source: string;
  readonly relative: number;
}

export interface Budget {
  readonly terms: readonly BudgetTerm[]; // largest first
  readonly combined: number; // u_c, relative
  readonly expanded: number; // 2 u_c + |bias|, relative: an uncorrected bias is added, never hidden inside u_c
}

/** Coverage factor: about 95 % (JCGM 100, 6.3.3). */
export const COVERAGE_FACTOR = 2;

const TRIANGULAR = Math.sqrt(6);
const RECTANGULAR = Math.sqrt(3);
const TEMPERATURE_RELATIVE = (TEMPERATURE_K * EXPANSION_PER_K) / RECTANGULAR;
const READ_TWICE_ML = Math.SQRT2 * READING_ML;
const DROP_ML = HALF_DROP_ML / RECTANGULAR;
/** Where no primary standard is on record at all: purity and a titration in triplicate (common practice). */
const STRENGTH_FALLBACK_RELATIVE = 1.0e-3;

/** Relative standard uncertainty of a titration of a pipetted portion, done in triplicate. */
function triplicateRelative(s: Standardisation): number {
  const scatter = s.scatterML / Math.sqrt(STANDARDISATIONS);
  return Math.hypot(
    s.pipetteToleranceML / TRIANGULAR / PIPETTE_ML,
    Math.hypot(s.buretteToleranceML / TRIANGULAR, scatter) / s.titreML,
  );
}

/** Relative standard uncertainty of a titrant standardised against a weighed standard: purity, mass, flask, dilution, titration. */
function strengthRelative(s: Standardisation | null): number {
  if (s === null) return STRENGTH_FALLBACK_RELATIVE;
  const { purityExpandedUncertainty, purityMassFraction } = s.standard;
  return Math.hypot(
    purityExpandedUncertainty / 2 / purityMassFraction,
    WEIGHING_G / s.massG,
    s.flaskToleranceML / TRIANGULAR / STANDARD_FLASK_ML,
    s.diluted ? s.diluted.pipetteToleranceML / TRIANGULAR / PIPETTE_ML : 0,
    s.diluted ? s.diluted.flaskToleranceML / TRIANGULAR / DILUTION_FLASK_ML : 0,
    triplicateRelative(s),
  );
}

const budgets = new WeakMap<StageEvaluation, { readonly task: Task; readonly knowledge: Knowledge; budget: Budget }>();

/**
 * Budget of one titration by the GUM (JCGM 100), term by term, relative to its result; the same figure as that of `budgetTable`, which
 * shows where each term comes from. An uncorrected bias is added to the expanded value. Remembered with the evaluation: a search asks often.
 */
export function stageBudget(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): Budget {
  const known = budgets.get(evaluation);
  if (known?.task === task && known.knowledge === knowledge) return known.budget;
  const budget = budgetOf(budgetInputs(task, evaluation, knowledge), task.portion.volumeML, evaluation.biasFraction);
  budgets.set(evaluation, { task, knowledge, budget });
  return budget;
}

function budgetOf(inputs: BudgetInputs, portionML: number, biasFraction: number): Budget {
  const { resultML, fills, standardisation, excessRatio, reagentRatio } = inputs;
  const terms: BudgetTerm[] = [];
  const add = (source: string, relative: number): void => {
    if (relative > 0) terms.push({ source, relative });
  };
  const burette = (Math.sqrt(fills) * Math.hypot(inputs.buretteToleranceML / TRIANGULAR, READ_TWICE_ML)) / resultML;
  const endPoint = Math.hypot(inputs.bandML / RECTANGULAR, DROP_ML) / resultML;
  const pipette = (standardisation?.pipetteToleranceML ?? 0) / TRIANGULAR / PIPETTE_ML;
  add("portion", inputs.portionToleranceML / TRIANGULAR / portionML);
  add("burette", burette);
  add("end point", endPoint);
  if (inputs.firstBandML !== null)
    add("first end point", Math.hypot(inputs.firstBandML / RECTANGULAR, DROP_ML) / resultML);
  add("titrant strength", strengthRelative(standardisation));
  add("temperature", TEMPERATURE_RELATIVE);
  add("blank", DROP_ML / resultML);
  add("standardised alike", inputs.alikeFraction);
  // A surplus of either partner of the chelate goes whole into the titre.
  add("balance of the chelate", (CHELATE_BALANCE_RELATIVE / RECTANGULAR) * inputs.chelateRatio);
  if (reagentRatio !== null) {
    // The reagent is measured by its own titration: the same burette and eye once more, and a pipette.
    add("titration of the reagent alone", Math.hypot(burette, endPoint));
    add("reagent in excess", reagentRatio * pipette);
  }
  add("composition of the precipitate", inputs.compositionFraction);
  if (excessRatio !== null) {
    add("excess titrant", excessRatio * pipette);
    // The titrant has its strength from the standard, the back titrant from the titrant.
    const ratio = standardisation ? triplicateRelative(standardisation) : STRENGTH_FALLBACK_RELATIVE;
    add("back titrant strength", Math.max(0, excessRatio - 1) * ratio);
  }
  return summed(terms, biasFraction);
}

function summed(terms: BudgetTerm[], biasFraction: number): Budget {
  terms.sort((a, b) => b.relative - a.relative);
  const combined = Math.sqrt(terms.reduce((s, t) => s + t.relative ** 2, 0));
  return { terms, combined, expanded: COVERAGE_FACTOR * combined + Math.abs(biasFraction) };
}

/** The largest part of an expanded uncertainty: the bias, or a term of the budget. */
export function largestOf({
  biasFraction,
  budget,
}: {
  readonly biasFraction: number;
  readonly budget: Budget;
}): BudgetTerm {
  const bias = { source: "bias", relative: Math.abs(biasFraction) };
  const term = budget.terms[0] ?? bias;
  return bias.relative > COVERAGE_FACTOR * term.relative ? bias : term;
}

/** Whether a titration determines what the brief asks for; what is subtracted may be a metal of the matrix. */
export const isAsked = (task: Task, { model }: StageEvaluation): boolean =>
  task.analytes.some(({ component }) => model.plan.determines.includes(component));

/** Terms that two titrations of separate portions have in common: one pipette, one room, and one bottle where they have one titrant. */
export function commonTerms(whole: StageEvaluation, part: StageEvaluation): ReadonlySet<string> {
  const [a, b] = [whole.model.plan.titrant, part.model.plan.titrant];
  const oneBottle = a.id === b.id && a.molPerL === b.molPerL;
  return new Set(["temperature", "portion", ...(oneBottle ? ["titrant strength"] : [])]);
}

/**
 * A result by difference of two portions: bias and budget relative to the difference. Independent terms add in quadrature of
 * amounts; what the two have in common counts once.
 */
export function combineDifference(
  task: Task,
  whole: StageEvaluation,
  part: StageEvaluation,
  knowledge: Knowledge,
): { biasFraction: number; budget: Budget } {
  const difference = whole.presentMol - part.presentMol;
  const a = stageBudget(task, whole, knowledge);
  const b = stageBudget(task, part, knowledge);
  const common = commonTerms(whole, part);
  const biasFraction = (whole.biasFraction * whole.presentMol - part.biasFraction * part.presentMol) / difference;
  const term = (budget: Budget, source: string, amount: number): number =>
    ((budget.terms.find((t) => t.source === source)?.relative ?? 0) * amount) / difference;
  const sources = [...new Set([...a.terms, ...b.terms].map((t) => t.source))];
  const terms = sources.map((source) => ({
    source,
    relative: common.has(source)
      ? (a.terms.find((t) => t.source === source)?.relative ?? 0)
      : Math.hypot(term(a, source, whole.presentMol), term(b, source, part.presentMol)),
  }));
  return { biasFraction, budget: summed(terms, biasFraction) };
}
