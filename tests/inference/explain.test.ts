import { describe, expect, it } from "vitest";
import { createRuleRunner, idleRules, loadRules, nearMisses } from "../../src/inference/index.ts";
import { fillStatement } from "../../src/inference/statement.ts";
import { neutralFacts } from "../../src/inference/neutral-facts.ts";
import { planted, SOUND_RULE } from "./planted-rule.ts";

const EXCLUDES = {
  ...SOUND_RULE,
  id: "planted/excluded",
  when: {
    all: [
      { fact: "maskAgents", operator: "contains", value: "cyanide" },
      {
        any: [
          { fact: "pH", operator: "below", value: 9.5 },
          { fact: "heats", operator: "is", value: true },
        ],
      },
    ],
  },
  effect: "excludes",
  weight: undefined,
  statement: "At pH {pH|fixed1}.",
  examples: { fires: [{ maskAgents: ["cyanide"], pH: 9 }], silent: [{ maskAgents: ["cyanide"], pH: 9.5 }] },
};
const base = loadRules(planted(EXCLUDES, SOUND_RULE));
const stage = neutralFacts("stage");

describe("nearMisses", () => {
  it("tells of a rule that excludes and failed by one comparison, with the value seen", () => {
    const found = nearMisses(base, "stage", { ...stage, maskAgents: ["cyanide"], pH: 10 });
    expect(found.map(({ rule, statement, facts }) => ({ rule, statement, facts }))).toEqual([
      {
        rule: "planted/excluded",
        statement: "excludes only where pH below 9.5 (here 10)",
        facts: { maskAgents: ["cyanide"], pH: 10, heats: false },
      },
    ]);
  });

  it("keeps silent where a rule fired, failed by two comparisons, or only disfavours", () => {
    expect(nearMisses(base, "stage", { ...stage, maskAgents: ["cyanide"], pH: 9 })).toEqual([]);
    expect(nearMisses(base, "stage", { ...stage, pH: 10 })).toEqual([]);
    expect(nearMisses(base, "stage", { ...stage, pH: 10, sharpnessPercent: 0.5 })).toEqual([]);
  });

  it("is offered by the runner, which refuses facts that the catalogue does not describe", () => {
    const runner = createRuleRunner(base);
    expect(runner.nearMisses("stage", { ...stage, maskAgents: ["cyanide"], pH: 10 })).toHaveLength(1);
    expect(() => runner.nearMisses("stage", { pH: 10 })).toThrow(/is missing/);
  });
});

describe("idleRules", () => {
  it("lists the rules that fired nowhere", () => {
    expect(idleRules(base, ["planted/excluded", "planted/excluded"])).toEqual(["planted/soft-end-point"]);
    expect(idleRules(base, base.byId.keys())).toEqual([]);
  });
});

describe("fillStatement", () => {
  it.each([
    ["{x}", { x: 0.00012345 }, "1.2e-4"],
    ["{x}", { x: 12.3456 }, "12.3"],
    ["{x}", { x: 0 }, "0"],
    ["{x|percent} of it", { x: 0.5123 }, "0.51 % of it"],
    ["{x|share}", { x: 0.0207 }, "2.1 %"],
    ["{x|sci}", { x: 31000000 }, "3.1e7"],
    ["{x|fixed1} and {x|fixed2}", { x: 9.49 }, "9.5 and 9.49"],
    ["{x|molPerL}", { x: 0.00021 }, "2.1e-4 mol/L"],
    ["{x|mL}", { x: 12.34 }, "12.3 mL"],
    ["{x}", { x: ["Ca2+", "Mg2+", "Sr2+"] }, "Ca2+, Mg2+ and Sr2+"],
    ["{x|or}", { x: ["heat", "boil"] }, "heat or boil"],
    ["{x}", { x: [] }, "none"],
    ["{x}", { x: true }, "true"],
  ])("writes %s", (template, facts, expected) => {
    expect(fillStatement(template, facts)).toBe(expected);
  });

  it("throws where a fact has no value", () => {
    expect(() => fillStatement("{y}", { x: 1 })).toThrow(/y, which has no value/);
  });
});
