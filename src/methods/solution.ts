import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { StagePlan, Task, TaskComponent } from "./types.ts";
import { detourRecord, wayRound, type WayRound } from "./way-round.ts";

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
  readonly way: WayRound | null;
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
  const way = wayOf(task, plan, knowledge, held);
  for (const { component, inVesselMolPerL } of way ? afterWay(way) : vesselSample(task, plan)) {
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
  // What a demasking agent has used up is no ligand any more.
  if (plan.demasked) amounts.delete(plan.demasked.agent);
  for (const [id, molPerL] of amounts) {
    const component = knowledge.agents.get(id)?.component;
    if (component) add(totals, component, molPerL);
  }
  for (const [component, molPerL] of way?.reagent ?? []) add(totals, component, molPerL);
  // What the way round adds stands in it already.
  for (const reagent of way ? [] : plan.added)
    if (knowledge.components.has(reagent.id)) add(totals, reagent.id, reagent.molPerL);
  if (plan.chelate) {
    add(totals, plan.chelate.metal, plan.chelate.molPerL);
    add(totals, plan.chelate.ligand, plan.chelate.molPerL);
  }
  return { volumeL: vesselML(task, plan) / 1000, totals, fromSample, held, converted, way };
}

const afterWay = (way: WayRound): { readonly component: ComponentId; readonly inVesselMolPerL: number }[] =>
  [...way.sample].map(([component, inVesselMolPerL]) => ({ component, inVesselMolPerL }));

/** What is to be filtered precipitates from the portion and about as much of the reagents, before it is made up (common practice). */
const PRECIPITATED_IN_PORTIONS = 2;

const precipitationRatio = (task: Task, plan: StagePlan, knowledge: Knowledge): number =>
  plan.detour && detourRecord(plan.detour, knowledge).filtered
    ? Math.min(1, (PRECIPITATED_IN_PORTIONS * task.portion.volumeML) / vesselML(task, plan))
    : 1;

/** The way round of a plan, and into `held` what it keeps from the titration: separated, filtered away, or left as a deposit. */
function wayOf(task: Task, plan: StagePlan, knowledge: Knowledge, held: HeldAmount[]): WayRound | null {
  if (!plan.detour) return null;
  const sample = new Map<ComponentId, number>();
  for (const { component, inVesselMolPerL } of vesselSample(task, plan)) {
    const drivenOff = component === "carbonate" && plan.preparation.includes("remove-carbonate");
    if (!plan.removed.includes(component) && !drivenOff) sample.set(component, inVesselMolPerL);
    else
      held.push({
        component,
        molPerL: inVesselMolPerL,
        why: "separated",
        by: drivenOff ? "remove-carbonate" : "separate",
      });
  }
  const way = wayRound(
    plan.detour,
    sample,
    { temperatureC: task.temperatureC, volumeRatio: precipitationRatio(task, plan, knowledge) },
    knowledge,
  );
  for (const { solid, components, molPerL } of way.left)
    for (const [component, n] of Object.entries(components))
      if (n > 0) held.push({ component, molPerL: n * molPerL, why: "precipitated", by: solid });
  for (const [component, molPerL] of way.filteredAway)
    held.push({ component, molPerL, why: "separated", by: "precipitate-and-filter" });
  return way;
}

/** The ion that an agent makes of another by complete reduction or oxidation; null when the product takes no part. */
export function conversionProduct(knowledge: Knowledge, agent: string, from: ComponentId): ComponentId | null {
  return knowledge.agents.get(agent)?.converts.find((c) => c.from === from)?.to ?? null;
}
