import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { type DevelopedStage } from "./develop.ts";
import { evaluate } from "./evaluate.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { singleMethod, stageKey, type EvaluatedMethod, type MethodResult } from "./methods.ts";
import { chooseBuffer, MOST_PH_CHANGE, type BufferChoice } from "./optimise-buffer.ts";
import { chooseMasks, type MaskChoice, type Tried } from "./optimise-masks.ts";
import { choosePH, type PHChoice, type PHLook } from "./optimise-ph.ts";
import { portionsMethod, resultOf } from "./portions.ts";
import { supersaturations } from "./saturation.ts";
import { analyteLost } from "./soluble.ts";
import { threatsOf } from "./threats.ts";
import type { StagePlan, Task } from "./types.ts";
import { combineDifference, stageBudget } from "./uncertainty.ts";
import { atPH, expandedWhereHeld, scannedRange, type ScannedRange, type WorkingRange } from "./working-range.ts";

/** Why a titration is done at its pH and with its amounts; null where there was nothing to choose. */
export interface StageChoices {
  readonly pH: PHChoice | null;
  readonly buffer: BufferChoice | null;
  readonly masks: readonly MaskChoice[];
}

/** A method at the conditions chosen for it, with the working range of each titration, and why. */
export interface OptimisedMethod {
  readonly method: EvaluatedMethod;
  readonly ranges: readonly WorkingRange[];
  readonly choices: readonly StageChoices[];
}

/** A cheaper amount may cost the third figure of the uncertainty a little, no more. */
const COST_OF_AMOUNTS = 0.002;

const NOTHING_CHOSEN: StageChoices = { pH: null, buffer: null, masks: [] };

interface OptimisedStage {
  readonly stage: DevelopedStage;
  readonly range: WorkingRange;
  readonly choices: StageChoices;
}

/**
 * Moves every titration of a method to the conditions it is best done under: first the pH (least expanded uncertainty, away from the edges of
 * the working range), then the least usual buffer that holds it, then the least of each mask that holds what it masks with room to spare. What
 * meets the requirement still meets it, no figure gets worse by more than its third digit, and no working range gets narrower.
 * Titrations that others of the same vessel follow, or follow on, keep their conditions.
 */
export function optimised(task: Task, method: EvaluatedMethod, knowledge: Knowledge): OptimisedMethod {
  const asPlanned = (): OptimisedMethod => {
    const kept = method.stages.map((stage) => keptStage(task, stage, knowledge));
    return { method, ranges: kept.map((k) => k.range), choices: kept.map((k) => k.choices) };
  };
  if (method.mode === "successive") return asPlanned();
  const made = method.stages.map((stage) => optimisedStage(task, stage, knowledge));
  const stages = made.map((m) => m.stage);
  const moved = stages.every((s, i) => s === method.stages[i]) ? method : rebuilt(task, method, stages, knowledge);
  if (method.mode === "difference" && !noWorse(moved.results, method.results)) return asPlanned();
  return { method: moved, ranges: made.map((m) => m.range), choices: made.map((m) => m.choices) };
}

/** Whether each result is as sure as before: what is better for each of two titrations need not be for their difference. */
const noWorse = (now: readonly MethodResult[], before: readonly MethodResult[]): boolean =>
  now.every((r, i) => r.budget.expanded <= (1 + COST_OF_AMOUNTS) * before[i]!.budget.expanded);

/** The method of the same kind with other titrations. */
function rebuilt(
  task: Task,
  method: EvaluatedMethod,
  stages: readonly DevelopedStage[],
  knowledge: Knowledge,
): EvaluatedMethod {
  if (method.mode === "portions") return portionsMethod(task, stages, knowledge);
  const [whole, part] = stages;
  if (method.mode !== "difference" || whole === undefined || part === undefined)
    return singleMethod(task, stages[0]!, knowledge);
  const ofPart = (ions: readonly ComponentId[]): boolean => ions.join() === part.plan.determines.join();
  return {
    ...method,
    id: `difference: ${stages.map(stageKey).join(" ; ")}`,
    stages,
    results: method.results.map((r) =>
      ofPart(r.determines)
        ? resultOf(task, part, knowledge)
        : { determines: r.determines, ...combineDifference(task, whole.evaluation, part.evaluation, knowledge) },
    ),
  };
}

/** A titration as it was planned, because another hangs on it, with what its pH and its buffer do. */
function keptStage(task: Task, stage: DevelopedStage, knowledge: Knowledge): OptimisedStage {
  const { low, high, expandedAt } = scannedRange(task, stage, knowledge);
  const range = { low, high };
  const expanded = expandedAt(stage.plan.pH);
  if (expanded === null) return { stage, range, choices: NOTHING_CHOSEN };
  const start = { pH: stage.plan.pH, expanded };
  const buffer = chooseBuffer(task, stage, range, knowledge);
  const pH: PHChoice = { chosen: start, start, why: "another-hangs-on-it", next: null };
  return { stage, range, choices: { ...givenUp({ buffer, masks: [] }), pH } };
}

const optimisedStages = new WeakMap<DevelopedStage, OptimisedStage>();

/** Reckoned once for a titration, which may stand in several methods of its task. */
function optimisedStage(task: Task, planned: DevelopedStage, knowledge: Knowledge): OptimisedStage {
  const known = optimisedStages.get(planned);
  if (known) return known;
  const made = optimise(task, planned, scannedRange(task, planned, knowledge), knowledge);
  optimisedStages.set(planned, made);
  return made;
}

