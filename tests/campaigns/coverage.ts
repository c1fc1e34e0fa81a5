import type { Knowledge } from "../../src/constants/knowledge.ts";
import type { Facts, Rule, RuleRunner, RuleScope } from "../../src/inference/index.ts";
import { FACT_CATALOGUE } from "../../src/inference/index.ts";
import { openEngine } from "../../src/main.ts";
import type { Campaign, CampaignOptions, CampaignReport } from "./campaign.ts";
import { knowledgeCounts } from "./knowledge-counts.ts";
import { EFFECTS, type EffectCounts, type RuleEffects, ruleEffects } from "./rule-effects.ts";
import { type Done, workList, workThrough, type WorkItem } from "./work-list.ts";

/** Which rules speak, and which of them change an answer when they are left out. */
export const coverageCampaign: Campaign = {
  name: "coverage",
  about: "which rules fire over many briefs, and what each changes when it is taken away",
  run: (options) => runCoverage(workList(options), options),
};

/** What one brief has to say of the rules, and which facts it produced ("scope name"). */
interface Covered {
  readonly rules: RuleEffects;
  readonly facts: readonly string[];
}

/** Asks every brief; a rule is idle when it fires for none of the methods of any brief. */
export async function runCoverage(
  items: readonly WorkItem[],
  options: Pick<CampaignOptions, "out" | "print">,
): Promise<CampaignReport> {
  const { knowledge, ruleBase, rules } = await openEngine();
  const done = await workThrough<Covered>(
    items,
    options,
    (index) => covered(items[index]!, knowledge, rules),
    (error) => {
      options.print(`THROWS ${String(error)}`);
      return { rules: {}, facts: [] };
    },
  );
  const totals = totalsOf(done);
  const kinds = new Map(ruleBase.rules.map((rule) => [rule, kindOf(rule, totals.get(rule.id))]));
  const of = (kind: Kind): string[] => ruleBase.rules.filter((rule) => kinds.get(rule) === kind).map(({ id }) => id);
  const producedFacts = new Set(done.flatMap(({ result }) => result.facts));
  const idle = of("idle");
  const figures = {
    briefs: done.length,
    rules: ruleBase.rules.length,
    fired: ruleBase.rules.length - idle.length,
    decides: of("decides").length,
    onlySays: of("only says").length,
    weighsOnly: of("weighs only").length,
    unseen: of("unseen"),
    idle,
    factsNeverProduced: FACT_CATALOGUE.map(({ scope, name }) => `${scope} ${name}`).filter(
      (f) => !producedFacts.has(f),
    ),
    knowledge: knowledgeCounts(knowledge),
  };
  const lines = [
    ["rule".padEnd(52), ...EFFECTS.map((effect) => effect.padStart(9)), "  kind"].join(""),
    ...ruleBase.rules.map((rule) => {
      const counts = totals.get(rule.id);
      const columns = EFFECTS.map((effect) => String(counts?.[effect] ?? 0).padStart(9)).join("");
      return `${rule.id.padEnd(52)}${columns}  ${kinds.get(rule)}`;
    }),
  ];
  return { figures, holds: idle.length === 0, lines };
}

type Kind = "decides" | "only says" | "weighs only" | "unseen" | "idle";

/** What a rule does at all: decides something, is shown without deciding, weighs without ever tipping, fires on what nobody sees, nothing. */
function kindOf(rule: Rule, counts: EffectCounts | undefined): Kind {
  if (counts === undefined || counts.fired === 0) return "idle";
  if (counts.first + counts.order + counts.rejected + counts.reasons + counts.verdict > 0) return "decides";
  if (counts.shown === 0) return "unseen";
  return rule.effect === "cautions" ? "only says" : "weighs only";
}

function totalsOf(done: readonly Done<Covered>[]): Map<string, EffectCounts> {
  const totals = new Map<string, EffectCounts>();
  for (const { result } of done)
    for (const [rule, effects] of Object.entries(result.rules)) {
      const before = totals.get(rule);
      const sum = EFFECTS.map((effect) => [effect, (before?.[effect] ?? 0) + effects[effect]] as const);
      totals.set(rule, Object.fromEntries(sum) as EffectCounts);
    }
  return totals;
}

async function covered({ brief }: WorkItem, knowledge: Knowledge, rules: RuleRunner): Promise<Covered> {
  const facts = new Set<string>();
  const note = (scope: RuleScope, of: Facts): void => {
    for (const name of Object.keys(of)) facts.add(`${scope} ${name}`);
  };
  const listening: RuleRunner = {
    ...rules,
    run: (scope, of) => {
      note(scope, of);
      return rules.run(scope, of);
    },
    runAll: (questions) => {
      for (const question of questions) note(question.scope, question.facts);
      return rules.runAll(questions);
    },
  };
  return { rules: await ruleEffects(brief, knowledge, listening), facts: [...facts] };
}
