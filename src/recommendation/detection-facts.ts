import type { Knowledge } from "../constants/knowledge.ts";
import type { FactValue } from "../inference/types.ts";
import type { DevelopedStage } from "../methods/develop.ts";
import { JUMP_OVER_SCATTER } from "../methods/read-electrode.ts";

/** Stands for "no limit" in a ratio to a detection limit that does not apply. */
const FAR_ABOVE_ANY_LIMIT = 1e9;

/** Facts of how a titration is read when it is not read by eye. */
export function detectionFacts(
  stage: DevelopedStage,
  knowledge: Knowledge,
): Record<string, FactValue | null | undefined> {
  const { plan, evaluation, skeleton } = stage;
  const { electrode, photometric } = evaluation;
  const nm = photometric?.wavelengthNm ?? null;
  return {
    endPointFault: evaluation.why ?? "none",
    electrode: electrode?.id ?? "none",
    electrodeName: electrode?.name ?? "none",
    electrodeStatus: electrode ? "read" : "none",
    electrodeUse: electrode ? skeleton.use : "none",
    electrodeBasis: basisOf(electrode?.id, knowledge),
    electrodePoisons: electrode?.poisonedBy ?? [],
    electrodePoisonCount: electrode?.poisonedBy.length ?? 0,
    electrodeDisturbers: electrode?.disturbedBy ?? [],
    electrodeDisturberCount: electrode?.disturbedBy.length ?? 0,
    interferingIon: electrode?.interferingIon ?? "none",
    jumpMV: electrode?.jumpMV,
    leastJumpMV: electrode && JUMP_OVER_SCATTER * electrode.readingMV,
    slopeMVPerDecade: electrode?.slopeMVPerDecade,
    electrodePHMargin: electrode?.pHMargin,
    detectionLimitRatio: electrode && (electrode.detectionLimitRatio ?? FAR_ABOVE_ANY_LIMIT),
    detectionLimitMolPerL: electrode?.limitMolPerL,
    interferenceRatio: electrode?.interferenceRatio,
    chlorideRatio: electrode?.chlorideRatio,
    chelateMargin: electrode && chelateMargin(stage),
    chelateMolPerL: electrode && (plan.chelate?.molPerL ?? 0),
    photometerStatus: photometric ? "read" : "none",
    wavelengths: nm ? `${nm[0]} to ${nm[1]} nm` : "none",
    turbidMolPerL: photometric?.turbidMolPerL,
    photometricBandPM: photometric ? evaluation.bandPM : null,
  };
}

/** A chelate lends its metal only while it is the stronger of the two. */
function chelateMargin({ plan, evaluation }: DevelopedStage): number {
  const lent = plan.chelate ? evaluation.log10ConditionalK.get(plan.chelate.metal) : undefined;
  const own = plan.determines.map((ion) => evaluation.log10ConditionalK.get(ion)).filter((k) => k !== undefined);
  return lent === undefined || own.length === 0 ? 0 : lent - Math.max(...own);
}

function basisOf(id: string | undefined, knowledge: Knowledge): "read" | "memory" | "none" {
  const record = knowledge.electrodes.find((e) => e.id === id);
  if (!record) return "none";
  const recalled = [record.slopeProvenance, record.limitProvenance, record.bufferedLimit?.provenance].some(
    (p) => p?.basis === "memory",
  );
  return recalled ? "memory" : "read";
}
