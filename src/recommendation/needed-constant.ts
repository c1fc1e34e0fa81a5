import type { Task } from "../methods/types.ts";

/**
 * log10 K' from which no more than the required share of the analyte is unbound at the equivalence point:
 * K' = (1 - f) / (f^2 c), from the mass balances of a 1:1 complex with equal totals c.
 */
export function neededLog10K(task: Task): number {
  const c = (task.analytes[0]!.molPerL * task.portion.volumeML) / task.portion.titrationVolumeML;
  const f = task.requirementPercent / 100;
  return Math.log10((1 - f) / (f * f * c));
}
