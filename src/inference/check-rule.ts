import { factFaults } from "./check-facts.ts";
import { conditionHolds, distanceToHolding, factsReadBy } from "./conditions.ts";
import { factsOfScope, GUARD_VALUES } from "./fact-catalogue.ts";
import { wordsOfFact } from "./fact-words.ts";
import { neutralFacts } from "./neutral-facts.ts";
import { OPERATORS, type RuleOperator } from "./operators.ts";
import type { Condition, ExampleFacts, Leaf, Report, Rule } from "./rule-schema.ts";
import { hasStrayBrace, placeholdersOf, STATEMENT_FORMATS } from "./statement.ts";
import type { Facts, FactDefinition, RuleScope } from "./types.ts";

const SCOPES: readonly RuleScope[] = ["method", "stage", "component"];
const WEIGHTS: Readonly<Record<string, readonly [number, number]>> = { favours: [1, 30], disfavours: [-60, -1] };

/** The facts an example stands for: its own, and for all that it leaves out the neutral ones. */
export function exampleFacts(scope: RuleScope, example: ExampleFacts): Facts {
  return { ...neutralFacts(scope), ...example };
}

/** Reports every fault of a rule whose frame is sound: facts, operators, values, guards, weight, statement and examples. */
export function checkRule(rule: Rule, report: Report): void {
  const faults: (readonly [path: string, message: string])[] = [];
  const note: Report = (path, message) => faults.push([path, message]);
  checkCondition(rule.when, rule.scope, ".when", new Set(), false, note);
  checkEffect(rule, note);
  checkStatement(rule, note);
  // Examples of a rule that is wrong elsewhere would only repeat the fault.
  if (faults.length === 0) checkExamples(rule, note);
  for (const [path, message] of faults) report(path, message);
}

function definitionOf(fact: string, scope: RuleScope, path: string, report: Report): FactDefinition | undefined {
  const definition = factsOfScope(scope).get(fact);
  if (definition !== undefined) return definition;
  const elsewhere = SCOPES.filter((other) => factsOfScope(other).has(fact));
  report(
    path,
    elsewhere.length > 0
      ? `${fact} is a fact of scope ${elsewhere.join(" and ")}, not of ${scope}`
      : `unknown fact ${fact}`,
  );
  return undefined;
}

function checkCondition(
  condition: Condition,
  scope: RuleScope,
  path: string,
  guards: ReadonlySet<string>,
  negated: boolean,
  report: Report,
): void {
  if ("all" in condition) {
    const proven = new Set([...guards, ...condition.all.flatMap(guardsProvenBy)]);
    condition.all.forEach((member, i) => checkCondition(member, scope, `${path}.all[${i}]`, proven, negated, report));
  } else if ("any" in condition)
    condition.any.forEach((member, i) => checkCondition(member, scope, `${path}.any[${i}]`, guards, negated, report));
  else if ("not" in condition) checkCondition(condition.not, scope, `${path}.not`, guards, true, report);
  else checkLeaf(condition, scope, path, guards, negated, report);
}

/** The guards that a condition shows to allow numbers, whenever it holds. */
function guardsProvenBy(condition: Condition): readonly string[] {
  if ("all" in condition) return condition.all.flatMap(guardsProvenBy);
  if ("any" in condition || "not" in condition) return [];
  const allowed = GUARD_VALUES[condition.fact];
  if (allowed === undefined) return [];
  const words = [condition.value].flat().map(String);
  const narrows = condition.operator === "is" || condition.operator === "isOneOf";
  const excludes =
    condition.operator === "isNot" &&
    wordsOfFact(condition.fact)?.every((word) => allowed.includes(word) || words.includes(word));
  return (narrows && words.every((word) => allowed.includes(word))) || excludes === true ? [condition.fact] : [];
}

function checkLeaf(
  leaf: Leaf,
  scope: RuleScope,
  path: string,
  guards: ReadonlySet<string>,
  negated: boolean,
  report: Report,
): void {
  for (const fact of factsReadBy(leaf)) {
    const read = definitionOf(fact, scope, fact === leaf.fact ? `${path}.fact` : `${path}.value.fact`, report);
    if (read?.guard == null) continue;
    if (negated) report(path, `${fact} may be absent: not around it would hold when nothing is known`);
    if (!guards.has(read.guard)) {
      const allowed = (GUARD_VALUES[read.guard] ?? []).join(" or ");
      report(path, `${fact} may be absent: its guard ${read.guard} must be tested beside it (is ${allowed})`);
    }
  }
  const definition = factsOfScope(scope).get(leaf.fact);
  const operator = OPERATORS.get(leaf.operator);
  if (operator === undefined)
    report(`${path}.operator`, `unknown operator ${leaf.operator}; known: ${[...OPERATORS.keys()].join(", ")}`);
  else if (definition !== undefined) checkOperand(leaf, definition, operator, scope, path, report);
}

