import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { RuleRunner } from "../inference/index.ts";
import { everyWay } from "../methods/every-way.ts";
import { roughCost, seenWith, type EvaluatedMethod } from "../methods/methods.ts";
import type { Task } from "../methods/types.ts";
import { readBrief } from "./brief.ts";
import { readReagents } from "./brief-reagents.ts";
import {
  briefSchema,
  SINGLE_MODES,
  type Brief,
  type IonMap,
  type MappedMethod,
  type MappedMode,
  type SingleMode,
} from "./contract.ts";
import { methodDocument } from "./document.ts";
import { judge, rank, type JudgedMethod } from "./judge.ts";
import { reasonsAgainst } from "./method-map-reasons.ts";
import { neededLog10K } from "./needed-constant.ts";
import { ranged } from "./ranking.ts";

/** Level of the ion in the neutral question, mmol/L: a titre of 20 mL from a 25 mL portion. */
export const MAP_LEVEL_MMOL_PER_L = 8;
export const MAP_PORTION = { volumeML: 25, titrationVolumeML: 100 } as const;
export const MAP_REQUIREMENT_PERCENT = 1;

/** How many titrations of one mode with one titrant go before the rules: as many with EDTA as an answer shows. */
const JUDGED_USUAL = 8;
const JUDGED_OTHER = 3;
/** … and how many of these that are seen alike. */
const JUDGED_ALIKE = 2;

/** Modes of the contract that combine titrations of several analytes: why the map of single ions has no column for them. */
export const SEVERAL_ANALYTES: Readonly<Record<string, string>> = {
  successive: "several analytes titrated one after the other in one portion",
  difference: "several analytes, one of them by subtraction",
  portions: "several analytes, each in a portion of its own",
};

/** The metal ions the map speaks of: every metal component of the knowledge base, in its order. */
export function mapIons(knowledge: Knowledge): readonly ComponentId[] {
  return [...knowledge.components.values()].filter((c) => c.kind === "metal").map((c) => c.id);
}

/** The invented question each ion of the map is put to: the ion alone, its counter-ion inert, everything allowed. */
export function mapBrief(ion: ComponentId, knowledge: Knowledge): Brief {
  const spelling = knowledge.components.get(ion)?.ion ?? ion;
  return briefSchema.parse({
    title: `${spelling} alone (method map, invented)`,
    analytes: [{ ion: spelling, concentration: { value: MAP_LEVEL_MMOL_PER_L, unit: "mmol/L" } }],
    portion: MAP_PORTION,
    requirement: { relativeExpandedUncertaintyPercent: MAP_REQUIREMENT_PERCENT },
    laboratory: { detection: ["visual", "photometric", "electrode"], heating: true },
  });
}

/**
 * What is open for one ion, by the search and the rules that answer briefs: the best method of each mode and titrant, or why
 * there is none. Deterministic. Throws InputError where `ion` is no ion the program knows.
 */
export async function mapIon(ion: ComponentId, knowledge: Knowledge, rules: RuleRunner): Promise<IonMap> {
  const brief = mapBrief(ion, knowledge);
  const task = readBrief(brief, knowledge);
  const analyte = task.analytes[0]!.component;
  const { methods } = everyWay(task, knowledge);
  const modes: MappedMode[] = [];
  for (const mode of SINGLE_MODES) {
    const found = methods.filter((m) => m.mode === mode);
    const judged: JudgedMethod[] = [];
    for (const method of worthJudging(task, found, knowledge))
      judged.push(await judge(task, ranged(task, method, knowledge), knowledge, rules));
    judged.sort(rank);
    modes.push(mappedMode(task, brief, mode, found, judged, knowledge));
  }
  const statuses = modes.map((m) => m.status);
  return {
    ion: knowledge.components.get(analyte)?.ion ?? analyte,
    name: knowledge.components.get(analyte)?.name ?? analyte,
    status:
      (["open", "open-with-reservations", "unknown"] as const).find((status) => statuses.includes(status)) ?? "closed",
    modes,
    log10K: strongest(task, methods),
    brief,
  };
}

/** The most promising titrations by their numbers, titrant by titrant. */
function worthJudging(task: Task, methods: readonly EvaluatedMethod[], knowledge: Knowledge): EvaluatedMethod[] {
  const cost = new Map(
    methods.map((m) => [m, m.stages.reduce((s, stage) => s + roughCost(task, stage, knowledge), 0)]),
  );
  const taken = new Map<string, number>();
  const count = (key: string): number => {
    taken.set(key, (taken.get(key) ?? 0) + 1);
    return taken.get(key)!;
  };
  return [...methods]
    .sort((a, b) => cost.get(a)! - cost.get(b)! || a.id.localeCompare(b.id))
    .filter((m) => {
      const { plan } = m.stages[0]!;
      if (count(`${plan.titrant.id} ${seenWith(plan)}`) > JUDGED_ALIKE) return false;
      return count(plan.titrant.id) <= (plan.titrant.id === "EDTA" ? JUDGED_USUAL : JUDGED_OTHER);
    });
}

