import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { bareStage, develop, type BareStage, type DevelopedStage } from "./develop.ts";
import { detourSkeletons } from "./detours.ts";
import { hazardBurden } from "./hazard-burden.ts";
import { supersaturations } from "./saturation.ts";
import { releaseSkeletons } from "./release-plan.ts";
import type { Shelf } from "./shelf.ts";
import { besideOthers, skeletonsOf } from "./detection-skeletons.ts";
import { LAST_TITRANTS, OTHER_TITRANTS, USUAL_FIELD, type Field, type Skeleton } from "./skeletons.ts";
import { countedIn, type MethodMode, type Task } from "./types.ts";
import { stageBudget, type Budget } from "./uncertainty.ts";
import { detourRecord } from "./way-round.ts";

/** One result of a method: what it gives, how wrong, how sure. */
export interface MethodResult {
  readonly determines: readonly ComponentId[];
  readonly biasFraction: number;
  readonly budget: Budget;
}

/** A method, evaluated: its titrations in order and what they give together. */
export interface EvaluatedMethod {
  readonly id: string;
  readonly mode: MethodMode;
  readonly stages: readonly DevelopedStage[];
  readonly results: readonly MethodResult[];
  readonly portions: number;
}

/** By what the end of a titration is seen: the dye, the dye with a photometer, the electrode. */
export function seenWith(plan: DevelopedStage["plan"]): string {
  if (plan.detection === "electrode") return plan.electrode ?? "electrode";
  const dye = plan.indicator?.id ?? "own colour";
  return plan.detection === "photometric" ? `${dye} (photometer)` : (plan.indicator?.id ?? plan.detection);
}

/** Readable key of a titration: the same plan always has the same key. */
export function stageKey(stage: DevelopedStage): string {
  const { plan } = stage;
  return [
    plan.determines.join("+"),
    plan.detour?.id ?? plan.mode,
    plan.titrant.id,
    plan.backTitrant?.id ?? "",
    seenWith(plan),
    plan.pH,
    plan.buffer.id,
    [...new Set([...plan.masking.map((m) => m.agent), ...plan.auxiliary.map((a) => a.id)])].sort().join("+"),
    plan.preparation.join("+"),
    [...plan.removed].sort().join("+"),
  ].join("|");
}

/** How many clean titrations that meet the requirement are enough to stop widening the search. */
const ENOUGH = 3;
/** How many dyes the other titrants are tried with when the usual one serves. */
const DYES_FOR_OTHERS = 2;

/** … and when it leaves too little. */
const DYES_WHEN_SHORT = 6;

/**
 * How far the titrations of a group are looked for: as rivals of each other; only until the usual titrant serves (stages of combined
 * methods); only with the usual titrant and nothing separated (what is subtracted beside).
 */
export type Reach = "rivals" | "until-served" | "usual-together";

/**
 * All titrations of one group of ions that are worth judging: first EDTA with every dye in use, then, where that leaves too
 * little, the other titrants and back titrations by analogy.
 */
export function stagesFor(
  task: Task,
  determines: readonly ComponentId[],
  knowledge: Knowledge,
  shelf: Shelf,
  reach: Reach = "rivals",
): DevelopedStage[] {
  // Only metal ions are bound by the titrant itself; anions need a way round, and so do some metals.
  const around = developed(task, detourSkeletons(task, determines, knowledge, shelf), knowledge, shelf, reach);
  if (determines.some((id) => knowledge.components.get(id)?.kind !== "metal")) return around;
  return [...directly(task, determines, knowledge, shelf, reach), ...around];
}

/** Skeletons worked out against the matrix, as far as they are worth it. */
function developed(
  task: Task,
  skeletons: readonly Skeleton[],
  knowledge: Knowledge,
  shelf: Shelf,
  reach: Reach,
): DevelopedStage[] {
  const bare = skeletons.map((skeleton) => bareStage(task, skeleton, knowledge, shelf));
  const separate = reach !== "usual-together";
  return promising(task, bare, knowledge).flatMap((start) => develop(task, start, knowledge, shelf, separate));
}

