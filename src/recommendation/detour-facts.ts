import type { FactValue } from "../inference/types.ts";
import { ALSO_PRECIPITATED, LEFT_BEHIND } from "../methods/detour-account.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { vesselSample } from "../methods/solution.ts";
import type { Task } from "../methods/types.ts";
import { companyOf } from "../methods/way-round.ts";

/** Facts of the way round by which a titration determines its analyte; "none" and 0 where the titrant binds the analyte itself. */
export function detourFacts(task: Task, stage: DevelopedStage): Record<string, FactValue | null> {
  const { plan, evaluation } = stage;
  const { way } = evaluation.model.solution;
  const { detour } = plan;
  if (!way || !detour)
    return {
      detourKind: "none",
      detourMetal: "none",
      detourPrecipitant: "none",
      detourRests: "none",
      detourFilters: false,
      detourBesideCarbonate: false,
      detourCompany: [],
    };
  const ok = evaluation.status !== "failed";
  const line = (source: string): number => evaluation.ledger.find((l) => l.source === source)?.fraction ?? 0;
  const company = evaluation.ledger.filter((l) => l.source.startsWith(ALSO_PRECIPITATED));
  const deposits = companyOf(way).map(({ deposit }) => deposit);
  const taken = detour.reagent.molPerL - way.expectedMolPerL;
  return {
    detourKind: way.record.kind,
    detourMetal: detour.metal,
    detourPrecipitant: detour.precipitant?.id ?? (way.record.precipitation ? detour.reagent.id : "none"),
    detourRests: way.record.rests,
    detourFilters: way.record.filtered,
    detourBesideCarbonate: besideCarbonate(task, stage),
    detourCompany: task.matrix.map((c) => c.component).filter((c) => deposits.some((d) => (d.components[c] ?? 0) > 0)),
    detourLossPercent: ok ? -100 * line(LEFT_BEHIND) : null,
    detourCompanyPercent: ok ? 100 * company.reduce((sum, l) => sum + l.fraction, 0) : null,
    detourCountedPercent: ok ? 100 * [...evaluation.biasOf.values()].reduce((sum, b) => sum + Math.abs(b), 0) : null,
    detourSurplusRatio: ok && way.record.kind === "surplus" && taken > 0 ? way.expectedMolPerL / taken : null,
  };
}

/** Carbonate of the sample, not driven off, beside a metal whose carbonate is hardly soluble, where carbonate is not the analyte. */
function besideCarbonate(task: Task, { plan, evaluation }: DevelopedStage): boolean {
  const way = evaluation.model.solution.way!;
  return (
    way.record.analyte !== "carbonate" &&
    way.record.kind === "surplus" &&
    !plan.preparation.includes("remove-carbonate") &&
    vesselSample(task, plan).some((c) => c.component === "carbonate" && c.inVesselMolPerL > 0)
  );
}
