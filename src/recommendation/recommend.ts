import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { RuleRunner } from "../inference/index.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { roughCost, type EvaluatedMethod } from "../methods/methods.ts";
import { searchMethods, type MethodSearch } from "../methods/search.ts";
import { toleranceLimits } from "../methods/tolerance.ts";
import type { Task } from "../methods/types.ts";
import { briefOf } from "./brief-document.ts";
import type { Recommendation, RejectedMethod } from "./contract.ts";
import { constantsUsed } from "./constants-used.ts";
import { becauseOf, methodDocument } from "./document.ts";
import { findingsOf } from "./findings.ts";
import { disagreementOf } from "./precedents.ts";
import { judge, type JudgedMethod } from "./judge.ts";
import { judgedMethods, ranged, ranking, type Ranking } from "./ranking.ts";
import { notByThisTechnique } from "./not-by-this-technique.ts";
import { shownIon } from "./spelling.ts";

/** How many of the rejected methods an answer shows. */
const REJECTED_SHOWN = 16;
/** How many usual dyes the findings are judged with. */
const SIMPLEST_SHOWN = 3;

/**
 * Answers a task: searches methods, judges them by the rules, ranks them, and writes the recommendation document.
 * Deterministic: the same task, knowledge and rules give the same document.
 */
export async function recommend(task: Task, knowledge: Knowledge, rules: RuleRunner): Promise<Recommendation> {
  const { search, shown, judged } = await rankedMethods(task, knowledge, rules);
  const methods = shown.map((j, i) =>
    methodDocument(task, j, i + 1, i === 0 ? toleranceLimits(task, j.method, knowledge) : [], knowledge),
  );
  const first = shown[0] ?? null;
  // Where the answer is a way round, no direct titration of the analyte is one that an analyst would think of.
  const around = first?.method.stages.some((s) => s.plan.detour !== null) ?? false;
  const simplest = around ? [] : simplestOf(task, search.methods, knowledge);
  return {
    contract: 1,
    knowledge: { version: knowledge.version, hash: knowledge.hash },
    brief: briefOf(task, knowledge),
    verdict: methods[0]?.verdict ?? "not-fit",
    findings: findingsOf(task, first?.method ?? null, simplest, knowledge),
    methods,
    rejected: rejectedOf(task, judged, knowledge),
    decidedBy: decidedBy(shown[0], shown[1]),
    disagreement: disagreementOf(
      shown.map((j) => j.method),
      knowledge,
    ),
    notes: [
      ...task.notes,
      ...(search.specialOpened ? ["Nothing from the usual shelf served; special reagents were considered too."] : []),
      ...(methods.length === 0
        ? whyNothing(task, search.methods.length, knowledge)
        : methods[0]!.meetsRequirement
          ? []
          : notByThisTechnique(task, knowledge)),
    ],
    constants: first ? constantsUsed(first.method.stages, knowledge) : [],
  };
}

/** The search and the judgement behind an answer, best method first. */
export async function rankedMethods(
  task: Task,
  knowledge: Knowledge,
  rules: RuleRunner,
): Promise<Ranking & { readonly search: MethodSearch }> {
  const search = searchMethods(task, knowledge);
  const found = await ranking(await judgedMethods(task, search.methods, knowledge, rules), (method) =>
    judge(task, ranged(task, method, knowledge), knowledge, rules),
  );
  return { ...found, search };
}

/** The direct titrations of the analyte that an analyst would think of first: EDTA, published dye, nothing separated. */
function simplestOf(task: Task, methods: readonly EvaluatedMethod[], knowledge: Knowledge): DevelopedStage[] {
  const all = methods
    .flatMap((m) => m.stages)
    .filter(
      (s) =>
        s.plan.mode === "direct" &&
        s.plan.detour === null &&
        s.plan.titrant.id === "EDTA" &&
        s.skeleton.use === "published" &&
        s.skeleton.useConfidence !== "low" &&
        s.plan.removed.length === 0,
    );
  // Where a dye serves without a further ligand that keeps the analyte dissolved, the titrations that need one are not the simplest.
  const unaided = all.filter((s) => s.plan.auxiliary.length === 0 && !s.analytePrecipitates);
  const direct = unaided.length > 0 ? unaided : all;
  // The usual dyes are those in use for many metals; the best stage of each stands for it.
  const usual = (dye: string): number => new Set(knowledge.indicators.get(dye)?.uses.flatMap((u) => u.ions)).size;
  const byDye = new Map<string, DevelopedStage>();
  for (const stage of [...direct].sort((a, b) => roughCost(task, a, knowledge) - roughCost(task, b, knowledge))) {
    const dye = stage.plan.indicator?.id ?? "";
    if (!byDye.has(dye)) byDye.set(dye, stage);
  }
  return [...byDye]
    .sort(([a], [b]) => usual(b) - usual(a) || a.localeCompare(b))
    .slice(0, SIMPLEST_SHOWN)
    .map(([, stage]) => stage);
}