function mappedMode(
  task: Task,
  brief: Brief,
  mode: SingleMode,
  found: readonly EvaluatedMethod[],
  judged: readonly JudgedMethod[],
  knowledge: Knowledge,
): MappedMode {
  // A method that stands without conditions goes before one that stands with them: the map says whether the way is open.
  const open = judged
    .filter((j) => j.excludedBy.length === 0 && j.meets)
    .sort((a, b) => Number(a.reservations.length > 0) - Number(b.reservations.length > 0) || rank(a, b));
  const perTitrant = new Map<string, JudgedMethod>();
  for (const j of open) {
    const { id } = j.method.stages[0]!.plan.titrant;
    if (!perTitrant.has(id)) perTitrant.set(id, j);
  }
  const methods = [...perTitrant.values()].map((j) => mappedMethod(task, brief, j, knowledge));
  const counts = { tried: found.length, judged: judged.length };
  const best = methods[0];
  if (best)
    return {
      mode,
      ...counts,
      status: best.verdict === "fit" ? "open" : "open-with-reservations",
      methods,
      nearest: null,
      reasons: [],
    };
  return { mode, ...counts, methods: [], ...reasonsAgainst(task, mode, found, judged, knowledge) };
}

function mappedMethod(task: Task, brief: Brief, judged: JudgedMethod, knowledge: Knowledge): MappedMethod {
  const document = methodDocument(task, judged, 1, [], knowledge);
  const stage = judged.method.stages.at(-1)!;
  const { plan, evaluation } = stage;
  const k = evaluation.log10ConditionalK.get(plan.determines[0] ?? "");
  return {
    id: document.id,
    summary: document.summary,
    verdict: document.verdict,
    titrant: document.titrant,
    backTitrant: document.backTitrant,
    through: plan.detour?.metal ?? null,
    pH: plan.pH,
    buffer: { ...plan.buffer },
    detection: plan.detection,
    indicator: plan.indicator?.id ?? null,
    electrode: plan.electrode,
    preparation: document.stages.flatMap((s) => s.preparation),
    log10ConditionalK: k === undefined ? null : Number(k.toPrecision(4)),
    biasPercent: document.predicted.biasPercent,
    relativeExpandedUncertaintyPercent: document.predicted.relativeExpandedUncertaintyPercent,
    reservations: document.reservations,
    cautions: document.cautions,
    brief: withOwnBottles(brief, judged, knowledge),
  };
}

/** Chelates are bought or mixed; alcohol is a bottle too. */
const STEP_BOTTLES: Readonly<Record<string, string>> = { alcohol: "alcohol" };
/** What sets the pH of the portion stands on every bench. */
const ACID_AND_ALKALI = ["nitric-acid", "sodium-hydroxide"] as const;

/** The same question asked of a shelf that holds only what the method uses, so that the full answer is about this method. */
function withOwnBottles(brief: Brief, judged: JudgedMethod, knowledge: Knowledge): Brief {
  const ids = judged.method.stages.flatMap(({ plan }) => [
    plan.titrant.id,
    ...(plan.backTitrant ? [plan.backTitrant.id] : []),
    ...(plan.indicator ? [plan.indicator.id] : []),
    ...(plan.detour ? [plan.detour.reagent.id] : []),
    ...(plan.release ? [plan.release.agent] : []),
    plan.buffer.id,
    ...[...plan.auxiliary, ...plan.added].map((a) => a.id),
    ...plan.masking.map((m) => m.agent),
    ...plan.preparation.flatMap((p) => STEP_BOTTLES[p] ?? (p.startsWith("add-") ? [p.slice("add-".length)] : [])),
  ]);
  const detection = [...new Set(judged.method.stages.map((s) => s.plan.detection))];
  return {
    ...brief,
    laboratory: {
      ...brief.laboratory,
      detection,
      // Only what a brief can name: a trace that gives an electrode its couple is no bottle of the shelf.
      available: [...readReagents([...ids, ...ACID_AND_ALKALI], [], knowledge).ids],
    },
  };
}

/** The largest conditional constant met with each titrant, and what the requirement asks for. */
function strongest(task: Task, methods: readonly EvaluatedMethod[]): IonMap["log10K"] {
  const best = new Map<string, { titrant: string; best: number; pH: number; needed: number }>();
  for (const { plan, evaluation } of methods.flatMap((m) => m.stages)) {
    const k = evaluation.log10ConditionalK.get(plan.determines[0] ?? "");
    if (k === undefined || plan.detour) continue;
    const before = best.get(plan.titrant.id);
    if (!before || k > before.best)
      best.set(plan.titrant.id, {
        titrant: plan.titrant.id,
        best: Number(k.toPrecision(4)),
        pH: plan.pH,
        needed: Number(neededLog10K(task).toPrecision(3)),
      });
  }
  return [...best.values()].sort((a, b) => b.best - a.best);
}