/** Titrations in which the titrant binds the analyte itself. */
function directly(
  task: Task,
  determines: readonly ComponentId[],
  knowledge: Knowledge,
  shelf: Shelf,
  reach: Reach,
): DevelopedStage[] {
  const seen = new Set<string>();
  const search = (field: Field): DevelopedStage[] => {
    const make = { task, knowledge, shelf, determines, field };
    const skeletons: Skeleton[] = skeletonsOf(make);
    const bare = skeletons.map((skeleton) => bareStage(task, skeleton, knowledge, shelf));
    return promising(task, bare, knowledge).flatMap((start) =>
      develop(task, start, knowledge, shelf, reach !== "usual-together").filter((stage) => {
        const key = stageKey(stage);
        if (seen.has(key)) return false;
        seen.add(key);
        return true;
      }),
    );
  };
  const usual = search(USUAL_FIELD);
  if (reach === "usual-together") return usual;
  if (reach === "until-served" && usual.some((s) => s.evaluation.status !== "failed" && s.remaining.length === 0))
    return usual;
  const clean = usual.filter((s) => meetsCleanly(task, s, knowledge));
  const others = (shelf("EDTA") ? OTHER_TITRANTS : [...OTHER_TITRANTS, ...LAST_TITRANTS]).filter((t) => shelf(t));
  if (clean.length < ENOUGH) {
    const make = { task, knowledge, shelf, determines, field: USUAL_FIELD };
    const alone = task.laboratory.detection.includes("visual") && !besideOthers(make) ? releaseSkeletons(make) : [];
    const likely = new Set(
      [...usual]
        .sort((a, b) => roughCost(task, a, knowledge) - roughCost(task, b, knowledge))
        .flatMap((s) => (s.plan.indicator ? [s.plan.indicator.id] : [])),
    );
    const dyes = usual.length > 0 ? new Set([...likely].slice(0, DYES_WHEN_SHORT)) : null;
    return [
      ...usual,
      ...developed(task, alone, knowledge, shelf, reach),
      ...search({ titrants: others, dyes, analogous: false }),
      ...search({ titrants: ["EDTA"], dyes: null, analogous: true }),
    ];
  }
  const ranked = [...clean].sort((a, b) => roughCost(task, a, knowledge) - roughCost(task, b, knowledge));
  const dyes = new Set(
    ranked.flatMap((s) => (s.plan.indicator ? [s.plan.indicator.id] : [])).slice(0, DYES_FOR_OTHERS),
  );
  const analogous = needsTitrantFirst(task, ranked[0]!, knowledge)
    ? search({ titrants: ["EDTA"], dyes: null, analogous: true })
    : [];
  return [...usual, ...search({ titrants: others, dyes, analogous: false }), ...analogous];
}

/** How many titrations that need masks or separations are worked out; those that need nothing all are. */
const WORKED_OUT = 14;

/** What is worth working out against the matrix: all that needs nothing, and the best of the rest, dye by dye. */
export function promising(task: Task, stages: readonly BareStage[], knowledge: Knowledge): BareStage[] {
  const quiet = stages.filter((s) => s.threats.length === 0);
  const cost = (s: BareStage): number =>
    10 * s.threats.length +
    (s.bare.status === "failed" && s.threats.length === 0 ? 100 : 0) +
    (s.bare.why === "no-colour" ? 60 : 0) +
    (s.plan.backTitrant ? 8 : 0) +
    (s.skeleton.use === "published" ? 0 : 12) +
    // What the sharpest interferent leaves of the analyte's own constant tells how hard masking will be.
    Math.max(0, 8 - analyteConstant(s)) * 5 +
    (knowledge.indicators.get(s.plan.indicator?.id ?? "")?.hasConstants ? 0 : 3);
  const perDye = new Map<string, number>();
  const loud = stages
    .filter((s) => s.threats.length > 0)
    .sort((a, b) => cost(a) - cost(b))
    .filter((s) => {
      const dye = `${s.plan.detour?.id ?? s.plan.mode} ${seenWith(s.plan)}`;
      const n = perDye.get(dye) ?? 0;
      perDye.set(dye, n + 1);
      return n < 2;
    });
  return [...quiet, ...loud.slice(0, WORKED_OUT)];
}

function analyteConstant(stage: BareStage): number {
  const own = countedIn(stage.plan)
    .map((ion) => stage.bare.log10ConditionalK.get(ion))
    .filter((k) => k !== undefined);
  return own.length > 0 ? Math.min(...own) : 8;
}

/** Whether the analyte stands supersaturated before the titrant comes (phosphate, carbonate): then titrant first and a back titration is a rival. */
function needsTitrantFirst(task: Task, stage: DevelopedStage, knowledge: Knowledge): boolean {
  return supersaturations(task, stage.plan, knowledge, stage.evaluation.model.ionicStrengthMolPerL).some(
    (s) => s.pace !== "no" && s.components.some((c) => stage.plan.determines.includes(c)),
  );
}