function checkOperand(
  leaf: Leaf,
  definition: FactDefinition,
  operator: RuleOperator,
  scope: RuleScope,
  path: string,
  report: Report,
): void {
  if (!operator.reads.includes(definition.type)) {
    report(
      `${path}.operator`,
      `${operator.name} reads ${operator.reads.join(" or ")}, but ${leaf.fact} is ${definition.type}`,
    );
    return;
  }
  const expected = operator.operand === "same" ? definition.type : operator.operand;
  const value = leaf.value;
  if (typeof value === "object" && "fact" in value) {
    const other = factsOfScope(scope).get(value.fact);
    if (other !== undefined && other.type !== expected)
      report(`${path}.value`, `expected ${expected}, found the fact ${value.fact} of type ${other.type}`);
    return;
  }
  const list = Array.isArray(value) ? (value as readonly unknown[]) : null;
  const fits =
    expected === "words"
      ? list !== null && list.every((item) => typeof item === "string")
      : expected === "range"
        ? list !== null && list.length === 2 && typeof list[0] === "number" && list[0] < Number(list[1])
        : typeof value === expected;
  if (!fits)
    report(
      `${path}.value`,
      `expected ${expected === "range" ? "two rising numbers" : expected}, found ${JSON.stringify(value)}`,
    );
  const words = wordsOfFact(leaf.fact);
  for (const word of [value].flat())
    if (words !== undefined && typeof word === "string" && !words.includes(word))
      report(`${path}.value`, `${leaf.fact} is never ${word}; it is one of ${words.join(", ")}`);
}

function checkEffect(rule: Rule, report: Report): void {
  const range = WEIGHTS[rule.effect];
  if (range !== undefined && !(rule.weight >= range[0] && rule.weight <= range[1]))
    report(".weight", `${rule.effect} weighs ${range[0]} to ${range[1]} points, found ${rule.weight}`);
  if (range === undefined && rule.weight !== 0)
    report(".weight", `${rule.effect} carries no weight, found ${rule.weight}`);
  if (rule.per !== null) checkPer(rule.per, rule, report);
  if (rule.effect === "requires" && rule.requires === null)
    report(".requires", "a rule that requires says what: kind and anyOf");
  if (rule.effect !== "requires" && rule.requires !== null) report(".requires", `${rule.effect} requires nothing`);
  if (rule.reservation && rule.effect !== "cautions") report(".reservation", "only a caution can be a reservation");
}

function checkPer(per: NonNullable<Rule["per"]>, rule: Rule, report: Report): void {
  if (rule.weight === 0) report(".per", "only a weight can be counted per unit");
  const definition = definitionOf(per.fact, rule.scope, ".per.fact", report);
  if (definition !== undefined && (definition.type !== "number" || definition.optional))
    report(".per.fact", `${per.fact} is not a number that always exists`);
}

/** The facts that have a value whenever the condition holds, though they may be absent otherwise. */
function certainFacts(condition: Condition): readonly string[] {
  if ("all" in condition) return condition.all.flatMap(certainFacts);
  if ("any" in condition) {
    const [first = [], ...others] = condition.any.map(certainFacts);
    return first.filter((fact) => others.every((facts) => facts.includes(fact)));
  }
  return "not" in condition ? [] : factsReadBy(condition);
}

function checkStatement(rule: Rule, report: Report): void {
  if (hasStrayBrace(rule.statement)) report(".statement", "a brace stands alone");
  const certain = certainFacts(rule.when);
  for (const { fact, format } of placeholdersOf(rule.statement)) {
    const definition = definitionOf(fact, rule.scope, ".statement", report);
    if (definition === undefined) continue;
    if (definition.optional && !certain.includes(fact))
      report(".statement", `${fact} may be absent: a statement may name it only where the condition tests it`);
    if (format === "") continue;
    const known = STATEMENT_FORMATS.get(format);
    if (known === undefined)
      report(".statement", `unknown format ${format}; known: ${[...STATEMENT_FORMATS.keys()].join(", ")}`);
    else if (known.type !== definition.type)
      report(".statement", `format ${format} writes ${known.type}, but ${fact} is ${definition.type}`);
  }
}

function checkExamples(rule: Rule, report: Report): void {
  let nearest = Number.POSITIVE_INFINITY;
  for (const kind of ["fires", "silent"] as const)
    rule.examples[kind].forEach((example, i) => {
      const path = `.examples.${kind}[${i}]`;
      const faults = factFaults(rule.scope, example, true);
      for (const fault of faults) report(path, fault);
      if (faults.length > 0) return;
      const facts = exampleFacts(rule.scope, example);
      const fires = conditionHolds(rule.when, facts);
      if (kind === "fires" && !fires) report(path, "the rule does not fire");
      if (kind === "silent" && fires) report(path, "the rule fires");
      if (kind === "silent") nearest = Math.min(nearest, distanceToHolding(rule.when, facts));
    });
  if (nearest > 1 && Number.isFinite(nearest))
    report(".examples.silent", "one silent example must miss by a single condition, or the examples show no boundary");
}
