import type { Knowledge } from "../constants/knowledge.ts";
import type { Task } from "../methods/types.ts";
import { reagentIds } from "./brief-reagents.ts";
import { BRIEF_LIMITS } from "./contract-brief.ts";
import type { CHANGES } from "./contract-turning-points.ts";
import type { Variable } from "./seek-turning.ts";

/** A number of a brief that can be changed by itself. */
export interface NumberChange {
  readonly what: Exclude<(typeof CHANGES)[number], "forbid" | "allow">;
  readonly subject: string;
  readonly unit: "mol/L" | "%";
  readonly variable: Variable;
  readonly at: (value: number) => Task;
}

/** A reagent that can be forbidden or allowed. */
export interface ReagentChange {
  readonly what: "forbid" | "allow";
  readonly subject: string;
  readonly task: Task;
}

/** Beyond this a level is no longer one of a solution to be titrated. */
const HIGHEST_MOL_PER_L = 2;
const LOWEST_MOL_PER_L = 1e-9;

/** Every number of a brief whose change is looked at: the level of each analyte and of each component of the matrix, and the requirement. */
export function numberChanges(task: Task): NumberChange[] {
  const range = (from: number): Variable => ({
    from,
    lowest: Math.min(from, LOWEST_MOL_PER_L),
    highest: Math.max(from, HIGHEST_MOL_PER_L),
  });
  const [lowest, highest] = BRIEF_LIMITS.requirementPercent;
  return [
    ...task.analytes.map(
      (row, i): NumberChange => ({
        what: "analyte-level",
        subject: row.shown,
        unit: "mol/L",
        variable: range(row.molPerL),
        at: (molPerL) => ({ ...task, analytes: task.analytes.map((a, k) => (k === i ? { ...a, molPerL } : a)) }),
      }),
    ),
    ...task.matrix.map(
      (row, i): NumberChange => ({
        what: "matrix-level",
        subject: row.shown,
        unit: "mol/L",
        variable: range(row.molPerL),
        at: (molPerL) => ({ ...task, matrix: task.matrix.map((c, k) => (k === i ? { ...c, molPerL } : c)) }),
      }),
    ),
    {
      what: "requirement",
      subject: "",
      unit: "%",
      variable: { from: task.requirementPercent, lowest, highest },
      at: (requirementPercent) => ({ ...task, requirementPercent }),
    },
  ];
}

const withLaboratory = (task: Task, change: Partial<Task["laboratory"]>): Task => ({
  ...task,
  laboratory: { ...task.laboratory, ...change },
});

/**
 * Reagents that can be forbidden (each that the first method takes) or allowed (each that the brief forbids, and where the brief lists what there
 * is, each that the first method of a full shelf would take besides).
 * @param used reagents of the first method
 * @param usedOfAll reagents of the first method where the shelf is not limited; empty where the brief does not limit it
 */
export function reagentChanges(
  task: Task,
  used: readonly string[],
  usedOfAll: readonly string[],
  knowledge: Knowledge,
): ReagentChange[] {
  const known = reagentIds(knowledge);
  const { avoid, available } = task.laboratory;
  const forbid = used
    .filter((id) => known.has(id) && !avoid.includes(id))
    .map((subject) => ({
      what: "forbid" as const,
      subject,
      task: withLaboratory(task, { avoid: [...avoid, subject] }),
    }));
  const allow = avoid.map((subject) => ({
    what: "allow" as const,
    subject,
    task: withLaboratory(task, { avoid: avoid.filter((id) => id !== subject) }),
  }));
  const add =
    available === null
      ? []
      : usedOfAll
          .filter((id) => known.has(id) && !available.includes(id) && !avoid.includes(id))
          .map((subject) => ({
            what: "allow" as const,
            subject,
            task: withLaboratory(task, { available: [...available, subject] }),
          }));
  return [...forbid, ...allow, ...add];
}
