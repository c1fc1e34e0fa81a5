import type { Facts, FactValue } from "../inference/types.ts";
import type { DevelopedStage } from "../methods/develop.ts";

const KINETIC_ORDER = ["fast", "slow", "inert"] as const;
type Kinetics = (typeof KINETIC_ORDER)[number];
/** The slowest of some rates; fast where there is none. */
export const worst = (classes: readonly Kinetics[]): Kinetics =>
  KINETIC_ORDER[Math.max(0, ...classes.map((c) => KINETIC_ORDER.indexOf(c)))] ?? "fast";

/** Leaves out what could not be calculated: an absent fact is guarded by its status, a wrong number is not. */
export function finite(facts: Record<string, FactValue | null | undefined>): Facts {
  const out: Record<string, FactValue> = {};
  for (const [name, value] of Object.entries(facts)) {
    if (value === null || value === undefined) continue;
    if (typeof value === "number" && !Number.isFinite(value)) continue;
    out[name] = value;
  }
  return out;
}

/** Whether a titration needs a step. */
export const has = (stage: DevelopedStage, step: string): boolean => stage.plan.preparation.includes(step);
/** Whether a titration is done above ambient temperature. */
export const heats = (stage: DevelopedStage): boolean => has(stage, "heat") || has(stage, "boil") || has(stage, "warm");
/** Whether an end point was found. */
export const usable = (stage: DevelopedStage): boolean => stage.evaluation.status !== "failed";
