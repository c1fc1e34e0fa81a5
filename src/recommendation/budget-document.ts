import type { Knowledge } from "../constants/knowledge.ts";
import type { EvaluatedMethod, MethodResult } from "../methods/methods.ts";
import { resultCauses, resultTable } from "../methods/result-account.ts";
import type { Task } from "../methods/types.ts";
import { COVERAGE_FACTOR, largestOf } from "../methods/uncertainty.ts";
import { wouldMeet } from "../methods/would-meet.ts";
import type { RecommendedMethod } from "./contract.ts";
import { percentOf, signif } from "./figures-shown.ts";
import { shownIon } from "./spelling.ts";

type Cause = RecommendedMethod["predicted"]["biasBySource"][number];

/** Bias and uncertainty of one result, with its causes. */
export function resultFigures(task: Task, method: EvaluatedMethod, result: MethodResult, knowledge: Knowledge) {
  const causes = resultCauses(task, method, result, knowledge);
  const shown = (text: string): string =>
    text
      .split(" ")
      .map((word) => shownIon(task, word, knowledge))
      .join(" ");
  return {
    biasPercent: percentOf(result.biasFraction),
    biasUncancelledPercent: percentOf(causes.reduce((sum, c) => sum + c.uncancelledFraction, 0)),
    relativeExpandedUncertaintyPercent: signif(100 * result.budget.expanded, 4),
    biasBySource: causes.map(
      ({ source, kind, by, titration, fraction, uncancelledFraction }): Cause => ({
        source: titration === null ? shown(source) : `${shown(source)} (titration ${titration})`,
        percent: percentOf(fraction),
        uncancelledPercent: percentOf(uncancelledFraction),
        kind,
        by,
        titration,
      }),
    ),
  };
}

const finiteOrNull = (value: number): number | null => (Number.isFinite(value) ? signif(value, 3) : null);

/** The budget of one result, quantity by quantity, and what it leaves out. */
export function budgetDocument(
  task: Task,
  method: EvaluatedMethod,
  result: MethodResult,
  knowledge: Knowledge,
): RecommendedMethod["budget"] {
  const table = resultTable(task, method, result, knowledge);
  return {
    determines: result.determines.map((id) => shownIon(task, id, knowledge)),
    resultMolPerL: signif(table.resultMolPerL, 4),
    rows: table.rows.map((row) => ({
      term: row.term,
      quantity: row.name,
      value: signif(row.value, 5),
      unit: row.unit,
      distribution: row.distribution,
      halfWidth: signif(row.halfWidth, 3),
      standardUncertainty: signif(row.standardUncertainty, 3),
      sensitivityPercentPerUnit: signif(100 * row.relativeSensitivity, 4),
      percent: signif(100 * row.relative, 3),
      degreesOfFreedom: finiteOrNull(row.degreesOfFreedom),
    })),
    combinedPercent: signif(100 * table.combined, 4),
    coverageFactor: COVERAGE_FACTOR,
    effectiveDegreesOfFreedom: finiteOrNull(table.effectiveDegreesOfFreedom),
    notCounted: notCounted(task, method),
  };
}

/** From this pH on a solution takes up carbon dioxide from the air while it stands. */
const TAKES_CARBONATE_FROM_PH = 8;

/** What the figures leave out, and where it is to be had. */
function notCounted(task: Task, { stages }: EvaluatedMethod): string[] {
  const plans = stages.map((s) => s.plan);
  const present = [...task.analytes, ...task.matrix].some((c) => c.component === "carbonate");
  return [
    "The uncertainty of the constants: the study of robustness carries it to the result.",
    ...(!present && plans.some((p) => p.pH >= TAKES_CARBONATE_FROM_PH)
      ? [
          "Carbonate from the air and from the water used to dilute: the brief has none, and the water is taken as boiled out.",
        ]
      : []),
    ...(stages.some((s) => s.evaluation.basis === "table" && s.plan.detection === "visual")
      ? ["Metal that the dye holds at the end point: its table of transitions gives no amount."]
      : []),
    ...(plans.some((p) => p.determines.includes("Pb2+"))
      ? ["The molar mass of lead in the standard, 0.19 % where its isotopes are not certified."]
      : []),
  ];
}

/** What would meet the requirement with the same method, or what stands in the way; null where there is nothing to say of a method that gave no result. */
export function wouldMeetDocument(
  task: Task,
  method: EvaluatedMethod,
  worst: MethodResult,
  knowledge: Knowledge,
): RecommendedMethod["wouldMeet"] {
  if (!Number.isFinite(worst.budget.expanded)) return null;
  const tried = wouldMeet(task, method, knowledge);
  const found = tried !== null && tried.expanded < worst.budget.expanded ? tried : null;
  const { source, relative } = found?.largest ?? largestOf(worst);
  const largest = { source, percent: signif(100 * relative, 3) };
  const share = `The largest part is ${source === "bias" ? "the bias" : `the term "${source}"`}, ${largest.percent} %.`;
  if (found === null) {
    const why =
      method.mode === "successive"
        ? "Other ware is not looked at where titrations follow one another in one vessel."
        : "No usual burette, portion and strength of titrant does better with this method.";
    return { meets: false, with: null, largest, statement: `${why} ${share}` };
  }
  const percent = signif(100 * found.expanded, 3);
  const ware = `a burette of ${found.buretteML} mL, a portion of ${found.portionML} mL and titrant of ${found.titrantMolPerL} mol/L`;
  return {
    meets: found.meets,
    with: {
      buretteML: found.buretteML,
      portionML: found.portionML,
      titrantMolPerL: found.titrantMolPerL,
      titreML: signif(found.titreML, 4),
      relativeExpandedUncertaintyPercent: percent,
    },
    largest,
    statement: found.meets
      ? `The same method meets the requirement with ${ware}: ${percent} % is predicted.`
      : `No usual burette, portion and strength of titrant meets the requirement with this method; the nearest is ${ware}, with ${percent} %. ${share}`,
  };
}
