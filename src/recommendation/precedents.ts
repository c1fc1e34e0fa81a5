import type { ComponentId, Knowledge, PrecedentRecord, Provenance } from "../constants/knowledge.ts";
import type { EvaluatedMethod } from "../methods/methods.ts";
import type { StagePlan } from "../methods/types.ts";
import type { RecommendedMethod } from "./contract.ts";
import { listed, reagentWords } from "./text-words.ts";

/** Printed pH windows are round figures. */
const PH_SLACK = 0.3;

/** Published methods of the knowledge base that a titration follows: same ion, mode, titrants, pH window and dye. */
function matches(plan: StagePlan, mode: string, record: PrecedentRecord): boolean {
  const modes = [plan.mode, mode, ...(plan.chelate && record.mode === "displacement" ? ["displacement"] : [])];
  return (
    plan.determines.includes(record.ion) &&
    modes.includes(record.mode) &&
    plan.titrant.id === record.titrant &&
    (record.backTitrant === null ? record.mode !== "back" : plan.backTitrant?.id === record.backTitrant) &&
    plan.pH >= record.pH[0] - PH_SLACK &&
    plan.pH <= record.pH[1] + PH_SLACK &&
    (plan.indicator === null || record.indicators.includes(plan.indicator.id))
  );
}

/** The published methods behind each titration of a method. Looked up after the ranking: they steer nothing. */
export function precedentsOf(method: EvaluatedMethod, knowledge: Knowledge): RecommendedMethod["precedents"] {
  return method.stages.flatMap(({ plan }, stage) =>
    knowledge.precedents
      .filter((record) => matches(plan, method.mode, record))
      .map((record) => ({
        stage,
        statement: precedentWords(record),
        sources: [record.provenance, ...record.otherSources].map((p) => sourceWords(p, knowledge)),
        pHBasis: record.pHBasis,
      })),
  );
}

/** A published method in one line. */
export function precedentWords(record: PrecedentRecord): string {
  const dyes = record.indicators.length > 0 ? `, ${listed(record.indicators.map(reagentWords))}` : "";
  const back = record.backTitrant === null ? "" : `, back with ${record.backTitrant}`;
  const scope = record.scope === null ? "" : `: ${record.scope}`;
  return `${record.ion} ${record.mode} with ${record.titrant}${back}, pH ${record.pH[0]} to ${record.pH[1]}${dyes}${scope}`;
}

/** The place in a source, without the title and year that its citation says already. */
function placeWithin(where: string, citation: string): string {
  const [, named, rest] = /^(.{20,}?\b(?:19|20)\d\d)(?:, |$)(.*)$/.exec(where) ?? [];
  const year = named?.slice(-4);
  return rest !== undefined && year !== undefined && citation.includes(year) ? rest : where;
}

function sourceWords(provenance: Provenance, knowledge: Knowledge): { cite: string; basis: Provenance["basis"] } {
  const citation = knowledge.sources.get(provenance.source)?.citation ?? provenance.source;
  const where = placeWithin(provenance.where ?? "", citation);
  return {
    cite: where === "" ? citation : `${citation}, ${where}`,
    basis: provenance.basis,
  };
}

/**
 * Says that published methods of one ion differ, where methods shown here follow different ones: all of them stand, ranked.
 * Null where they agree, or fewer than two are on record.
 */
export function disagreementOf(methods: readonly EvaluatedMethod[], knowledge: Knowledge): string | null {
  const followed = new Map<PrecedentRecord, number[]>();
  const taken = new Set<ComponentId>();
  methods.forEach((method, i) => {
    if (method.stages.length !== 1) return;
    const { plan } = method.stages[0]!;
    for (const record of knowledge.precedents)
      if (matches(plan, method.mode, record)) {
        followed.set(record, [...(followed.get(record) ?? []), i + 1]);
        taken.add(record.ion);
      }
  });
  const records = [...followed.keys()];
  const apart = records.filter((a) => records.some((b) => a.ion === b.ion && differ(a, b)));
  if (apart.length < 2) return null;
  const words = apart.map((record) => {
    const ranks = followed.get(record)!;
    return `${record.mode}, pH ${record.pH[0]} to ${record.pH[1]}, ${listed(record.indicators.map(reagentWords))} (${sourceWords(record.provenance, knowledge).cite}; followed by ${listed(ranks.map((r) => `no. ${r}`))})`;
  });
  return `Published methods of ${listed([...taken])} differ: ${words.join("; ")}. All of them stand; the order given is that of the rules.`;
}

/** Two published ways differ when mode or back titrant do, or neither pH window nor dyes meet. */
const differ = (a: PrecedentRecord, b: PrecedentRecord): boolean =>
  a.mode !== b.mode ||
  a.backTitrant !== b.backTitrant ||
  a.pH[1] < b.pH[0] ||
  b.pH[1] < a.pH[0] ||
  !a.indicators.some((dye) => b.indicators.includes(dye));
