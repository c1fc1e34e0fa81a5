import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import type { Task } from "../methods/types.ts";

/** The spelling of a component in an answer: as the brief wrote it where the brief names it, else canonical. */
export function shownIon(task: Task, component: ComponentId, knowledge: Knowledge): string {
  const row = [...task.analytes, ...task.matrix].find((c) => c.component === component);
  return row?.shown ?? knowledge.components.get(component)?.ion ?? component;
}
