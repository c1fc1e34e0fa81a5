import type { Knowledge } from "../constants/knowledge.ts";
import type { Detour, StagePlan } from "../methods/types.ts";
import { detourRecord } from "../methods/way-round.ts";
import type { StageDocument } from "./contract.ts";

/** "2 Ag+ for 1 EDTA": how many of the analyte one mole of titrant stands for, in whole numbers. */
export function stoichiometryOf(
  plan: Pick<StagePlan, "determines" | "titrant">,
  detour: Detour,
  ion: (id: string) => string,
): string {
  const { analytePerMetal } = detour;
  const [analytes, titrants] = analytePerMetal >= 1 ? [analytePerMetal, 1] : [1, Math.round(1 / analytePerMetal)];
  return `${analytes} ${plan.determines.map(ion).join("+")} for ${titrants} ${plan.titrant.id}`;
}

/** The way round as the document writes it: enough to carry it out, to compute it again, and to see on what it rests. */
export function detourDocument(
  detour: Detour,
  plan: StagePlan,
  ion: (id: string) => string,
  knowledge: Knowledge,
): NonNullable<StageDocument["vessel"]["detour"]> {
  const record = detourRecord(detour, knowledge);
  return {
    id: detour.id,
    metal: ion(detour.metal),
    analytePerMetal: detour.analytePerMetal,
    reagent: { ...detour.reagent },
    precipitant: detour.precipitant && { ...detour.precipitant },
    kind: record.kind,
    filtered: record.filtered,
    precipitationPH: record.precipitation?.pH ?? null,
    precipitationWords: record.precipitation?.words ?? null,
    stoichiometry: stoichiometryOf(plan, detour, ion),
    rests: record.rests,
    source: knowledge.sources.get(record.provenance.source)?.citation ?? record.provenance.source,
    basis: record.provenance.basis,
  };
}
