import { prepareSystem } from "../chemistry/prepare-system.ts";
import { solveEquilibrium } from "../chemistry/solve-equilibrium.ts";
import type { ComponentId, Knowledge, SolidDefinition, SolidPace } from "../constants/knowledge.ts";
import { stageSolution } from "./solution.ts";
import type { StagePlan, Task } from "./types.ts";

/** A solid that the solution would deposit at the pH of the titration before the titrant is in. */
export interface Supersaturation {
  readonly solid: string;
  readonly pace: SolidPace;
  readonly saturationIndex: number;
  readonly components: readonly ComponentId[];
}

/**
 * Whether a solid is the hydroxide of metals that an earlier titration of the same solution has bound: a chelate does not turn
 * into hydroxide in the time of the next titration, whatever the equilibrium would have of it.
 */
export function staysBound(solid: Pick<SolidDefinition, "components">, plan: StagePlan): boolean {
  const carried = plan.carried?.metals ?? [];
  if (carried.length === 0 || (solid.components["H+"] ?? 0) >= 0) return false;
  return Object.keys(solid.components).every((c) => c === "H+" || carried.includes(c));
}

/** Saturation of every solid of the vessel before titration, nothing allowed to form; those above saturation, worst first. */
export function supersaturations(
  task: Task,
  plan: StagePlan,
  knowledge: Knowledge,
  ionicStrengthMolPerL: number,
): Supersaturation[] {
  const totals = new Map(stageSolution(task, plan, knowledge).totals);
  // Titrant that goes in before the pH is raised keeps dissolved what it binds.
  const inVessel = plan.excessTitrantMolPerL + (plan.carried?.titrantMolPerL ?? 0);
  if (inVessel > 0) totals.set(plan.titrant.id, (totals.get(plan.titrant.id) ?? 0) + inVessel);
  const components = [...totals.keys()].filter((c) => {
    const kind = knowledge.components.get(c)?.kind;
    return kind === "metal" || kind === "ligand" || kind === "dye";
  });
  const system = prepareSystem(knowledge, components, { ionicStrengthMolPerL, temperatureC: task.temperatureC });
  if (system.solids.length === 0) return [];
  const t = Float64Array.from(system.components, (c) => totals.get(c) ?? 0);
  const fixedLnFree = new Float64Array(t.length).fill(Number.NaN);
  fixedLnFree[0] = Math.LN10 * (-plan.pH - system.log10GammaH);
  const result = solveEquilibrium(system.problem, t, { fixedLnFree, solids: "saturation-only" });
  if (result.status !== "converged") return [];
  const paces = new Map(knowledge.solids.map((s) => [s.id, s.pace]));
  return system.solids
    .map((solid, i) => ({
      solid: solid.id,
      pace: paces.get(solid.id) ?? "no",
      saturationIndex: result.saturationIndex[i]!,
      components: Object.keys(solid.components).filter((c) => c !== "H+"),
    }))
    .filter((s, i) => s.saturationIndex > 0 && !staysBound(system.solids[i]!, plan))
    .sort((a, b) => b.saturationIndex - a.saturationIndex);
}
