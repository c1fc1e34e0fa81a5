import { distanceToHolding, factsReadBy, leavesOf, misses, type Miss } from "./conditions.ts";
import { OPERATORS } from "./operators.ts";
import type { RuleBase } from "./load-rules.ts";
import type { Leaf, Rule } from "./rule-schema.ts";
import { fillStatement, placeholdersOf } from "./statement.ts";
import type { FactValue, Facts, RuleFinding, RuleScope } from "./types.ts";

/** A rule that would have fired but for one comparison. */
export interface NearMiss {
  readonly rule: string;
  readonly effect: Rule["effect"];
  readonly weight: number;
  readonly misses: readonly Miss[];
  readonly statement: string; // what kept it from firing, in words
  readonly facts: Facts;
  readonly rationale: string;
  readonly source: string;
}

/** The finding of a rule that fired: its statement filled, and only the facts that it looked at or quotes. */
export function findingOf(rule: Rule, facts: Facts): RuleFinding {
  return {
    rule: rule.id,
    effect: rule.effect,
    weight: weightOf(rule, facts),
    reservation: rule.reservation,
    requires: rule.requires,
    statement: fillStatement(rule.statement, facts),
    facts: factsSeen(rule, facts),
    rationale: rule.rationale,
    source: rule.source.cite,
    basis: rule.source.basis,
  };
}

// A count may be large; no single reason outweighs an exclusion's worth of points.
const LARGEST_WEIGHT = 60;

/** The points of a rule that fired: its weight, times the units beyond the free ones where it is counted per unit, at most 60 either way. */
export function weightOf(rule: Rule, facts: Facts): number {
  if (rule.per === null) return rule.weight;
  const units = Math.max(0, Number(facts[rule.per.fact]) - rule.per.beyond);
  return Math.max(-LARGEST_WEIGHT, Math.min(LARGEST_WEIGHT, rule.weight * units));
}

/** The rules that exclude or favour and failed by exactly one comparison: what nearly decided otherwise. `facts` complete. */
export function nearMisses(base: RuleBase, scope: RuleScope, facts: Facts): readonly NearMiss[] {
  return base.byScope[scope]
    .filter((rule) => rule.effect === "favours" || rule.effect === "excludes")
    .filter((rule) => distanceToHolding(rule.when, facts) === 1)
    .map((rule) => {
      const missed = misses(rule.when, facts);
      return {
        rule: rule.id,
        effect: rule.effect,
        weight: rule.weight,
        misses: missed,
        statement: `${rule.effect} only where ${missed.map(({ leaf, seen }) => `${inWords(leaf)} (here ${shown(seen)})`).join(", ")}`,
        facts: factsSeen(rule, facts),
        rationale: rule.rationale,
        source: rule.source.cite,
      };
    });
}

/** The rules that fired for nothing in a set of runs: candidates for a second look. `fired` lists rule ids, repeated or not. */
export function idleRules(base: RuleBase, fired: Iterable<string>): readonly string[] {
  const seen = new Set(fired);
  return base.rules.map((rule) => rule.id).filter((id) => !seen.has(id));
}

/** A comparison in words: "pH below 9.5". */
export function inWords(leaf: Leaf): string {
  const value = leaf.value;
  const right = typeof value === "object" && "fact" in value ? value.fact : [value].flat().join(", ");
  return `${leaf.fact} ${OPERATORS.get(leaf.operator)?.words ?? leaf.operator} ${right}`;
}

function shown(value: FactValue | null): string {
  if (value === null) return "not known";
  return typeof value === "object" ? value.join(", ") || "empty" : String(value);
}

function factsSeen(rule: Rule, facts: Facts): Facts {
  const names = new Set([
    ...leavesOf(rule.when).flatMap(factsReadBy),
    ...placeholdersOf(rule.statement).map(({ fact }) => fact),
    ...(rule.per === null ? [] : [rule.per.fact]),
  ]);
  const seen: Record<string, FactValue> = {};
  for (const name of names) {
    const value = facts[name];
    if (value !== undefined) seen[name] = value;
  }
  return seen;
}
