import { z } from "zod";
import type { Operand } from "./operators.ts";
import type { FactValue, RuleEffect, RuleFinding, RuleScope } from "./types.ts";

/** One comparison: a catalogued fact, an operator of the rule language, and a value or another fact of the same scope. */
export interface Leaf {
  readonly fact: string;
  readonly operator: string;
  readonly value: Operand | { readonly fact: string };
}

/** The condition of a rule: comparisons joined by all, any and not. */
export type Condition =
  | Leaf
  | { readonly all: readonly Condition[] }
  | { readonly any: readonly Condition[] }
  | { readonly not: Condition };

/** Facts of an example: only those that matter, the rest is filled with the neutral values of neutral-facts.ts. */
export type ExampleFacts = Readonly<Record<string, FactValue>>;

/** A rule as its file states it, checked. */
export interface Rule {
  readonly id: string;
  readonly topic: string;
  readonly file: string;
  readonly scope: RuleScope;
  readonly when: Condition;
  readonly effect: RuleEffect;
  readonly weight: number;
  /** Where present, the weight counts once for each unit of the fact beyond this number: -3 per reagent beyond the first. */
  readonly per: { readonly fact: string; readonly beyond: number } | null;
  readonly requires: RuleFinding["requires"];
  readonly reservation: boolean;
  readonly statement: string;
  readonly rationale: string;
  readonly source: { readonly cite: string; readonly basis: RuleFinding["basis"] };
  readonly examples: { readonly fires: readonly ExampleFacts[]; readonly silent: readonly ExampleFacts[] };
}

const scalar = z.union([z.number(), z.string(), z.boolean()]);
const text = z.string().trim().min(1);
const leaf = z.strictObject({
  fact: text,
  operator: text,
  value: z.union([scalar, z.array(z.string()).min(1), z.array(z.number()).length(2), z.strictObject({ fact: text })]),
});
const example = z.record(z.string(), z.union([scalar, z.array(z.string())]));

/** The frame of one rule; its condition is read by {@link readCondition}, which can name the place of a fault exactly. */
export const ruleFrame = z.strictObject({
  id: z.string().regex(/^[a-z][a-z0-9-]*\/[a-z][a-z0-9-]*$/, 'expected "topic/claim" in lower case'),
  scope: z.enum(["method", "stage", "component"]),
  when: z.unknown().refine((when) => when !== undefined, "expected a condition"),
  effect: z.enum(["excludes", "requires", "favours", "disfavours", "cautions"]),
  weight: z.number().optional(),
  per: z.strictObject({ fact: text, beyond: z.number() }).optional(),
  requires: z
    .strictObject({ kind: z.enum(["preparation", "auxiliary", "masking"]), anyOf: z.array(text).min(1) })
    .optional(),
  reservation: z.boolean().optional(),
  statement: text,
  rationale: text,
  source: z.strictObject({ cite: text, basis: z.enum(["read", "memory", "common practice", "computed"]) }),
  examples: z.strictObject({ fires: z.array(example).min(1), silent: z.array(example).min(1) }),
});

/** The frame of a rule file: `{ topic, about, rules }`. */
export const ruleFileFrame = z.strictObject({ topic: text, about: text, rules: z.array(z.unknown()).min(1) });

/** A fault with its place inside a rule: `.when.all[1].operator`. */
export type Report = (path: string, message: string) => void;

/** Passes every issue of a failed parse to `report`, each at its own path below `at`. */
export function reportIssues(error: z.ZodError, at: string, report: Report): void {
  for (const issue of error.issues) {
    const path = issue.path.map((key) => (typeof key === "number" ? `[${key}]` : `.${String(key)}`)).join("");
    report(at + path, issue.message);
  }
}

const GROUPS = ["all", "any", "not"] as const;

/** Reads a condition of any depth; null where it is faulty, after reporting each fault at its path. */
export function readCondition(raw: unknown, at: string, report: Report): Condition | null {
  if (typeof raw !== "object" || raw === null || Array.isArray(raw)) {
    report(at, `expected a comparison or one of all, any, not; found ${JSON.stringify(raw)}`);
    return null;
  }
  const group = GROUPS.find((key) => key in raw);
  if (group === undefined) {
    const parsed = leaf.safeParse(raw);
    if (parsed.success) return parsed.data;
    reportIssues(parsed.error, at, report);
    return null;
  }
  const others = Object.keys(raw).filter((key) => key !== group);
  if (others.length > 0) report(at, `${group} stands alone; also found ${others.join(", ")}`);
  const inside = (raw as Record<string, unknown>)[group];
  if (group === "not") {
    const condition = readCondition(inside, `${at}.not`, report);
    return condition === null || others.length > 0 ? null : { not: condition };
  }
  if (!Array.isArray(inside) || inside.length === 0) {
    report(`${at}.${group}`, "expected at least one condition: an empty list would always hold");
    return null;
  }
  const conditions = inside.map((item, i) => readCondition(item, `${at}.${group}[${i}]`, report));
  if (others.length > 0 || conditions.includes(null)) return null;
  const members = conditions.filter((condition) => condition !== null);
  return group === "all" ? { all: members } : { any: members };
}
