import { Router } from "express";
import type { Knowledge } from "../../constants/knowledge.ts";
import { ruleHref, type Names } from "../format/names.ts";
import { significant, signed } from "../format/numbers.ts";
import { BASIS_WORDS, EFFECT_WORDS, listing, spacedName, wordsOf } from "../format/words.ts";
import type { Markup } from "../render/markup.ts";
import { renderView } from "../render/render-view.ts";
import type { FactListing, RuleCondition, RuleListing, WebServices } from "../services.ts";
import { factValue } from "./reasons-view.ts";
import { shell } from "./shell.ts";

/** The rules: by topic, and each with its conditions in words, its reason, source and own examples. */
export function rulesPage({ knowledge, rules, facts, operators }: WebServices, names: Names): Router {
  const router = Router();
  const catalogue: ReadonlyMap<string, FactListing> = new Map(facts.map((f) => [f.name, f]));
  router.get("/rules", (_request, response) => {
    response.send(renderView("rules", listView(knowledge, rules, names)));
  });
  router.get("/rules/:topic/:claim", (request, response, next) => {
    const rule = rules.find((r) => r.id === `${request.params.topic}/${request.params.claim}`);
    if (!rule) {
      next();
      return;
    }
    response.send(renderView("rule", ruleView(knowledge, rule, catalogue, operators, names)));
  });
  return router;
}

function listView(knowledge: Knowledge, rules: readonly RuleListing[], names: Names): object {
  const topics = [...new Set(rules.map((r) => r.topic))].sort();
  return {
    shell: shell(knowledge, "Rules", "rules"),
    count: String(rules.length),
    topics: topics.map((topic) => ({
      topic,
      rules: rules
        .filter((r) => r.topic === topic)
        .map((r) => ({
          id: r.id,
          href: ruleHref(r.id),
          effect: wordsOf(EFFECT_WORDS, r.effect),
          weight: r.weight === 0 ? "" : signed(r.weight, 1),
          statement: names.set(readable(r.statement)),
        })),
    })),
  };
}

/** A statement template for reading: its places for values shown as the words of the fact. */
const readable = (template: string): string =>
  template.replace(/\{([A-Za-z]+)(?:[|:][^}]*)?\}/g, (_, name: string) => `‹${spacedName(name)}›`);

/** One line of a condition: how deep it stands, and what it asks. */
export interface ConditionLine {
  readonly depth: string;
  readonly text: Markup;
}

/** A condition as indented lines of words. */
export function conditionLines(
  condition: RuleCondition,
  catalogue: ReadonlyMap<string, FactListing>,
  operators: WebServices["operators"],
  names: Names,
  depth = 0,
): readonly ConditionLine[] {
  const line = (text: string): ConditionLine => ({ depth: String(Math.min(depth, 4)), text: names.set(text) });
  const inner = (list: readonly RuleCondition[]): readonly ConditionLine[] =>
    list.flatMap((c) => conditionLines(c, catalogue, operators, names, depth + 1));
  if ("all" in condition) return [line("all of these hold:"), ...inner(condition.all)];
  if ("any" in condition) return [line("at least one of these holds:"), ...inner(condition.any)];
  if ("not" in condition) return [line("this does not hold:"), ...inner([condition.not])];
  const fact = catalogue.get(condition.fact);
  const words = operators.get(condition.operator)?.words ?? condition.operator;
  return [
    line(`${fact?.meaning ?? condition.fact}: ${words} ${operandText(condition.value, fact?.unit ?? null, catalogue)}`),
  ];
}

function operandText(value: unknown, unit: string | null, catalogue: ReadonlyMap<string, FactListing>): string {
  if (typeof value === "object" && value !== null && "fact" in value && typeof value.fact === "string")
    return `the value of “${catalogue.get(value.fact)?.meaning ?? value.fact}”`;
  if (Array.isArray(value)) {
    const parts = value.map((v) => (typeof v === "number" ? significant(v, 4) : String(v)));
    return `${listing(parts)}${unit === null || unit === "pH" || typeof value[0] !== "number" ? "" : ` ${unit}`}`;
  }
  return factValue(value, unit);
}

function ruleView(
  knowledge: Knowledge,
  rule: RuleListing,
  catalogue: ReadonlyMap<string, FactListing>,
  operators: WebServices["operators"],
  names: Names,
): object {
  const example = (facts: Readonly<Record<string, unknown>>): readonly object[] =>
    Object.entries(facts).map(([name, value]) => {
      const fact = catalogue.get(name);
      return {
        name,
        meaning: names.set(fact?.meaning ?? name),
        value: names.set(factValue(value, fact?.unit ?? null)),
      };
    });
  return {
    shell: shell(knowledge, `Rule ${rule.id}`, "rules"),
    id: rule.id,
    scope:
      { method: "a whole method", stage: "one titration", component: "one component of the solution" }[rule.scope] ??
      rule.scope,
    effect: wordsOf(EFFECT_WORDS, rule.effect),
    weight: rule.weight === 0 ? "none" : `${signed(rule.weight, 1)} points`,
    reservation: rule.reservation ? "yes" : "no",
    requires: rule.requires === null ? "" : `${rule.requires.kind}: ${rule.requires.anyOf.join(" or ")}`,
    statement: names.set(readable(rule.statement)),
    conditions: conditionLines(rule.when, catalogue, operators, names),
    rationale: names.set(rule.rationale),
    source: names.set(rule.source.cite),
    basis: wordsOf(BASIS_WORDS, rule.source.basis),
    fires: rule.examples.fires.map((f) => ({ facts: example(f) })),
    silent: rule.examples.silent.map((f) => ({ facts: example(f) })),
  };
}
