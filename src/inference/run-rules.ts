import { Engine, Rule as EngineRule, type TopLevelCondition } from "json-rules-engine";
import { assertFacts } from "./check-facts.ts";
import { factsReadBy, leafHolds, leavesOf } from "./conditions.ts";
import { findingOf, nearMisses, type NearMiss } from "./explain.ts";
import { factsOfScope } from "./fact-catalogue.ts";
import type { RuleBase } from "./load-rules.ts";
import { holds, OPERATORS, type Operand } from "./operators.ts";
import type { Condition, Leaf, Rule } from "./rule-schema.ts";
import type { Facts, FactValue, RuleFinding, RuleScope } from "./types.ts";

/** One question to the rules. */
export interface RuleQuestion {
  readonly scope: RuleScope;
  readonly facts: Facts;
}

/** Runs the rules of a base over facts; safe to call from several places at once. */
export interface RuleRunner {
  /** The findings of every rule of the scope that fires, in the order of the rule base. */
  run(scope: RuleScope, facts: Facts): Promise<readonly RuleFinding[]>;
  /** The same for many questions, one after another, answers in their order; equal questions are run once. */
  runAll(questions: readonly RuleQuestion[]): Promise<readonly (readonly RuleFinding[])[]>;
  /** Rules that exclude or favour and failed by one comparison. */
  nearMisses(scope: RuleScope, facts: Facts): readonly NearMiss[];
}

// Words and truth values decide most rules and cost least; a comparison of a higher priority that settles a rule spares the rest.
const GUARD_PRIORITY = 3;
const CERTAIN_PRIORITY = 2;
const OPTIONAL_PRIORITY = 1;

/**
 * Prepares the rules of each scope for the engine, which knows the catalogued operators only. Each scope runs one set of facts at a time:
 * overlapping runs lose rules.
 * The runner throws TypeError on facts that the catalogue does not describe, and where the engine did not answer for every rule.
 */
export function createRuleRunner(base: RuleBase): RuleRunner {
  const engines: Readonly<Record<RuleScope, ScopeEngine>> = {
    method: new ScopeEngine("method", base.byScope.method),
    stage: new ScopeEngine("stage", base.byScope.stage),
    component: new ScopeEngine("component", base.byScope.component),
  };
  const run = (scope: RuleScope, facts: Facts): Promise<readonly RuleFinding[]> => engines[scope].run(facts);
  return {
    run,
    async runAll(questions) {
      const answered = new Map<string, readonly RuleFinding[]>();
      const answers: (readonly RuleFinding[])[] = [];
      for (const { scope, facts } of questions) {
        const key = `${scope} ${JSON.stringify(facts)}`;
        const answer = answered.get(key) ?? (await run(scope, facts));
        answered.set(key, answer);
        answers.push(answer);
      }
      return answers;
    },
    nearMisses(scope, facts) {
      assertFacts(scope, facts);
      return nearMisses(base, scope, facts);
    },
  };
}

/** A rule as the engine takes it, with the comparisons of words that must hold before anything else is looked at. */
interface PreparedRule {
  readonly rule: Rule;
  readonly gates: readonly Leaf[];
  readonly engineRule: EngineRule;
}

class ScopeEngine {
  readonly #scope: RuleScope;
  readonly #rules: readonly PreparedRule[];
  readonly #reads: readonly string[]; // facts some rule of the scope looks at
  #last: Promise<unknown> = Promise.resolve();

  constructor(scope: RuleScope, rules: readonly Rule[]) {
    this.#scope = scope;
    this.#rules = rules.map((rule) => ({ rule, gates: gatesOf(rule.when, scope), engineRule: engineRule(rule) }));
    this.#reads = [...new Set(rules.flatMap((rule) => leavesOf(rule.when).flatMap(factsReadBy)))];
  }

  run(facts: Facts): Promise<readonly RuleFinding[]> {
    assertFacts(this.#scope, facts);
    const turn = this.#last.then(() => this.#runNow(facts));
    this.#last = turn.catch(() => undefined);
    return turn;
  }

  async #runNow(facts: Facts): Promise<readonly RuleFinding[]> {
    // A rule whose words do not fit cannot fire: four in five need not go to the engine at all.
    const open = this.#rules.filter(({ gates }) => gates.every((leaf) => leafHolds(leaf, facts)));
    if (open.length === 0) return [];
    const engine = emptyEngine();
    for (const { engineRule } of open) engine.addRule(engineRule);
    // A number that does not exist is null to the operators, never undefined: the engine would refuse the whole run.
    const read: Record<string, FactValue | null> = {};
    for (const name of this.#reads) read[name] = facts[name] ?? null;
    const { results, failureResults } = await engine.run(read);
    const answered = results.length + failureResults.length;
    if (answered !== open.length) throw new TypeError(`the engine answered for ${answered} of ${open.length} rules`);
    const fired = new Set(results.map((result) => result.name));
    return open.filter(({ rule }) => fired.has(rule.id)).map(({ rule }) => findingOf(rule, facts));
  }
}

/** Comparisons of words, lists and truth values that stand in the top `all`: certain facts, cheap to compare. */
function gatesOf(condition: Condition, scope: RuleScope): readonly Leaf[] {
  if ("all" in condition) return condition.all.flatMap((member) => gatesOf(member, scope));
  if ("any" in condition || "not" in condition) return [];
  const numeric = factsReadBy(condition).some((name) => factsOfScope(scope).get(name)?.type === "number");
  return numeric ? [] : [condition];
}

function emptyEngine(): Engine {
  const engine = new Engine([], { allowUndefinedFacts: false });
  for (const operator of OPERATORS.values())
    engine.addOperator(operator.name, (fact: FactValue | null, operand: Operand | null) =>
      holds(operator, fact, operand),
    );
  return engine;
}

function engineRule(rule: Rule): EngineRule {
  const condition = engineCondition(rule.when, rule.scope);
  // A single comparison needs a group around it at the top.
  const conditions = ("fact" in condition ? { all: [condition] } : condition) as TopLevelCondition;
  return new EngineRule({ name: rule.id, conditions, event: { type: rule.effect } });
}

type EngineCondition = { readonly priority: number } & (
  | { readonly fact: string; readonly operator: string; readonly value: unknown }
  | { readonly all: readonly EngineCondition[] }
  | { readonly any: readonly EngineCondition[] }
  | { readonly not: EngineCondition }
);

function engineCondition(condition: Condition, scope: RuleScope): EngineCondition {
  const lowest = (members: readonly EngineCondition[]): number => Math.min(...members.map((member) => member.priority));
  if ("all" in condition) {
    const all = condition.all.map((member) => engineCondition(member, scope));
    return { all, priority: lowest(all) };
  }
  if ("any" in condition) {
    const any = condition.any.map((member) => engineCondition(member, scope));
    return { any, priority: lowest(any) };
  }
  if ("not" in condition) {
    const not = engineCondition(condition.not, scope);
    return { not, priority: not.priority };
  }
  const catalogue = factsOfScope(scope);
  const definitions = factsReadBy(condition).map((name) => catalogue.get(name));
  const priority = definitions.some((definition) => definition?.optional === true)
    ? OPTIONAL_PRIORITY
    : definitions.some((definition) => definition?.type === "number")
      ? CERTAIN_PRIORITY
      : GUARD_PRIORITY;
  return { fact: condition.fact, operator: condition.operator, value: condition.value, priority };
}
