import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { RuleError } from "../errors.ts";
import { checkRule } from "./check-rule.ts";
import { readCondition, reportIssues, ruleFileFrame, ruleFrame, type Report, type Rule } from "./rule-schema.ts";
import type { RuleScope } from "./types.ts";

/** A rule file as read: its name within the folder and its text. */
export interface RuleFile {
  readonly name: string;
  readonly text: string;
}

/** Checked rules, in the order of files and of their places in them. */
export interface RuleBase {
  readonly rules: readonly Rule[];
  readonly byId: ReadonlyMap<string, Rule>;
  readonly byScope: Readonly<Record<RuleScope, readonly Rule[]>>;
  /** What each file says it is about, by topic. */
  readonly topics: ReadonlyMap<string, string>;
  /** The text of all files in order, for the content hash of the knowledge. */
  readonly content: string;
}

const SUFFIX = ".rules.json";

/**
 * Reads the rule files of a folder (names ending in `.rules.json`), sorted by name.
 * @throws RuleError where the folder cannot be read or holds no rule file.
 */
export function readRuleFiles(folder: string): readonly RuleFile[] {
  let names: readonly string[];
  try {
    names = readdirSync(folder)
      .filter((name) => name.endsWith(SUFFIX))
      .sort();
  } catch (cause) {
    throw new RuleError(folder, "$", "this folder of rules cannot be read", cause);
  }
  if (names.length === 0) throw new RuleError(folder, "$", `no file ends in ${SUFFIX}`);
  return names.map((name) => ({ name, text: readFileSync(join(folder, name), "utf8") }));
}

/** Reads and checks rule files, collecting every fault; the rules returned are the sound ones. */
export function inspectRules(files: readonly RuleFile[]): {
  readonly base: RuleBase;
  readonly faults: readonly RuleError[];
} {
  const faults: RuleError[] = [];
  const rules: Rule[] = [];
  const topics = new Map<string, string>();
  const seen = new Map<string, string>();
  for (const file of files)
    for (const { raw, topic, path } of rulesOfFile(file, topics, faults)) {
      const id = idOf(raw) ?? file.name;
      const report: Report = (at, message) => faults.push(new RuleError(id, `${file.name} ${path}${at}`, message));
      const before = faults.length;
      const rule = readRule(raw, topic, file.name, report);
      const first = seen.get(id);
      if (first !== undefined) report(".id", `this id stands already in ${first}`);
      seen.set(id, file.name);
      if (rule !== null) checkRule(rule, report);
      if (rule !== null && faults.length === before) rules.push(rule);
    }
  const of = (scope: RuleScope): readonly Rule[] => rules.filter((rule) => rule.scope === scope);
  const base: RuleBase = {
    rules,
    byId: new Map(rules.map((rule) => [rule.id, rule])),
    byScope: { method: of("method"), stage: of("stage"), component: of("component") },
    topics,
    content: files.map((file) => `${file.name}\n${file.text}`).join("\n"),
  };
  return { base, faults };
}

/**
 * Loads rules from a folder, or from files already read (a laboratory's own beside the built-in ones).
 * @throws RuleError, the first fault found, with the rule's id, file and JSON path.
 */
export function loadRules(source: string | readonly RuleFile[]): RuleBase {
  const { base, faults } = inspectRules(typeof source === "string" ? readRuleFiles(source) : source);
  if (faults[0] !== undefined) throw faults[0];
  return base;
}

function idOf(raw: unknown): string | null {
  const id = typeof raw === "object" && raw !== null && "id" in raw ? raw.id : null;
  return typeof id === "string" && id !== "" ? id : null;
}

function rulesOfFile(file: RuleFile, topics: Map<string, string>, faults: RuleError[]) {
  const report: Report = (at, message) => faults.push(new RuleError(file.name, `$${at}`, message));
  let raw: unknown;
  try {
    raw = JSON.parse(file.text);
  } catch (cause) {
    faults.push(
      new RuleError(file.name, "$", `not JSON: ${cause instanceof Error ? cause.message : String(cause)}`, cause),
    );
    return [];
  }
  const parsed = ruleFileFrame.safeParse(raw);
  if (!parsed.success) {
    reportIssues(parsed.error, "", report);
    return [];
  }
  const { topic, about, rules } = parsed.data;
  topics.set(topic, about);
  return rules.map((rule, i) => ({ raw: rule, topic, path: `$.rules[${i}]` }));
}

function readRule(raw: unknown, topic: string, file: string, report: Report): Rule | null {
  const parsed = ruleFrame.safeParse(raw);
  if (!parsed.success) reportIssues(parsed.error, "", report);
  const when =
    typeof raw === "object" && raw !== null && "when" in raw ? readCondition(raw.when, ".when", report) : null;
  if (!parsed.success || when === null) return null;
  const { id, weight = 0, per = null, requires = null, reservation = false, ...rest } = parsed.data;
  if (!id.startsWith(`${topic}/`)) report(".id", `expected an id of this file's topic, ${topic}/…`);
  return { ...rest, id, topic, file, when, weight, per, requires, reservation };
}
