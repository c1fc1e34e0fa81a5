import { holds, OPERATORS, type Operand } from "./operators.ts";
import type { Condition, Leaf } from "./rule-schema.ts";
import type { Facts, FactValue } from "./types.ts";

/** A comparison of a rule that did not hold, with what it saw (null: a number that does not exist). */
export interface Miss {
  readonly leaf: Leaf;
  readonly seen: FactValue | null;
}

/** Whether one comparison holds; a number that does not exist satisfies none. */
export function leafHolds(leaf: Leaf, facts: Facts): boolean {
  const operator = OPERATORS.get(leaf.operator);
  if (operator === undefined) throw new TypeError(`unknown operator ${leaf.operator}`);
  const value = leaf.value;
  const operand: Operand | null = typeof value === "object" && "fact" in value ? (facts[value.fact] ?? null) : value;
  return holds(operator, facts[leaf.fact] ?? null, operand);
}

/** Whether a condition holds for complete facts, without the engine: for examples and explanations. */
export function conditionHolds(condition: Condition, facts: Facts): boolean {
  if ("all" in condition) return condition.all.every((member) => conditionHolds(member, facts));
  if ("any" in condition) return condition.any.some((member) => conditionHolds(member, facts));
  if ("not" in condition) return !conditionHolds(condition.not, facts);
  return leafHolds(condition, facts);
}

/** How many comparisons must come out differently for the condition to hold: 0 when it does. */
export function distanceToHolding(condition: Condition, facts: Facts): number {
  if ("all" in condition) return condition.all.reduce((sum, member) => sum + distanceToHolding(member, facts), 0);
  if ("any" in condition) return Math.min(...condition.any.map((member) => distanceToHolding(member, facts)));
  return conditionHolds(condition, facts) ? 0 : 1;
}

/** The comparisons that kept a condition from holding: of alternatives, those of the nearest one. */
export function misses(condition: Condition, facts: Facts): readonly Miss[] {
  if (conditionHolds(condition, facts)) return [];
  if ("all" in condition) return condition.all.flatMap((member) => misses(member, facts));
  if ("any" in condition) {
    const distances = condition.any.map((member) => distanceToHolding(member, facts));
    const nearest = condition.any[distances.indexOf(Math.min(...distances))];
    return nearest === undefined ? [] : misses(nearest, facts);
  }
  const leaves = "not" in condition ? leavesOf(condition.not) : [condition];
  return leaves.map((leaf) => ({ leaf, seen: facts[leaf.fact] ?? null }));
}

/** Every comparison of a condition, in the order written. */
export function leavesOf(condition: Condition): readonly Leaf[] {
  if ("all" in condition) return condition.all.flatMap(leavesOf);
  if ("any" in condition) return condition.any.flatMap(leavesOf);
  if ("not" in condition) return leavesOf(condition.not);
  return [condition];
}

/** The facts a comparison reads: its own and, where it compares with another, that one. */
export function factsReadBy(leaf: Leaf): readonly string[] {
  return typeof leaf.value === "object" && "fact" in leaf.value ? [leaf.fact, leaf.value.fact] : [leaf.fact];
}
