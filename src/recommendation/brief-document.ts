import type { Knowledge } from "../constants/knowledge.ts";
import type { Task, TaskComponent } from "../methods/types.ts";
import type { Brief } from "./contract-brief.ts";

/** The task as a brief again: canonical spellings, every level in mol/L of what is shown, every default written out. */
export function briefOf(task: Task, knowledge: Knowledge): Brief {
  const level = (row: TaskComponent): { readonly value: number; readonly unit: "mol/L" } => ({
    value: row.molPerL / componentsPerFormula(row, knowledge),
    unit: "mol/L",
  });
  return {
    title: task.title,
    analytes: task.analytes.map((row) => ({ ion: row.shown, concentration: level(row), report: row.report })),
    matrix: task.matrix.map((row) => ({ component: row.shown, concentration: level(row) })),
    portion: task.portion,
    requirement: { relativeExpandedUncertaintyPercent: task.requirementPercent },
    laboratory: task.laboratory,
    temperatureC: task.temperatureC,
  };
}

/** A level of Cr2O7^2- counts formulas, each of which holds two of the component. */
function componentsPerFormula(row: TaskComponent, knowledge: Knowledge): number {
  const forms = knowledge.components.get(row.component)?.forms ?? [];
  return forms.find((form) => form.spelling === row.shown)?.componentsPerFormula ?? 1;
}
