import { ABSENT_LN_FREE } from "../chemistry/solve-equilibrium.ts";
import type { PreparedSystem, SolveResult } from "../chemistry/types.ts";
import type { Task } from "./types.ts";

/** A solved vessel to start another from: ln free concentrations by column, and the ids of the solids that lie. */
export interface NearStart {
  readonly lnFree: Float64Array;
  readonly solids: readonly string[];
}

/** Where a component that was not there before begins: nearly all of it bound, as of titrant. */
const MOSTLY_BOUND_LN = 20;

/** Gives components that were absent and are there now a place to begin. Works on `lnFree` itself. */
export function withNewcomers(lnFree: Float64Array, totals: Float64Array): Float64Array {
  for (let j = 1; j < lnFree.length; j++)
    if (lnFree[j]! <= ABSENT_LN_FREE && totals[j]! > 0) lnFree[j] = Math.log(totals[j]!) - MOSTLY_BOUND_LN;
  return lnFree;
}

/** What a solved vessel is as a start for the next. */
export function startFrom(
  system: PreparedSystem,
  solved: Pick<SolveResult, "lnFree" | "solidsMolPerL">,
  totals: Float64Array,
): NearStart {
  const amounts = solved.solidsMolPerL;
  return {
    lnFree: withNewcomers(solved.lnFree.slice(), totals),
    solids: amounts.some((amount) => amount > 0)
      ? system.solidRows.flatMap((s, i) => (amounts[i]! > 0 ? [s.id] : []))
      : [],
  };
}

/**
 * The last vessel of each composition that a task met: the next of the same species is solved from there. Kept with the task, so that the
 * same task meets the same starts whatever was asked before.
 */
const lastOf = new WeakMap<Task, Map<Int8Array, NearStart>>();

/** A start for a vessel of this system, null where the task has met none of the kind. */
export const nearStart = (task: Task, system: PreparedSystem): NearStart | null =>
  lastOf.get(task)?.get(system.problem.stoichiometry) ?? null;

/** Keeps a solved vessel for the next of its composition. */
export function keepStart(task: Task, system: PreparedSystem, start: NearStart): void {
  let ofTask = lastOf.get(task);
  if (ofTask === undefined) lastOf.set(task, (ofTask = new Map<Int8Array, NearStart>()));
  ofTask.set(system.problem.stoichiometry, start);
}
