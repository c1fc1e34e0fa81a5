import type { Knowledge } from "../constants/knowledge.ts";
import type { RuleRunner } from "../inference/index.ts";
import type { Facts, RuleFinding } from "../inference/types.ts";
import type { Task } from "../methods/types.ts";
import { mergedStatements } from "./merge-statements.ts";
import { componentFacts } from "./component-facts.ts";
import { methodFacts } from "./method-facts.ts";
import { stageContext, stageFacts } from "./stage-facts.ts";
import type { MethodUnderJudgement } from "./under-judgement.ts";

/** A rule's word on a method, and which stage it was about (null: the whole method). */
export interface Verdict {
  readonly finding: RuleFinding;
  readonly stage: number | null;
}

/** A judged method: the rules' words, whether it stands, and its points. */
export interface JudgedMethod extends MethodUnderJudgement {
  readonly facts: Facts;
  readonly verdicts: readonly Verdict[];
  readonly excludedBy: readonly Verdict[];
  readonly points: number;
  readonly expandedPercent: number;
  readonly meets: boolean;
  readonly reservations: readonly string[];
}

/** A required step is there when any of its alternatives stands in the plan. */
function satisfied(finding: RuleFinding, judged: MethodUnderJudgement, stage: number | null): boolean {
  const { requires } = finding;
  if (requires === null) return true;
  const stages = stage === null ? judged.method.stages : [judged.method.stages[stage]!];
  return stages.some(({ plan }) => {
    const present =
      requires.kind === "preparation"
        ? plan.preparation
        : requires.kind === "auxiliary"
          ? [...plan.auxiliary.map((a) => a.id), ...plan.masking.map((m) => m.agent)]
          : plan.masking.map((m) => m.agent);
    return requires.anyOf.some((id) => present.includes(id));
  });
}

/** Asks the rules about a method as a whole, each of its titrations, and each component in each of them. */
export async function judge(
  task: Task,
  under: MethodUnderJudgement,
  knowledge: Knowledge,
  rules: RuleRunner,
): Promise<JudgedMethod> {
  const { method } = under;
  const facts = methodFacts(task, under, knowledge);
  const verdicts: Verdict[] = (await rules.run("method", facts)).map((finding) => ({ finding, stage: null }));
  for (const [index, stage] of method.stages.entries()) {
    const context = stageContext(task, stage, knowledge);
    const ofStage = await rules.run("stage", stageFacts(task, stage, under.ranges[index] ?? null, context, knowledge));
    const ofComponents = await rules.runAll(
      componentFacts(task, stage, context, knowledge).map((c) => ({ scope: "component" as const, facts: c.facts })),
    );
    for (const finding of [...ofStage, ...ofComponents.flat()]) verdicts.push({ finding, stage: index });
  }
  return weighed(task, under, facts, verdicts);
}

/** What the rules' words on a method come to. */
export function weighed(
  task: Task,
  under: MethodUnderJudgement,
  facts: Facts,
  verdicts: readonly Verdict[],
): JudgedMethod {
  const { method } = under;
  const excludedBy = verdicts.filter(
    ({ finding, stage }) =>
      finding.effect === "excludes" || (finding.effect === "requires" && !satisfied(finding, under, stage)),
  );
  const worst = Math.max(...method.results.map((r) => 100 * r.budget.expanded));
  const evaluated = method.stages.every((s) => s.evaluation.status !== "failed");
  const expandedPercent = evaluated && Number.isFinite(worst) ? worst : Number.POSITIVE_INFINITY;
  return {
    ...under,
    facts,
    verdicts,
    excludedBy,
    points: verdicts.reduce((sum, { finding }) => sum + finding.weight, 0),
    expandedPercent,
    meets: expandedPercent <= task.requirementPercent,
    reservations: [
      ...new Set(
        mergedStatements(verdicts.filter(({ finding }) => finding.reservation).map(({ finding }) => finding)).map(
          ({ statement }) => statement,
        ),
      ),
    ],
  };
}

/**
 * Feasible before not; meeting the requirement before missing it; then points of the rules; of equals the one that stands without
 * reservations; then expanded uncertainty; then id.
 */
export function rank(a: JudgedMethod, b: JudgedMethod): number {
  return (
    Number(a.excludedBy.length > 0) - Number(b.excludedBy.length > 0) ||
    Number(b.meets) - Number(a.meets) ||
    // Methods that miss are ordered by how far they miss: the nearest is shown.
    (a.meets ? 0 : missOrder(a.expandedPercent) - missOrder(b.expandedPercent)) ||
    b.points - a.points ||
    (a.meets ? Number(a.reservations.length > 0) - Number(b.reservations.length > 0) : 0) ||
    asPrinted(a.expandedPercent) - asPrinted(b.expandedPercent) ||
    a.method.id.localeCompare(b.method.id)
  );
}

/** Three figures of an uncertainty are meant; the fourth must not decide between methods. */
const asPrinted = (percent: number): number => (Number.isFinite(percent) ? Number(percent.toPrecision(3)) : 1e9);

/** Misses are compared in steps of a factor 1.5: smaller differences do not outweigh what the rules say. */
const missOrder = (percent: number): number =>
  Number.isFinite(percent) ? Math.round(Math.log(percent) / Math.log(1.5)) : 1e6;
