import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { best } from "./combine.ts";
import type { DevelopedStage } from "./develop.ts";
import { meetsCleanly, stageKey, stagesFor, type EvaluatedMethod } from "./methods.ts";
import type { Shelf } from "./shelf.ts";
import type { Task } from "./types.ts";
import { combineDifference } from "./uncertainty.ts";

/** Below this part of the analyte a metal is a trace to be masked, not a partner to be titrated for itself. */
const PARTNER_RATIO = 0.05;
/** How many metals of the matrix are looked at as the partner. */
const PARTNERS_TRIED = 1;
/** A titration is hardly better than this, % of its titre: what of it a difference multiplies tells whether the requirement is out of reach. */
const LEAST_PERCENT = 0.25;
/** How many sums and how many titrations of the partner are combined. */
const CARRIED_ON = 3;

/**
 * The analyte as the difference between its sum with one metal of the matrix and that metal alone (magnesium beside calcium),
 * where no titration of the analyte itself serves without a separation. Gives one result, that of the analyte.
 */
export function differencesBeside(
  task: Task,
  analyte: readonly ComponentId[],
  alone: readonly DevelopedStage[],
  knowledge: Knowledge,
  shelf: Shelf,
): EvaluatedMethod[] {
  if (alone.some((s) => meetsCleanly(task, s, knowledge) && !throwsDown(s))) return [];
  return partnersOf(task, alone, knowledge).flatMap((partner) => {
    const useful = (stages: readonly DevelopedStage[]): DevelopedStage[] =>
      best(task, stages, knowledge).filter((s) => s.remaining.length === 0);
    const parts = useful(stagesFor(task, [partner], knowledge, shelf, "usual-together")).slice(0, CARRIED_ON);
    if (parts.length === 0) return [];
    const wholes = useful(stagesFor(task, [...analyte, partner].sort(), knowledge, shelf, "usual-together")).slice(
      0,
      CARRIED_ON,
    );
    return wholes.flatMap((whole) =>
      parts.map((part): EvaluatedMethod => {
        const { biasFraction, budget } = combineDifference(task, whole.evaluation, part.evaluation, knowledge);
        return {
          id: `difference: ${stageKey(whole)} ; ${stageKey(part)}`,
          mode: "difference",
          stages: [whole, part],
          results: [{ determines: analyte, biasFraction, budget }],
          portions: 2,
        };
      }),
    );
  });
}

/** A mask that throws a metal down in bulk beside the titration does not spare the analyst anything; alkali alone does. */
const throwsDown = (stage: DevelopedStage): boolean =>
  stage.plan.masking.some((m) => m.via === "precipitation" && m.agent !== "hydroxide");

/** Metals of the matrix that are titrated with the analyte in bulk, the most plentiful first. */
function partnersOf(task: Task, alone: readonly DevelopedStage[], knowledge: Knowledge): ComponentId[] {
  const present = Math.max(...alone.map((s) => s.bare.presentMol / s.bare.model.volumeL), 0);
  const amounts = new Map(
    alone
      .flatMap((s) => s.threats)
      .filter((t) => t.titrates && t.molPerL > PARTNER_RATIO * present)
      .filter((t) => LEAST_PERCENT * (1 + 2 * (t.molPerL / present)) <= task.requirementPercent)
      .filter((t) => (knowledge.components.get(t.component)?.charge ?? 0) >= 2)
      .map((t) => [t.component, t.molPerL] as const),
  );
  return [...amounts]
    .sort(([a, x], [b, y]) => y - x || a.localeCompare(b))
    .slice(0, PARTNERS_TRIED)
    .map(([component]) => component);
}
