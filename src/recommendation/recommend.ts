import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { RuleRunner } from "../inference/index.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { roughCost, singleMethod, type EvaluatedMethod } from "../methods/methods.ts";
import { searchMethods } from "../methods/search.ts";
import { toleranceLimits } from "../methods/tolerance.ts";
import type { Task } from "../methods/types.ts";
import { centred, workingRange, type WorkingRange } from "../methods/working-range.ts";
import { briefOf } from "./brief-document.ts";
import type { Recommendation, RejectedMethod } from "./contract.ts";
import { becauseOf, constantsUsed, methodDocument } from "./document.ts";
import type { MethodUnderJudgement } from "./facts.ts";
import { findingsOf } from "./findings.ts";
import { judge, rank, type JudgedMethod } from "./judge.ts";
import { shownIon } from "./spelling.ts";

/** How many methods the rules look at; the rest are behind on numbers alone. */
const JUDGED = 24;
/** How many of those get a working range before they are judged. */
const RANGED = 10;
/** How many methods an answer shows. */
const SHOWN = 8;
const REJECTED_SHOWN = 16;
/** How many usual dyes the findings are judged with. */
const SIMPLEST_SHOWN = 3;

/**
 * Answers a task: searches methods, judges them by the rules, ranks them, and writes the recommendation document.
 * Deterministic: the same task, knowledge and rules give the same document.
 */
export async function recommend(task: Task, knowledge: Knowledge, rules: RuleRunner): Promise<Recommendation> {
  const search = searchMethods(task, knowledge);
  const chosen = shortlist(task, search.methods, knowledge);
  const under = chosen.map((method, i) =>
    i < RANGED ? ranged(task, method, knowledge) : { method, ranges: method.stages.map(() => null) },
  );
  const judged: JudgedMethod[] = [];
  for (const candidate of under) judged.push(await judge(task, candidate, knowledge, rules));
  judged.sort(rank);
  const feasible = distinct(judged.filter((j) => j.excludedBy.length === 0)).slice(0, SHOWN);
  const shown: JudgedMethod[] = [];
  for (const j of feasible)
    shown.push(
      j.ranges.every((r) => r === null) ? await judge(task, ranged(task, j.method, knowledge), knowledge, rules) : j,
    );
  shown.sort(rank);
  const methods = shown.map((j, i) =>
    methodDocument(task, j, i + 1, i === 0 ? toleranceLimits(task, j.method, knowledge) : [], knowledge),
  );
  const first = shown[0] ?? null;
  return {
    contract: 1,
    knowledge: { version: knowledge.version, hash: knowledge.hash },
    brief: briefOf(task, knowledge),
    verdict: methods[0]?.verdict ?? "not-fit",
    findings: findingsOf(task, first?.method ?? null, simplestOf(task, search.methods, knowledge), knowledge),
    methods,
    rejected: rejectedOf(task, judged, knowledge),
    decidedBy: decidedBy(shown[0], shown[1]),
    notes: [
      ...task.notes,
      ...(search.specialOpened ? ["Nothing from the usual shelf served; special reagents were considered too."] : []),
      ...(methods.length === 0 ? whyNothing(task, search.methods.length, knowledge) : []),
    ],
    constants: first ? constantsUsed(first.method.stages, knowledge) : [],
  };
}

/** The methods worth judging: the best by their numbers, and the best of every mode and dye, so that rivals are seen. */
function shortlist(task: Task, methods: readonly EvaluatedMethod[], knowledge: Knowledge): EvaluatedMethod[] {
  const cost = new Map(
    methods.map((m) => [
      m,
      m.stages.reduce((s, stage) => s + roughCost(task, stage, knowledge), 0) / m.stages.length +
        6 * (m.stages.length - 1),
    ]),
  );
  const sorted = [...methods].sort((a, b) => cost.get(a)! - cost.get(b)! || a.id.localeCompare(b.id));
  const perFamily = new Map<string, number>();
  const family = (m: EvaluatedMethod): string =>
    `${m.mode} ${m.stages.map((s) => s.plan.indicator?.id ?? s.plan.detection).join("+")}`;
  const diverse = sorted.filter((m) => {
    const n = perFamily.get(family(m)) ?? 0;
    perFamily.set(family(m), n + 1);
    return n < 2;
  });
  return diverse.slice(0, JUDGED);
}

/** Working ranges of every titration of a method, targets moved to the middle of theirs where they sat at an edge. */
function ranged(task: Task, method: EvaluatedMethod, knowledge: Knowledge): MethodUnderJudgement {
  const ranges: WorkingRange[] = [];
  const stages: DevelopedStage[] = [];
  for (const stage of method.stages) {
    const range = workingRange(task, stage, knowledge);
    const moved = method.stages.length === 1 ? centred(task, stage, range, knowledge) : stage;
    stages.push(moved);
    ranges.push(
      moved === stage ? range : { low: Math.min(range.low, moved.plan.pH), high: Math.max(range.high, moved.plan.pH) },
    );
  }
  const same = stages.every((s, i) => s === method.stages[i]);
  const moved = same ? method : stages.length === 1 ? singleMethod(task, stages[0]!, knowledge) : method;
  return { method: moved, ranges };
}

/** One method of a kind: the same mode, titrants, dyes and masks differ only in buffer or a shade of pH. */
function distinct(judged: readonly JudgedMethod[]): JudgedMethod[] {
  const seen = new Set<string>();
  return judged.filter(({ method }) => {
    const key = `${method.mode} ${method.stages
      .map(
        (s) =>
          `${s.plan.titrant.id} ${s.plan.backTitrant?.id ?? ""} ${s.plan.indicator?.id ?? s.plan.detection} ${s.plan.masking
            .map((m) => m.agent)
            .sort()
            .join()} ${s.plan.removed.join()}`,
      )
      .join("; ")}`;
    if (seen.has(key)) return false;
    seen.add(key);
    return true;
  });
}

/** The direct titrations of the analyte that an analyst would think of first: EDTA, published dye, nothing separated. */
function simplestOf(task: Task, methods: readonly EvaluatedMethod[], knowledge: Knowledge): DevelopedStage[] {
  const direct = methods
    .flatMap((m) => m.stages)
    .filter(
      (s) =>
        s.plan.mode === "direct" &&
        s.plan.titrant.id === "EDTA" &&
        s.skeleton.use === "published" &&
        s.plan.removed.length === 0,
    );
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
        : `Equal in the rules; the first has the smaller expanded uncertainty (${first.expandedPercent.toPrecision(2)} % against ${second.expandedPercent.toPrecision(2)} %).`;
  return { statement, differences };
}

const signed = (points: number): string => (points > 0 ? `+${points}` : `${points}`);

/** Why an answer has no method to show, as far as the search itself can say. */
function whyNothing(task: Task, tried: number, knowledge: Knowledge): string[] {
  const anions = task.analytes
    .filter((a) => knowledge.components.get(a.component)?.kind !== "metal")
    .map((a) => a.shown);
  if (anions.length > 0)
    return [
      `${anions.join(", ")}: the titrants bind metal ions only; ways round (a precipitate or complex in excess) are not calculated.`,
    ];
  if (!task.laboratory.detection.includes("visual"))
    return ["Only visual end points are calculated; the brief allows none."];
  return tried === 0
    ? ["No dye on record serves this ion with what the laboratory has, at a temperature it allows."]
    : ["Every method that was tried is excluded; the reasons stand with the rejected ones."];
}