function rejectedOf(task: Task, judged: readonly JudgedMethod[], knowledge: Knowledge): RejectedMethod[] {
  const ion = (id: ComponentId): string => shownIon(task, id, knowledge);
  return judged
    .filter((j) => j.excludedBy.length > 0)
    .slice(0, REJECTED_SHOWN)
    .map((j) => {
      const plan = j.method.stages[0]!.plan;
      return {
        mode: j.method.mode,
        titrant: plan.titrant.id,
        backTitrant: plan.backTitrant ? ion(plan.backTitrant.id) : null,
        indicator: plan.indicator?.id ?? null,
        pH: plan.pH,
        because: j.excludedBy.map(becauseOf),
      };
    });
}

/** What put the first before the second: requirement, points rule by rule, or the smaller uncertainty. */
function decidedBy(first: JudgedMethod | undefined, second: JudgedMethod | undefined): Recommendation["decidedBy"] {
  if (!first || !second) return null;
  const weights = (j: JudgedMethod): Map<string, { weight: number; statement: string }> => {
    const out = new Map<string, { weight: number; statement: string }>();
    for (const { finding } of j.verdicts) {
      if (finding.weight === 0) continue;
      const before = out.get(finding.rule);
      out.set(finding.rule, { weight: (before?.weight ?? 0) + finding.weight, statement: finding.statement });
    }
    return out;
  };
  const a = weights(first);
  const b = weights(second);
  const differences = [...new Set([...a.keys(), ...b.keys()])]
    .map((rule) => ({
      rule,
      first: a.get(rule)?.weight ?? 0,
      second: b.get(rule)?.weight ?? 0,
      statement: (a.get(rule) ?? b.get(rule))!.statement,
    }))
    .filter((d) => d.first !== d.second)
    .sort((x, y) => Math.abs(y.first - y.second) - Math.abs(x.first - x.second));
  const statement =
    first.meets !== second.meets
      ? "The first meets the requirement, the second does not."
      : first.points !== second.points
        ? `By the rules the first stands at ${signed(first.points)}, the second at ${signed(second.points)}.`
        : first.meets && first.reservations.length === 0 && second.reservations.length > 0
          ? "Equal in the rules; the first stands without reservations, the second does not."
          : first.expandedPercent.toPrecision(3) === second.expandedPercent.toPrecision(3)
            ? `Equal in the rules and in the uncertainty (${first.expandedPercent.toPrecision(3)} %): neither is better; the order is that of their names.`
            : `Equal in the rules; the first has the smaller expanded uncertainty (${first.expandedPercent.toPrecision(3)} % against ${second.expandedPercent.toPrecision(3)} %).`;
  return { statement, differences };
}

const signed = (points: number): string => (points > 0 ? `+${points}` : `${points}`);

const INSTRUMENT = { visual: "dye", photometric: "dye with calculable colour", electrode: "electrode" } as const;
const listed = (words: readonly string[]): string => words.join(" or ");

/** Why an answer has no method to show, as far as the search itself can say. */
function whyNothing(task: Task, tried: number, knowledge: Knowledge): string[] {
  const foreign = notByThisTechnique(task, knowledge);
  if (foreign.length > 0) return foreign;
  if (tried === 0 && !task.laboratory.detection.includes("visual"))
    return [
      `No ${listed(task.laboratory.detection.map((d) => INSTRUMENT[d]))} on record follows ${listed(task.analytes.map((a) => a.shown))} with what the laboratory has.`,
    ];
  return tried === 0
    ? ["No dye on record serves this ion with what the laboratory has, at a temperature it allows."]
    : ["Every method that was tried is excluded; the reasons stand with the rejected ones."];
}
