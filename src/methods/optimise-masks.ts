import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { type DevelopedStage } from "./develop.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { maskAccounts } from "./mask-account.ts";
import { rowsFor } from "./masks.ts";
import { vesselSample } from "./solution.ts";
import { IGNORED_PART_OF_REQUIREMENT } from "./threats.ts";
import type { MaskingStep, StagePlan, Task } from "./types.ts";

/** How much of a masking agent was chosen, mol/L of the vessel, and what stood in the plan. */
export interface MaskChoice {
  readonly agent: string;
  readonly chosenMolPerL: number;
  readonly startMolPerL: number;
  /** The masked ion that is nearest to being too free; null where nothing was reckoned. */
  readonly ion: ComponentId | null;
  /** log10 of how many times as much of that ion could be free at the chosen amount. */
  readonly log10Margin: number | null;
  /** Level of the ion as a share of the level up to which its record says the agent holds it; null where that decided nothing. */
  readonly ofRecord: number | null;
  /** What decided: the margin, the least that is usual, what is bound, the level on record; "record" where nothing says how much is enough. */
  readonly why: "margin" | "least-usual" | "needed" | "as-planned" | "level-on-record" | "record";
}

/** What a bench measures out, mol/L: 1, 2, 5 times a power of ten. */
const BENCH_AMOUNTS = [1e-3, 2e-3, 5e-3, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1];
/** So many times more of a masked ion may be free before the dye or the result suffers: the constants of masks are known to a few tenths, and samples differ. */
const WANTED_LOG10_MARGIN = 1;
/** Where the usual amounts of an agent are not known as a range, less than this part of the usual one is not proposed. */
const LEAST_PART_OF_USUAL = 0.2;
/** With a quarter of the agent the free ion is four times as much; a fifth is left to spare below what it is at the level on record. */
const RECORD_MARGIN = 5;
/** Over what metals bind of the agent (common practice). */
const EXCESS = 1.2;
/** Ligands a metal ion takes at the most. */
const LIGANDS_PER_METAL = 6;
/** Share of the dye that a metal may hold 5 % past equivalence before the change is lost. */
const BLOCKING_SHARE = 0.1;
const PAST_EQUIVALENCE = 1.05;

/** On what the amount of an agent can be reckoned: soluble complexes with constants, or records of them; null where the agent does anything else too. */
function basisOf(plan: StagePlan, agent: string): "equilibrium" | "empirical" | null {
  if (plan.auxiliary.some((a) => a.id === agent)) return null;
  const steps = plan.masking.filter((m) => m.agent === agent);
  const all = (basis: MaskingStep["basis"]): boolean =>
    steps.every((m) => m.basis === basis && m.via === "complexation" && m.molPerL > 0);
  return all("equilibrium") ? "equilibrium" : all("empirical") ? "empirical" : null;
}

/** log10 of how many times as much of a masked ion could be free before its bias counts or it holds the dye. */
function marginOf(task: Task, evaluation: StageEvaluation, ion: ComponentId): number {
  const { model } = evaluation;
  const bias = Math.abs(evaluation.biasOf.get(ion) ?? 0);
  const ignored = (IGNORED_PART_OF_REQUIREMENT * task.requirementPercent) / 100;
  const ofBias = Math.log10(ignored / Math.max(bias, Number.MIN_VALUE));
  if (!model.indicator || !model.plan.indicator) return ofBias;
  const ratio = model.at((PAST_EQUIVALENCE * evaluation.equivalenceML) / 1000).dyeRatioOf(ion);
  const share = ratio / (1 + ratio);
  const ofDye = share > 0 ? Math.log10(BLOCKING_SHARE / share) : Number.POSITIVE_INFINITY;
  return Math.min(ofBias, ofDye);
}

interface Margin {
  readonly ion: ComponentId;
  readonly log10: number;
}

function leastMargin(task: Task, evaluation: StageEvaluation, steps: readonly MaskingStep[]): Margin | null {
  const margins = steps
    .flatMap((s) => s.masks)
    .map((ion) => ({ ion, log10: marginOf(task, evaluation, ion) }))
    .filter((m) => !Number.isNaN(m.log10));
  return margins.reduce<Margin | null>((least, m) => (least === null || m.log10 < least.log10 ? m : least), null);
}

const withAmount = (plan: StagePlan, agent: string, molPerL: number): StagePlan => ({
  ...plan,
  masking: plan.masking.map((m) => (m.agent === agent ? { ...m, molPerL } : m)),
});

/** A titration with another plan; null where it is worse than as planned. */
export type Tried = (plan: StagePlan) => DevelopedStage | null;

/**
 * The least amounts of the masking agents of a titration, 1-2-5 figures, that hold ten times as much of every masked ion as would matter,
 * bind everything with a fifth over, and are no less than a tenth of what is usual. Returns the titration with them, and a word on each agent.
 */
