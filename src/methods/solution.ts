import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StagePlan, Task, TaskComponent } from "./types.ts";

/** An amount of a component that does not take part in the titration's equilibrium, and why. */
export interface HeldAmount {
  readonly component: ComponentId;
  readonly molPerL: number;
  readonly why: "separated" | "masked-empirically" | "converted" | "precipitated" | "kinetically-inert";
  readonly by: string;
}

/** The solution in the vessel before the first drop from the burette; mol/L at the titration volume. */
export interface StageSolution {
  readonly volumeL: number;
  readonly totals: ReadonlyMap<ComponentId, number>;
  /** Of the totals, what came with the sample, after conversions (the analyte's own form among them). */
  readonly fromSample: ReadonlyMap<ComponentId, number>;
  readonly held: readonly HeldAmount[];
  /** Sample components that were converted into another: Fe3+ to Fe2+. */
  readonly converted: readonly { readonly from: ComponentId; readonly to: ComponentId | null; readonly by: string }[];
}

/** Dye component behind an indicator id: Cu-PAN is the dye PAN beside a little Cu-EDTA. */
export const dyeComponentOf = (indicator: string): ComponentId => (indicator === "Cu-PAN" ? "PAN" : indicator);

/** Volume in the vessel before this titration, mL: the titration volume and what earlier titrations of it brought. */
const vesselML = (task: Task, plan: Pick<StagePlan, "carried"> | null): number =>
  task.portion.titrationVolumeML + (plan?.carried?.addedML ?? 0);

/** How much of each sample component stands in the vessel, mol/L at the titration volume. */
export function vesselSample(
  task: Task,
  plan: Pick<StagePlan, "carried"> | null = null,
): (TaskComponent & { readonly inVesselMolPerL: number })[] {
  const dilution = task.portion.volumeML / vesselML(task, plan);
  return [...task.analytes, ...task.matrix].map((c) => ({ ...c, inVesselMolPerL: c.molPerL * dilution }));
}

/**
 * Puts together what is in the vessel: the diluted sample after separation and conversion, and what the method adds.
 * Amounts in mol/L at the titration volume; the titrant from the burette and an excess put in first are not included.
 */
export function stageSolution(task: Task, plan: StagePlan, knowledge: Knowledge): StageSolution {
  const held: HeldAmount[] = [];
  const converted: { from: ComponentId; to: ComponentId | null; by: string }[] = [];
  const fromSample = new Map<ComponentId, number>();
  const add = (map: Map<ComponentId, number>, id: ComponentId, molPerL: number): void => {
    if (molPerL > 0) map.set(id, (map.get(id) ?? 0) + molPerL);
  };
  for (const { component, inVesselMolPerL } of vesselSample(task, plan)) {
    if (plan.removed.includes(component)) {
      held.push({ component, molPerL: inVesselMolPerL, why: "separated", by: "separate" });
      continue;
    }
    const mask = plan.masking.find((m) => m.masks.includes(component) && m.basis !== "equilibrium");
    if (mask?.basis === "conversion") {
      const to = conversionProduct(knowledge, mask.agent, component);
      converted.push({ from: component, to, by: mask.agent });
      if (to !== null) add(fromSample, to, inVesselMolPerL);
      else held.push({ component, molPerL: inVesselMolPerL, why: "converted", by: mask.agent });
    } else if (mask) held.push({ component, molPerL: inVesselMolPerL, why: "masked-empirically", by: mask.agent });
    else add(fromSample, component, inVesselMolPerL);
  }
  const totals = new Map(fromSample);
  const buffer = knowledge.buffers.get(plan.buffer.id);
  if (buffer?.component) add(totals, buffer.component, plan.buffer.molPerL);
  // One bottle of an agent serves all it masks: several steps with it are one amount.
  const amounts = new Map<string, number>();
  for (const { agent, molPerL } of plan.masking) amounts.set(agent, Math.max(amounts.get(agent) ?? 0, molPerL));
  for (const { id, molPerL } of plan.auxiliary) amounts.set(id, Math.max(amounts.get(id) ?? 0, molPerL));
  for (const [id, molPerL] of amounts) {
    const component = knowledge.agents.get(id)?.component;
    if (component) add(totals, component, molPerL);
  }
  for (const reagent of plan.added) if (knowledge.components.has(reagent.id)) add(totals, reagent.id, reagent.molPerL);
  if (plan.chelate) {
    add(totals, plan.chelate.metal, plan.chelate.molPerL);
    add(totals, plan.chelate.ligand, plan.chelate.molPerL);
  }
  return { volumeL: vesselML(task, plan) / 1000, totals, fromSample, held, converted };
}

/** The ion that an agent makes of another by complete reduction or oxidation; null when the product takes no part. */
export function conversionProduct(knowledge: Knowledge, agent: string, from: ComponentId): ComponentId | null {
  return knowledge.agents.get(agent)?.converts.find((c) => c.from === from)?.to ?? null;
}
