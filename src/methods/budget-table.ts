import type { Knowledge } from "../constants/knowledge.ts";
import { budgetInputs } from "./budget-inputs.ts";
import { partsOf, type Part } from "./budget-parts.ts";
import type { StageEvaluation } from "./evaluate-stage.ts";
import { propagate, type Propagation, type Quantity } from "./gum.ts";
import type { Task } from "./types.ts";
import { commonTerms } from "./uncertainty.ts";

/** One quantity of a budget: to which of its terms it belongs, and what it does to the result. */
export interface BudgetRow extends Quantity {
  readonly term: string;
  readonly standardUncertainty: number;
  readonly relativeSensitivity: number; // of the result, per unit
  readonly relative: number; // contribution to the result, relative
}

/** A budget laid out quantity by quantity. */
export interface BudgetTable {
  readonly resultMolPerL: number; // in the sample
  readonly rows: readonly BudgetRow[]; // largest first
  readonly combined: number; // u_c, relative
  readonly effectiveDegreesOfFreedom: number;
}

/** mol/L of the sample that a titration stands for. */
const levelOf = (task: Task, evaluation: StageEvaluation): number =>
  (evaluation.presentMol / task.portion.volumeML) * 1000;

/** The result over its expectation, from the values of the quantities in their order. */
function ratioOf(parts: readonly Part[], resultML: number, values: readonly number[]): number {
  let mL = resultML;
  let factor = 1;
  parts.forEach((p, i) => {
    if (p.addsML) mL += p.addsML(values[i]!);
    if (p.factor) factor *= p.factor(values[i]!);
  });
  return (factor * mL) / resultML;
}

const resultMLOf = (task: Task, evaluation: StageEvaluation, knowledge: Knowledge): number =>
  budgetInputs(task, evaluation, knowledge).resultML;

/** The budget of one titration, laid out; its combined uncertainty is that of `stageBudget`, found by propagation through the result. */
export function budgetTable(task: Task, evaluation: StageEvaluation, knowledge: Knowledge): BudgetTable {
  const parts = partsOf(task, evaluation, knowledge);
  const resultML = resultMLOf(task, evaluation, knowledge);
  const level = levelOf(task, evaluation);
  return tableOf(
    parts,
    propagate(
      parts.map((p) => p.quantity),
      (values) => level * ratioOf(parts, resultML, values),
    ),
  );
}

/** The budget of a difference of two portions, laid out: what both have in common is one quantity. */
export function differenceTable(
  task: Task,
  whole: StageEvaluation,
  partly: StageEvaluation,
  knowledge: Knowledge,
): BudgetTable {
  const shared = commonTerms(whole, partly);
  const a = partsOf(task, whole, knowledge);
  const b = partsOf(task, partly, knowledge);
  const named = (p: Part, n: number): Part => ({
    ...p,
    quantity: { ...p.quantity, name: `${p.quantity.name} (titration ${n})` },
  });
  // What is common stands in both titrations with the value that the first has.
  const common = a.filter((p) => shared.has(p.term));
  const ownA = a.filter((p) => !shared.has(p.term));
  const ownB = b.filter((p) => !shared.has(p.term));
  const parts = [...common, ...ownA.map((p) => named(p, 1)), ...ownB.map((p) => named(p, 2))];
  const first = [...common, ...ownA];
  const second = [...common, ...ownB];
  const [resultA, resultB] = [resultMLOf(task, whole, knowledge), resultMLOf(task, partly, knowledge)];
  const measurand = (values: readonly number[]): number =>
    levelOf(task, whole) * ratioOf(first, resultA, values.slice(0, first.length)) -
    levelOf(task, partly) *
      ratioOf(second, resultB, [...values.slice(0, common.length), ...values.slice(first.length)]);
  return tableOf(
    parts,
    propagate(
      parts.map((p) => p.quantity),
      measurand,
    ),
  );
}

function tableOf(parts: readonly Part[], found: Propagation): BudgetTable {
  const rows = found.inputs.map(
    ({ sensitivity, contribution, ...quantity }, i): BudgetRow => ({
      ...quantity,
      term: parts[i]!.term,
      relativeSensitivity: sensitivity / found.value,
      relative: contribution / Math.abs(found.value),
    }),
  );
  return {
    resultMolPerL: found.value,
    rows: rows.filter((r) => r.relative > 0).sort((a, b) => b.relative - a.relative),
    combined: found.combined / Math.abs(found.value),
    effectiveDegreesOfFreedom: found.effectiveDegreesOfFreedom,
  };
}