function optimise(task: Task, planned: DevelopedStage, scanned: ScannedRange, knowledge: Knowledge): OptimisedStage {
  const range = { low: scanned.low, high: scanned.high };
  if (planned.evaluation.status === "failed") return { stage: planned, range, choices: NOTHING_CHOSEN };
  const finished = ({ pH, expanded }: PHLook): Finished | null => {
    const moved =
      pH === planned.plan.pH ? planned : asGood(task, planned, atPH(planned.plan, pH, knowledge), expanded, knowledge);
    // No step may take back what the one before it gained.
    const most = (1 + COST_OF_AMOUNTS) * expanded;
    const tried = (plan: StagePlan): DevelopedStage | null => asGood(task, planned, plan, most, knowledge);
    return moved && withAmounts(task, moved, range, tried, knowledge);
  };
  const made = new Map<PHLook, Finished | null>();
  const pH = choosePH(
    planned,
    scanned,
    (look) => {
      made.set(look, finished(look));
      return holdsPH(made.get(look) ?? null);
    },
    knowledge,
  );
  if (pH === null) return { stage: planned, range, choices: NOTHING_CHOSEN };
  const { stage, bare, choices } = made.get(pH.chosen) ?? finished(pH.chosen)!;
  // Less of a mask must not cost the ends of the range.
  const holds = [range.low, range.high].every((end) => expandedWhereHeld(task, stage, end, knowledge) !== null);
  return stage === bare || holds
    ? { stage, range, choices: { ...choices, pH } }
    : { stage: bare, range, choices: { ...givenUp(choices), pH } };
}

/** A titration at a pH, before and after its amounts were chosen. */
interface Finished {
  readonly bare: DevelopedStage;
  readonly stage: DevelopedStage;
  readonly choices: Omit<StageChoices, "pH">;
}

/** A pH that no usual amount of the buffer holds is not gone to. */
const holdsPH = (made: Finished | null): boolean =>
  made !== null && Math.abs(made.choices.buffer?.chosen.pHDrop ?? 0) <= MOST_PH_CHANGE;

/** The same titration with the masks and the buffer it needs. */
function withAmounts(
  task: Task,
  bare: DevelopedStage,
  range: WorkingRange,
  tried: Tried,
  knowledge: Knowledge,
): Finished {
  const { stage, choices: masks } = chooseMasks(task, bare, tried, knowledge);
  const buffer = chooseBuffer(task, stage, range, knowledge);
  if (buffer === null) return { bare, stage, choices: { buffer, masks } };
  for (const chosen of [buffer.chosen, ...buffer.rounded]) {
    const { molPerL } = chosen;
    if (molPerL === stage.plan.buffer.molPerL) break;
    const made = tried({ ...stage.plan, buffer: { id: buffer.id, molPerL } });
    const less = chosen === buffer.chosen ? buffer.less : null;
    if (made !== null) return { bare, stage: made, choices: { buffer: { ...buffer, chosen, less }, masks } };
  }
  return { bare, stage, choices: { buffer: { ...buffer, chosen: buffer.start, less: null }, masks } };
}

/** What stands where amounts that narrow the working range were given up. */
const givenUp = ({ buffer, masks }: Omit<StageChoices, "pH">): Omit<StageChoices, "pH"> => ({
  buffer: buffer && { ...buffer, chosen: buffer.start, less: null },
  masks: masks.map((m) => ({
    ...m,
    chosenMolPerL: m.startMolPerL,
    ion: null,
    log10Margin: null,
    why: "as-planned" as const,
  })),
});

/** A titration with another plan, where it is no less sure than `atMost` (relative) and nothing more is in the way or precipitates; else null. */
function asGood(
  task: Task,
  planned: DevelopedStage,
  plan: StagePlan,
  atMost: number,
  knowledge: Knowledge,
): DevelopedStage | null {
  const evaluation = evaluate(task, plan, knowledge);
  const before = planned.evaluation;
  if (evaluation.status === "failed" || evaluation.blockedBy.length > before.blockedBy.length) return null;
  if (evaluation.status === "outOfModelRange" && before.status === "converged") return null;
  // Where an end point rests on less (no band of the dye's own) its smaller uncertainty is no gain.
  if (evaluation.basis !== before.basis) return null;
  if (stageBudget(task, evaluation, knowledge).expanded > atMost) return null;
  const remaining = threatsOf(task, evaluation, knowledge);
  const known = new Set(planned.remaining.map((t) => t.component));
  if (remaining.some((t) => !known.has(t.component))) return null;
  if (
    !planned.analytePrecipitates &&
    plan.backTitrant === null &&
    plan.detour === null &&
    analyteLost(evaluation.model)
  )
    return null;
  const there = fallingOut(task, before, knowledge);
  return [...fallingOut(task, evaluation, knowledge)].some((ions) => !there.has(ions))
    ? null
    : { ...planned, plan, evaluation, remaining };
}

const solidsOf = new WeakMap<StageEvaluation, ReadonlySet<string>>();

/** The ions of every solid that the vessel may deposit before the titrant comes; reckoned once for an evaluation. */
function fallingOut(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): ReadonlySet<string> {
  const known = solidsOf.get(evaluation);
  if (known) return known;
  const { plan, ionicStrengthMolPerL } = evaluation.model;
  const made = new Set(
    supersaturations(task, plan, knowledge, ionicStrengthMolPerL)
      .filter((s) => s.pace !== "no")
      .map((s) => [...s.components].sort().join()),
  );
  solidsOf.set(evaluation, made);
  return made;
}