export function chooseMasks(
  task: Task,
  stage: DevelopedStage,
  tried: Tried,
  knowledge: Knowledge,
): { readonly stage: DevelopedStage; readonly choices: readonly MaskChoice[] } {
  let made = stage;
  const choices: MaskChoice[] = [];
  // One after the other in the order of their names: the order of the rows in a brief must not choose the amounts.
  for (const agent of [...new Set(stage.plan.masking.map((m) => m.agent))].sort()) {
    if (agent === "hydroxide") continue;
    const startMolPerL = Math.max(...stage.plan.masking.filter((m) => m.agent === agent).map((m) => m.molPerL));
    const basis = basisOf(stage.plan, agent);
    const chosen =
      basis === "equilibrium"
        ? lessOf(task, made, agent, startMolPerL, tried, knowledge)
        : basis === "empirical"
          ? lessOnRecord(task, made, agent, startMolPerL, tried, knowledge)
          : { stage: made, choice: asUsual(agent, startMolPerL) };
    made = chosen.stage;
    choices.push(chosen.choice);
  }
  return { stage: made, choices };
}

interface Chosen {
  readonly stage: DevelopedStage;
  readonly choice: MaskChoice;
}

const asUsual = (agent: string, molPerL: number): MaskChoice => ({
  agent,
  chosenMolPerL: molPerL,
  startMolPerL: molPerL,
  ion: null,
  log10Margin: null,
  ofRecord: null,
  why: "record",
});

/** The least of its usual amounts where what it masks is far below the level up to which the record says it is held. */
function lessOnRecord(
  task: Task,
  start: DevelopedStage,
  agent: string,
  startMolPerL: number,
  tried: Tried,
  knowledge: Knowledge,
): Chosen {
  const { plan } = start;
  const kept: Chosen = { stage: start, choice: asUsual(agent, startMolPerL) };
  const least = knowledge.agents.get(agent)?.usualMinMolPerL;
  const ions = plan.masking.filter((m) => m.agent === agent).flatMap((m) => m.masks);
  const shares = ions.map((ion) => {
    const level = vesselSample(task, plan).find((c) => c.component === ion)?.inVesselMolPerL ?? 0;
    const record = rowsFor(knowledge, agent, ion, plan.pH).find((r) => r.upToMolPerL !== null);
    return { ion, share: record ? level / record.upToMolPerL! : Number.POSITIVE_INFINITY };
  });
  const worst = shares.reduce((most, s) => (s.share > most.share ? s : most));
  if (least === undefined || !Number.isFinite(worst.share)) return kept;
  const enough = Math.max(least, RECORD_MARGIN * worst.share * startMolPerL);
  const less = BENCH_AMOUNTS.find((c) => c >= 0.999 * enough);
  const asRecorded: Chosen = { stage: start, choice: { ...kept.choice, ion: worst.ion, ofRecord: worst.share } };
  if (less === undefined || less > 0.99 * startMolPerL) return asRecorded;
  const stage = tried(withAmount(plan, agent, less));
  return stage === null
    ? asRecorded
    : { stage, choice: { ...asRecorded.choice, chosenMolPerL: less, why: "level-on-record" } };
}

function lessOf(
  task: Task,
  start: DevelopedStage,
  agent: string,
  startMolPerL: number,
  tried: Tried,
  knowledge: Knowledge,
): Chosen {
  const steps = start.plan.masking.filter((m) => m.agent === agent);
  const used = maskAccounts(start.evaluation, steps, knowledge)[0]?.usedFraction ?? 0;
  const bound = steps.flatMap((s) => s.masks).reduce((sum, ion) => sum + totalOf(start.evaluation, ion), 0);
  const needed = EXCESS * Math.max(used * startMolPerL, LIGANDS_PER_METAL * bound);
  const record = knowledge.agents.get(agent);
  const leastUsual = record?.usualMinMolPerL ?? LEAST_PART_OF_USUAL * (record?.usualMolPerL ?? startMolPerL);
  const floor = Math.max(needed, leastUsual);
  let stage = start;
  let molPerL = startMolPerL;
  let margin = leastMargin(task, start.evaluation, steps);
  let why: MaskChoice["why"] = "as-planned";
  const smaller = BENCH_AMOUNTS.filter((c) => c < 0.99 * startMolPerL).reverse();
  for (const less of smaller) {
    why = "margin";
    if (less < 0.999 * floor) {
      why = needed > leastUsual ? "needed" : "least-usual";
      break;
    }
    const next = tried(withAmount(stage.plan, agent, less));
    const left = next && leastMargin(task, next.evaluation, steps);
    if (next === null || left === null || left.log10 < WANTED_LOG10_MARGIN) break;
    [stage, molPerL, margin] = [next, less, left];
  }
  const log10Margin = margin !== null && Number.isFinite(margin.log10) ? margin.log10 : null;
  return {
    stage,
    choice: { agent, chosenMolPerL: molPerL, startMolPerL, ion: margin?.ion ?? null, log10Margin, ofRecord: null, why },
  };
}

const totalOf = (evaluation: StageEvaluation, ion: ComponentId): number =>
  evaluation.model.solution.totals.get(ion) ?? 0;
