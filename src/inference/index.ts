/** The public door of the rule layer. */
export { FACT_CATALOGUE, factsOfScope } from "./fact-catalogue.ts";
export { wordsOfFact } from "./fact-words.ts";
export { OPERATORS } from "./operators.ts";
export { inspectRules, loadRules, readRuleFiles, type RuleBase, type RuleFile } from "./load-rules.ts";
export { checkRules } from "./check-rules.ts";
export { createRuleRunner, type RuleQuestion, type RuleRunner } from "./run-rules.ts";
export { idleRules, inWords, nearMisses, type NearMiss } from "./explain.ts";
export { leavesOf } from "./conditions.ts";
export type { Condition, Leaf, Rule } from "./rule-schema.ts";
export type { FactDefinition, Facts, FactValue, RuleEffect, RuleFinding, RuleScope } from "./types.ts";
