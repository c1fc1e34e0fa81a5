import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import type { MaskingStep } from "./types.ts";

/** What one masking agent does in the vessel at the end point, by the equilibrium; null where the model has no constants for it. */
export interface MaskAccount {
  readonly agent: string;
  /** Per masked ion: log10 of (1 + bound to the agent over free), and the share of the ion that the titrant holds all the same. */
  readonly masked: readonly {
    readonly ion: ComponentId;
    readonly log10Alpha: number | null;
    readonly titratedFraction: number | null;
  }[];
  /** log10 alpha of the metal determined towards the agent: what the mask takes from the analyte. */
  readonly onAnalyteLog10Alpha: number | null;
  /** Share of the agent that metals hold, dimensionless. */
  readonly usedFraction: number | null;
}

const finiteOrNull = (value: number): number | null => (Number.isFinite(value) ? value : null);

/** Reads the account of every masking step of a titration from its solved vessel. */
export function maskAccounts(
  evaluation: StageEvaluation,
  steps: readonly MaskingStep[],
  knowledge: Knowledge,
): MaskAccount[] {
  const { model } = evaluation;
  const state = model.at(evaluation.endPointML / 1000);
  return steps.map((step) => {
    const ligand = knowledge.agents.get(step.agent)?.component ?? null;
    const column = ligand === null ? undefined : model.system.index.get(ligand);
    const known = state.ok && ligand !== null && column !== undefined && step.basis === "equilibrium";
    const held = (ion: ComponentId): number =>
      model.system.species.reduce((sum, species, row) => {
        const n = species.components[ion] ?? 0;
        return n > 0 && (species.components[ligand ?? ""] ?? 0) > 0 ? sum + n * state.result.species(row) : sum;
      }, 0);
    const log10Alpha = (ion: ComponentId): number | null =>
      known ? finiteOrNull(Math.log10(1 + held(ion) / state.free(ion))) : null;
    const analyte = evaluation.model.plan.determines[0];
    return {
      agent: step.agent,
      masked: step.masks.map((ion) => ({
        ion,
        log10Alpha: step.via === "complexation" ? log10Alpha(ion) : null,
        titratedFraction: finiteOrNull(evaluation.titrated.get(ion) ?? Number.NaN),
      })),
      onAnalyteLog10Alpha: analyte === undefined ? null : log10Alpha(analyte),
      usedFraction: known ? usedOf(evaluation, ligand) : null,
    };
  });
}

/** Share of a ligand of the vessel that stands in species with a metal, at the end point. */
function usedOf(evaluation: StageEvaluation, ligand: ComponentId): number | null {
  const { model } = evaluation;
  const state = model.at(evaluation.endPointML / 1000);
  const total = state.total(ligand);
  if (!(total > 0)) return null;
  const metals = new Set(model.metals);
  const held = model.system.species.reduce((sum, species, row) => {
    const n = species.components[ligand] ?? 0;
    return n > 0 && Object.keys(species.components).some((c) => metals.has(c))
      ? sum + n * state.result.species(row)
      : sum;
  }, 0);
  return finiteOrNull(held / total);
}
