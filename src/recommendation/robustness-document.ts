import type { Knowledge } from "../constants/knowledge.ts";
import { PROBABILITIES, summarise, type Draws, type MapAxes, type ParameterWeight } from "../methods/robustness.ts";
import type { StagePlan } from "../methods/types.ts";
import type { DrawnParameter, Recommendation, RecommendedMethod, Robustness, RobustnessMap } from "./contract.ts";
import type { DrawsAnswer, RobustnessWork } from "./robustness.ts";
import { shownIon } from "./spelling.ts";

/** The asked method in its answer. */
export interface RobustnessAsked {
  readonly document: Recommendation;
  readonly method: RecommendedMethod;
  readonly work: RobustnessWork;
}

/** A map as far as its rows are worked out. */
export interface MapSoFar {
  readonly axes: MapAxes;
  readonly rows: readonly (readonly (number | null)[])[];
}

/** Writes what the draws so far come to; at least one chunk. */
export function robustnessDocument(
  { document, method, work }: RobustnessAsked,
  answers: readonly DrawsAnswer[],
  map: MapSoFar | null,
  knowledge: Knowledge,
): Robustness {
  const { parameters, notCompiled, results } = answers[0]!;
  const chunks: readonly Draws[] = answers.map((a) => a.draws);
  const summary = summarise(chunks, parameters, results, work.seed, work.task.requirementPercent / 100);
  const { spreads } = work;
  return {
    contract: 1,
    knowledge: document.knowledge,
    brief: document.brief,
    method: { id: method.id, summary: method.summary },
    requirementPercent: work.task.requirementPercent,
    seed: work.seed,
    draws: work.draws,
    done: summary.draws,
    spreads: {
      pH: spreads.pH,
      reagentPercent: 100 * spreads.reagent,
      dyePercent: 100 * spreads.dye,
      matrixPercent: 100 * spreads.matrix,
    },
    probability: { meeting: summary.meeting, fraction: summary.probability, ...summary.interval },
    unread: summary.unread,
    results: summary.results.map((quantiles, r) => {
      const predicted = method.predicted.perAnalyte[r]!;
      return {
        determines: predicted.determines,
        planned: {
          biasPercent: predicted.biasPercent,
          expandedPercent: predicted.relativeExpandedUncertaintyPercent,
        },
        quantiles:
          quantiles === null
            ? []
            : PROBABILITIES.map((probability, i) => ({
                probability,
                biasPercent: rounded(100 * quantiles.bias[i]!),
                expandedPercent: rounded(100 * quantiles.expanded[i]!),
              })),
      };
    }),
    parameters: summary.weights.map((weight) => parameterOf(weight, work, knowledge)),
    map: map && mapOf(map, work.method.plans),
    notCompiled: notCompiled.flatMap((why, stage) => (why === null ? [] : [{ titration: stage + 1, why }])),
    whole: summary.whole,
  };
}

function parameterOf(weight: ParameterWeight, { task }: RobustnessWork, knowledge: Knowledge): DrawnParameter {
  const { kind, id, standardUncertainty } = weight.parameter;
  const relative = kind === "reagent" || kind === "matrix";
  return {
    kind,
    id: kind === "pH" ? String(Number(id) + 1) : kind === "matrix" ? shownIon(task, id, knowledge) : id,
    standardUncertainty: relative ? 100 * standardUncertainty : standardUncertainty,
    unit: relative ? "%" : kind === "pH" ? "pH" : "log10 K",
    shareOfUncertainty: rounded(weight.shareOfUncertainty, 4),
    shareOfError: rounded(weight.shareOfError, 4),
    errorGoes: weight.direction === 0 ? null : weight.direction > 0 ? "up" : "down",
  };
}

function mapOf({ axes, rows }: MapSoFar, plans: readonly StagePlan[]): RobustnessMap {
  const plan = plans[axes.stage]!;
  const planned = amountOf(plan, axes.reagent);
  return {
    titration: axes.stage + 1,
    pH: [...axes.pH],
    reagent: axes.reagent,
    molPerL: axes.ratios.map((ratio) => ratio * planned),
    planned: { pH: plan.pH, molPerL: planned },
    expandedPercent: rows.map((row) => row.map((value) => (value === null ? null : rounded(100 * value)))),
  };
}

/** A solver leaves the last digits of its answers to what it solved before: beyond the sixth decimal nothing is said, so that the same seed says the same. */
const rounded = (value: number, decimals = 6): number => Number(value.toFixed(decimals)) + 0;

/** How much of a reagent a titration takes, mol/L of the vessel; of several steps with one agent the largest, as it is put in. */
function amountOf(plan: StagePlan, reagent: string): number {
  const taken = [plan.buffer, ...(plan.indicator ? [plan.indicator] : []), ...plan.auxiliary].filter(
    ({ id }) => id === reagent,
  );
  const masks = plan.masking.filter(({ agent }) => agent === reagent);
  return Math.max(0, ...taken.map((t) => t.molPerL), ...masks.map((m) => m.molPerL));
}