/** Whether nothing is left undone and the requirement is met without a separation. */
export function meetsCleanly(task: Task, stage: DevelopedStage, knowledge: Knowledge): boolean {
  const { evaluation } = stage;
  if (
    evaluation.status === "failed" ||
    stage.remaining.length > 0 ||
    evaluation.blockedBy.length > 0 ||
    stage.plan.removed.length > 0
  )
    return false;
  if (stage.analytePrecipitates && stage.plan.backTitrant === null && stage.plan.auxiliary.length === 0) return false;
  return 100 * stageBudget(task, evaluation, knowledge).expanded <= task.requirementPercent;
}

/** A dye in use for this many ions stands on most shelves. */
const COMMON_DYE_IONS = 8;
/** For how many ions a dye is in use on record. */
export const dyeBreadth = (dye: string | undefined, knowledge: Knowledge): number =>
  new Set(knowledge.indicators.get(dye ?? "")?.uses.flatMap((u) => u.ions)).size;

/** What an instrument costs against the eye, as the rules weigh it. */
const COST_OF_DETECTION = { visual: 0, photometric: 3, electrode: 4 } as const;
/** A release reads twice and heats twice. */
const RELEASE_COST = 6;
/** A chelate in bulk is a third standard solution, whose balance counts. */
const BULK_CHELATE_COST = 4;

/** A stage's promise, smaller is better: bias and band against the requirement, what is left undone, steps. */
export function roughCost(task: Task, stage: DevelopedStage, knowledge: Knowledge): number {
  const { evaluation, plan } = stage;
  if (evaluation.status === "failed") return 1000;
  const budget = stageBudget(task, evaluation, knowledge);
  const ratio = (100 * budget.expanded) / task.requirementPercent;
  const cost =
    Math.min(ratio, 20) * 4 +
    stage.remaining.length * 40 +
    evaluation.blockedBy.length * 60 +
    plan.masking.reduce((sum, m) => sum + 3 + hazardBurden(m.agent, knowledge), 0) +
    (plan.backTitrant ? hazardBurden(plan.backTitrant.id, knowledge) : 0) +
    plan.auxiliary.length * 2 +
    (plan.backTitrant ? 8 : 0) +
    (plan.release ? RELEASE_COST : 0) +
    (plan.mode === "displacement" && plan.chelate ? BULK_CHELATE_COST : 0) +
    (plan.removed.length > 0 ? 25 : 0) +
    (plan.titrant.id === "EDTA" ? 0 : 5) +
    (stage.skeleton.use === "published" ? 0 : plan.backTitrant ? 4 : 12) +
    (evaluation.basis === "empirical" ? 5 : 0) +
    (evaluation.status === "outOfModelRange" ? 5 : 0) +
    (plan.indicator && dyeBreadth(plan.indicator.id, knowledge) < COMMON_DYE_IONS ? 4 : 0) +
    COST_OF_DETECTION[plan.detection] +
    (plan.preparation.includes("boil") || plan.preparation.includes("heat") ? 3 : 0);
  // In tenths: what the last digits of a solved equilibrium say must not order candidates.
  return Math.round(10 * cost) / 10;
}

/** Mode of a method of one titration: its stage's own, or that of the way round. */
function modeOf({ plan }: DevelopedStage, knowledge: Knowledge): MethodMode {
  return plan.detour ? detourRecord(plan.detour, knowledge).methodMode : plan.mode;
}

/** A method of one titration. */
export function singleMethod(task: Task, stage: DevelopedStage, knowledge: Knowledge): EvaluatedMethod {
  const budget = stageBudget(task, stage.evaluation, knowledge);
  return {
    id: stageKey(stage),
    mode: modeOf(stage, knowledge),
    stages: [stage],
    results: [{ determines: stage.plan.determines, biasFraction: stage.evaluation.biasFraction, budget }],
    portions: 1,
  };
}

/** What is to be reported together: every individual analyte by itself, all with "sum" as one. */
export function groupsOf(task: Task): ComponentId[][] {
  const sum = task.analytes.filter((a) => a.report === "sum").map((a) => a.component);
  const single = task.analytes.filter((a) => a.report === "individual").map((a) => [a.component]);
  return sum.length > 0 ? [...single, sum] : single;
}
