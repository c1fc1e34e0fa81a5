import type { DetourReagent, Knowledge } from "../constants/knowledge.ts";
import type { Task } from "./types.ts";

/** Whether a reagent may be proposed for this laboratory. */
export type Shelf = (id: string) => boolean;

/** Everything usual that the brief does not forbid, or only what it lists; `withSpecial` opens the special reagents too. */
export function shelfOf(task: Task, knowledge: Knowledge, withSpecial: boolean): Shelf {
  const avoid = new Set(task.laboratory.avoid);
  const available = task.laboratory.available === null ? null : new Set(task.laboratory.available);
  return (id) => {
    if (avoid.has(id)) return false;
    if (available) return available.has(id);
    return withSpecial || !isSpecial(knowledge, id);
  };
}

/** A step of preparation that needs a bottle of its own: the chelate it adds, or alcohol, must be on the shelf like any other. */
export function stepAllowed(task: Task, step: string): boolean {
  const { avoid, available } = task.laboratory;
  const ids = bottlesOf(step);
  if (ids === null) return true;
  if (ids.bars.some((id) => avoid.includes(id))) return false;
  return available === null || ids.serves.some((all) => all.every((id) => available.includes(id)));
}

/** What bars a step when it is avoided, and which sets of bottles serve it; null for a step that needs none. */
function bottlesOf(
  step: string,
): { readonly bars: readonly string[]; readonly serves: readonly (readonly string[])[] } | null {
  if (step === "alcohol") return { bars: ["alcohol", "ethanol"], serves: [["alcohol"], ["ethanol"]] };
  const chelate = /^add-((\w+)-(\w+))$/.exec(step);
  if (!chelate) return null;
  const [, id, metal, ligand] = chelate as unknown as [string, string, string, string];
  const ion = `${metal}2+`;
  // Cu-PAN is bought as PAN with its copper chelate.
  return { bars: [id, ion], serves: [[id], [ion, ligand], ...(id === "Cu-EDTA" ? [["Cu-PAN"]] : [])] };
}

/** Whether the bottle of a way round may be taken: under any of its names, and not barred with what is avoided. */
export function bottleOnShelf(task: Task, bottle: DetourReagent, shelf: Shelf): boolean {
  const names = [bottle.id, ...bottle.alsoCalled];
  const { avoid, available } = task.laboratory;
  if ([...names, ...bottle.barredWith].some((id) => avoid.includes(id))) return false;
  return available === null ? shelf(bottle.id) : names.some((id) => available.includes(id));
}

/** Reagents that a laboratory keeps only for one purpose (dimercaprol, uranyl acetate, TTHA, arsenazo, …). */
export function isSpecial(knowledge: Knowledge, id: string): boolean {
  return (
    knowledge.titrants.get(id)?.special ??
    knowledge.agents.get(id)?.special ??
    knowledge.indicators.get(id)?.special ??
    knowledge.buffers.get(id)?.special ??
    knowledge.metalTitrants.get(id)?.special ??
    [...knowledge.detours.values()].some((d) => d.reagent.id === id && d.reagent.special)
  );
}
