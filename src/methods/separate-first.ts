import type { ComponentId, Knowledge } from "../constants/knowledge.ts";
import { maskSets } from "./masks.ts";
import { settle, type Settled } from "./settle.ts";
import type { Shelf } from "./shelf.ts";
import type { Threat } from "./threats.ts";
import type { StagePlan, Task } from "./types.ts";

/** A component above this ratio to the analyte may be better taken out than masked, even where a mask holds. */
export const BULK_RATIO = 0.5;

/** Sets of masks tried on what a separation leaves: two, for equal burdens say little of the chemistry. */
const SETS_AFTER_SEPARATION = 2;

/** A titration as it stands after a separation, before anything is masked. */
interface Bare {
  readonly plan: StagePlan;
  readonly threats: readonly Threat[];
}

/**
 * Variants in which what cannot be masked, or is determined by itself, is taken out first, the rest masked; and one in which everything is taken out.
 * @param settledBare the titration with these ions gone, before anything is masked
 */
export function separations(
  task: Task,
  settledBare: (removed: readonly ComponentId[]) => Bare,
  threats: readonly Threat[],
  failed: readonly Threat[],
  knowledge: Knowledge,
  shelf: Shelf,
): Settled[] {
  const hopeless = new Set(failed.map((t) => t.component));
  const metals = threats.filter((t) => !t.holdsAnalyte);
  // What is asked for by itself is parted anyway; the rest may be masked then.
  const asked = new Set(task.analytes.map((a) => a.component));
  const choices = [
    threats.filter((t) => hopeless.has(t.component)),
    threats.filter((t) => asked.has(t.component)),
    metals,
    threats,
  ].filter((c) => c.length > 0);
  const seen = new Set<string>();
  return choices.flatMap((out) => {
    const removed = out.map((t) => t.component);
    const key = removed.join();
    if (seen.has(key)) return [];
    seen.add(key);
    const { plan, threats: left } = settledBare(removed);
    return maskSets(left, plan, knowledge, shelf)
      .slice(0, SETS_AFTER_SEPARATION)
      .map((set) => settle(task, plan, set, knowledge));
  });
}
