import { describe, expect, it } from "vitest";
import type { RuleFinding, RuleRunner, RuleScope } from "../../src/inference/index.ts";
import { judge, rank, type JudgedMethod } from "../../src/recommendation/judge.ts";
import { inventedPlan, inventedTask, KNOWLEDGE } from "../methods/invented.ts";
import { developed, underJudgement } from "./developed.ts";

const task = inventedTask({ "Zn2+": 0.008 });
const under = underJudgement(task, developed(task, inventedPlan({ preparation: ["warm"] })));

const finding = (change: Partial<RuleFinding>): RuleFinding => ({
  rule: "invented",
  effect: "favours",
  weight: 0,
  reservation: false,
  requires: null,
  statement: "Invented.",
  facts: {},
  rationale: "Invented for the test.",
  source: "invented",
  basis: "common practice",
  ...change,
});

/** Rules that say this of every question of a scope. */
const saying = (findings: Partial<Record<RuleScope, readonly RuleFinding[]>>): RuleRunner => ({
  run: (scope) => Promise.resolve(findings[scope] ?? []),
  runAll: (questions) => Promise.resolve(questions.map(({ scope }) => findings[scope] ?? [])),
  nearMisses: () => [],
});
const judged = (findings: Parameters<typeof saying>[0]) => judge(task, under, KNOWLEDGE, saying(findings));

describe("judge", () => {
  it("adds the points of method, titration and component, and knows which titration they are about", async () => {
    const { points, verdicts } = await judged({
      method: [finding({ weight: 3 })],
      stage: [finding({ weight: -5, effect: "disfavours" })],
      component: [finding({ weight: -1, effect: "disfavours" })],
    });
    expect(points).toBe(-3);
    expect(verdicts.map((v) => v.stage)).toEqual([null, 0, 0]);
  });
  it("excludes by an excluding rule and by a step that is required and missing, not by one that is there", async () => {
    const requires = (anyOf: readonly string[]) =>
      finding({ effect: "requires", requires: { kind: "preparation", anyOf } });
    expect((await judged({ method: [finding({ effect: "excludes" })] })).excludedBy).toHaveLength(1);
    expect((await judged({ stage: [requires(["boil", "heat"])] })).excludedBy).toHaveLength(1);
    expect((await judged({ stage: [requires(["boil", "warm"])] })).excludedBy).toEqual([]);
    expect((await judged({ method: [requires(["warm"])] })).excludedBy).toEqual([]);
  });
  it("says each reservation once", async () => {
    const { reservations } = await judged({
      stage: [finding({ effect: "cautions", reservation: true }), finding({ effect: "cautions", reservation: true })],
      component: [finding({ effect: "cautions", statement: "Only a caution." })],
    });
    expect(reservations).toEqual(["Invented."]);
  });
  it("compares the worst result with the requirement", async () => {
    const { meets, expandedPercent } = await judged({});
    expect(expandedPercent).toBe(100 * under.method.results[0]!.budget.expanded);
    expect(meets).toBe(true);
    const strict = await judge({ ...task, requirementPercent: expandedPercent * 0.999 }, under, KNOWLEDGE, saying({}));
    expect(strict.meets).toBe(false);
  });
});

describe("rank", () => {
  const base = {
    ...under,
    facts: {},
    verdicts: [],
    excludedBy: [],
    points: 0,
    expandedPercent: 0.5,
    meets: true,
    reservations: [],
  };
  const method = (id: string, change: Partial<JudgedMethod> = {}): JudgedMethod => ({
    ...base,
    ...change,
    method: { ...under.method, id },
  });
  const order = (...methods: JudgedMethod[]) => [...methods].sort(rank).map((m) => m.method.id);
  const excludedBy = [{ finding: finding({ effect: "excludes" }), stage: null }];
  it("puts feasible before not, then meeting before missing, then points, then the smaller uncertainty, then the id", () => {
    expect(
      order(
        method("excluded", { excludedBy, points: 99 }),
        method("missing", { meets: false, points: 50, expandedPercent: 1.2 }),
        method("b"),
        method("a"),
        method("sharper", { expandedPercent: 0.4 }),
        method("liked", { points: 1, expandedPercent: 0.9 }),
      ),
    ).toEqual(["liked", "sharper", "a", "b", "missing", "excluded"]);
  });
  it("orders those that miss by how far they miss, small differences aside", () => {
    const missing = (id: string, expandedPercent: number, points = 0) =>
      method(id, { meets: false, expandedPercent, points });
    expect(order(missing("far", 9, 20), missing("near", 1.5), missing("none", Number.POSITIVE_INFINITY, 90))).toEqual([
      "near",
      "far",
      "none",
    ]);
    expect(order(missing("plain", 1.5), missing("liked", 1.55, 5))).toEqual(["liked", "plain"]);
  });
});
