import type { Knowledge } from "../constants/knowledge.ts";
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

/** Reagents that a laboratory keeps only for one purpose (dimercaprol, uranyl acetate, TTHA, arsenazo, …). */
export function isSpecial(knowledge: Knowledge, id: string): boolean {
  return Boolean(
    knowledge.titrants.get(id)?.special ??
      knowledge.agents.get(id)?.special ??
      knowledge.indicators.get(id)?.special ??
      knowledge.buffers.get(id)?.special ??
      knowledge.metalTitrants.get(id)?.special,
  );
}
