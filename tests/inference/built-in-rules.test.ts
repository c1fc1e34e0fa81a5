import { describe, expect, it } from "vitest";
import { checkRules, FACT_CATALOGUE, leavesOf, loadRules } from "../../src/inference/index.ts";
import { factFaults } from "../../src/inference/check-facts.ts";
import { loadKnowledge } from "../../src/constants/index.ts";
import { neutralFacts } from "../../src/inference/neutral-facts.ts";

const folder = new URL("../../rules", import.meta.url).pathname;
const base = loadRules(folder);
const knowledge = loadKnowledge();

describe("the built-in rules", () => {
  it("pass every check, their examples in the engine too", async () => {
    const { rules, faults } = await checkRules(folder);
    expect(faults.map((fault) => fault.message)).toEqual([]);
    expect(rules.length).toBeGreaterThanOrEqual(60);
  });

  it("cover the ten topics, one file each", () => {
    expect([...base.topics.keys()].sort()).toEqual(
      [
        "detection",
        "indicator",
        "indirect",
        "kinetics",
        "masking",
        "mode",
        "practicability",
        "precipitation",
        "precision",
        "release",
        "safety",
      ].sort(),
    );
    for (const rule of base.rules) expect(rule.file).toBe(`${rule.topic}.rules.json`);
  });

  it("show a value on each side of every limit that a rule sets alone", () => {
    const without = base.rules.flatMap((rule) => {
      const examples = [...rule.examples.fires, ...rule.examples.silent];
      return leavesOf(rule.when)
        .filter((leaf) => typeof leaf.value === "number")
        .filter((leaf) => new Set(examples.map((example) => example[leaf.fact])).size < 2)
        .map((leaf) => `${rule.id} ${leaf.fact}`);
    });
    expect(without).toEqual([]);
  });

  it("weigh single components lightly, for several of them add up", () => {
    const weights = base.byScope.component.map((rule) => rule.weight);
    expect(Math.min(...weights)).toBeGreaterThanOrEqual(-10);
    expect(Math.max(...weights)).toBe(0);
  });

  it("never let an extra titration gain points: what favours a titration weighs less than a further one costs", () => {
    const gain = base.byScope.stage.filter((rule) => rule.effect === "favours").map((rule) => rule.weight);
    const cost = base.byId.get("mode/further-titration")!.weight;
    expect(Math.max(...gain)).toBeLessThan(-cost);
  });

  it("refuse cyanide below 9.5, as its record does; the record of sulfide begins at 9 and needs no rule (EVALUATION: cyanide refused below 9.5, sulfide not below 9)", () => {
    expect(base.byId.get("safety/cyanide-below-9-5")?.effect).toBe("excludes");
    expect(knowledge.agents.get("cyanide")!.pH[0]).toBeGreaterThanOrEqual(9.5);
    expect(knowledge.agents.get("sulfide")!.pH[0]).toBeGreaterThanOrEqual(9);
    for (const row of knowledge.masking.filter(({ agent }) => agent === "sulfide" || agent === "cyanide"))
      expect(row.pH[0], `${row.agent} for ${row.ion}`).toBeGreaterThanOrEqual(9);
  });
});

describe("FACT_CATALOGUE", () => {
  it("names each fact once a scope, with a guard of the same scope for every number that may be absent", () => {
    const names = FACT_CATALOGUE.map((fact) => `${fact.scope} ${fact.name}`);
    expect(new Set(names).size).toBe(names.length);
    for (const fact of FACT_CATALOGUE) {
      expect(fact.optional).toBe(fact.guard !== null);
      if (fact.guard !== null) expect(names).toContain(`${fact.scope} ${fact.guard}`);
    }
  });

  it("is satisfied by the neutral facts, on which no rule but praise for precedent fires", () => {
    const firing = (["method", "stage", "component"] as const).flatMap((scope) => {
      expect(factFaults(scope, neutralFacts(scope))).toEqual([]);
      return base.byScope[scope].filter((rule) => rule.examples.fires.some((facts) => Object.keys(facts).length === 0));
    });
    expect(firing.map((rule) => rule.id)).toEqual(["indicator/use-published"]);
  });
});
