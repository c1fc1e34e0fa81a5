import type { Knowledge } from "../constants/knowledge.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { maskAccounts } from "../methods/mask-account.ts";
import { rowsFor } from "../methods/masks.ts";
import type { StageDocument } from "./contract.ts";

const rounded = (value: number | null, digits: number): number | null =>
  value === null ? null : Number(value.toPrecision(digits));

/** The masking steps of a titration with what each does by the equilibrium and what practice says of it. */
export function maskingDocument(
  stage: DevelopedStage,
  knowledge: Knowledge,
  ion: (id: string) => string,
): StageDocument["masking"] {
  const { plan, evaluation } = stage;
  const accounts = maskAccounts(evaluation, plan.masking, knowledge);
  return plan.masking.map((step, i) => ({
    agent: step.agent,
    masks: step.masks.map(ion),
    via: step.via,
    molPerL: step.molPerL,
    basis: step.basis,
    chemistry: {
      masked: accounts[i]!.masked.map((m) => ({
        ion: ion(m.ion),
        log10Alpha: rounded(m.log10Alpha, 3),
        titratedFraction: rounded(m.titratedFraction, 3),
      })),
      onAnalyteLog10Alpha: rounded(accounts[i]!.onAnalyteLog10Alpha, 3),
      usedFraction: rounded(accounts[i]!.usedFraction, 3),
    },
    practice: step.masks.flatMap((id) => practiceOf(step.agent, id, plan.pH, knowledge, ion)),
  }));
}

function practiceOf(
  agent: string,
  id: string,
  pH: number,
  knowledge: Knowledge,
  ion: (id: string) => string,
): StageDocument["masking"][number]["practice"] {
  const record = rowsFor(knowledge, agent, id, pH).find((r) => r.effect === "masks" || r.effect === "partial");
  if (!record) return [];
  return [
    {
      ion: ion(id),
      order: record.order,
      failsWhen: record.failsWhen,
      sideEffects: record.sideEffects,
      freedBy: [...record.releasedBy],
      upToMolPerL: record.upToMolPerL,
      source: knowledge.sources.get(record.provenance.source)?.citation ?? record.provenance.source,
      basis: record.provenance.basis,
    },
  ];
}
