import { Engine, type RuleProperties, type TopLevelCondition } from "json-rules-engine";
import { assertFacts } from "./check-facts.ts";
import { factsReadBy, leavesOf } from "./conditions.ts";
import { findingOf, nearMisses, type NearMiss } from "./explain.ts";
import { factsOfScope } from "./fact-catalogue.ts";
import type { RuleBase } from "./load-rules.ts";
import { holds, OPERATORS, type Operand } from "./operators.ts";
import type { Condition, Rule } from "./rule-schema.ts";
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
 * Prepares one engine per scope, with the catalogued operators only. Each engine runs one set of facts at a time: overlapping runs of one
 * engine lose rules.
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
        const key = `${scope} ${engines[scope].keyOf(facts)}`;
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

class ScopeEngine {
  readonly #scope: RuleScope;
  readonly #rules: readonly Rule[];
  readonly #engine: Engine;
  readonly #reads: readonly string[]; // facts some rule of the scope looks at
  #last: Promise<unknown> = Promise.resolve();

  constructor(scope: RuleScope, rules: readonly Rule[]) {
    this.#scope = scope;
    this.#rules = rules;
    this.#reads = [...new Set(rules.flatMap((rule) => leavesOf(rule.when).flatMap(factsReadBy)))];
    this.#engine = engineFor(scope, rules);
  }

  keyOf(facts: Facts): string {
    return JSON.stringify(
      Object.keys(facts)
        .sort()
        .map((name) => [name, facts[name]]),
    );
  }

  run(facts: Facts): Promise<readonly RuleFinding[]> {
    assertFacts(this.#scope, facts);
    const turn = this.#last.then(() => this.#runNow(facts));
    this.#last = turn.catch(() => undefined);
    return turn;
  }

  async #runNow(facts: Facts): Promise<readonly RuleFinding[]> {
    if (this.#rules.length === 0) return [];
    // A number that does not exist is null to the operators, never undefined: the engine would refuse the whole run.
    const read: Record<string, FactValue | null> = {};
    for (const name of this.#reads) read[name] = facts[name] ?? null;
    const { results, failureResults } = await this.#engine.run(read);
    if (results.length + failureResults.length !== this.#rules.length)
      throw new TypeError(
        `the engine answered for ${results.length + failureResults.length} of ${this.#rules.length} rules`,
      );
    const fired = new Set(results.map((result) => result.name));
    return this.#rules.filter((rule) => fired.has(rule.id)).map((rule) => findingOf(rule, facts));
  }
}

function engineFor(scope: RuleScope, rules: readonly Rule[]): Engine {
  const engine = new Engine([], { allowUndefinedFacts: false });
  for (const operator of OPERATORS.values())
    engine.addOperator(operator.name, (fact: FactValue | null, operand: Operand | null) =>
      holds(operator, fact, operand),
    );
  for (const rule of rules) {
    const condition = engineCondition(rule.when, scope);
    // A single comparison needs a group around it at the top.
    const conditions = ("fact" in condition ? { all: [condition] } : condition) as TopLevelCondition;
    const properties: RuleProperties = { name: rule.id, conditions, event: { type: rule.effect } };
    engine.addRule(properties);
  }
  return engine;
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
