import { describe, expect, it } from "vitest";
import { createRuleRunner, factsOfScope, loadRules, type Facts } from "../../src/inference/index.ts";
import { conditionHolds } from "../../src/inference/conditions.ts";
import { neutralFacts } from "../../src/inference/neutral-facts.ts";
import { OPERATORS } from "../../src/inference/operators.ts";
import { planted, SOUND_RULE } from "./planted-rule.ts";

const SHARP = { solutionStatus: "converged", sharpnessPercent: 0.6 };
const stage = (facts: Facts): Facts => ({ ...neutralFacts("stage"), ...facts });
const runner = createRuleRunner(loadRules(planted(SOUND_RULE)));
const builtIn = loadRules(new URL("../../rules", import.meta.url).pathname);

describe("createRuleRunner", () => {
  it("reports a rule that fires with its statement filled and only the facts it looked at", async () => {
    expect(await runner.run("stage", stage(SHARP))).toEqual([
      {
        rule: "planted/soft-end-point",
        effect: "disfavours",
        weight: -4,
        reservation: false,
        requires: null,
        statement: "The end point with xylenol orange is read to 0.6 %.",
        facts: { ...SHARP, detection: "visual", indicator: "xylenol-orange" },
        rationale: SOUND_RULE.rationale,
        source: "Invented for the tests",
        basis: "common practice",
      },
    ]);
    expect(await runner.run("method", neutralFacts("method"))).toEqual([]);
  });

  it("stays silent where a number does not exist", async () => {
    expect(await runner.run("stage", stage({}))).toEqual([]);
    expect(await runner.run("stage", stage({ solutionStatus: "failed" }))).toEqual([]);
  });

  it("loses no rule when two hundred runs are asked for at once", async () => {
    const limits = Array.from({ length: 40 }, (_, i) => i / 40);
    const rules = limits.map((limit, i) => ({
      ...SOUND_RULE,
      id: `planted/limit-${i}`,
      when: { all: [SOUND_RULE.when.all[0], { fact: "sharpnessPercent", operator: "above", value: limit }] },
      statement: "Read to {sharpnessPercent}.",
      examples: { fires: [{ sharpnessPercent: 1 }], silent: [{ sharpnessPercent: limit }] },
    }));
    const many = createRuleRunner(loadRules(planted(...rules)));
    const asked = Array.from({ length: 200 }, (_, k) => (k % 41) / 40 + 1 / 80);
    const answers = await Promise.all(asked.map((sharpnessPercent) => many.run("stage", stage({ sharpnessPercent }))));
    expect(answers.map((findings) => findings.length)).toEqual(
      asked.map((sharpness) => limits.filter((limit) => sharpness > limit).length),
    );
  });

  it("answers a batch in the order asked, as single runs would", async () => {
    const questions = [{ ...SHARP }, {}, { ...SHARP, detection: "photometric" }, { ...SHARP }].map((facts) => ({
      scope: "stage" as const,
      facts: stage(facts),
    }));
    const batch = await runner.runAll(questions);
    expect(batch.map((findings) => findings.length)).toEqual([1, 0, 0, 1]);
    expect(batch).toEqual(await Promise.all(questions.map(({ scope, facts }) => runner.run(scope, facts))));
  });

  it.each([
    ["a fact that the catalogue does not have", stage({ sharpness: 1 }), /sharpness is no fact/],
    ["a fact of another scope", stage({ stageCount: 1 }), /stageCount is no fact of scope stage/],
    ["text for a number", stage({ pH: "5.5" }), /pH is to be a finite number/],
    ["NaN", stage({ pH: Number.NaN }), /pH is to be a finite number, found NaN/],
    ["infinity", stage({ sharpnessPercent: Number.POSITIVE_INFINITY }), /sharpnessPercent is to be a finite number/],
    ["a word outside its list", stage({ contrast: "excellent" }), /contrast is to be one of/],
    ["a fact that must exist and does not", { solutionStatus: "converged" }, /pH is missing/],
  ])("throws on %s", async (_, facts, says) => {
    await expect(async () => runner.run("stage", facts)).rejects.toThrow(says);
    await expect(runner.run("stage", stage(SHARP))).resolves.toHaveLength(1);
  });

  it("counts a weight per unit beyond the free ones, and no further than sixty points", async () => {
    const rule = {
      ...SOUND_RULE,
      scope: "method",
      when: { all: [{ fact: "reagentCount", operator: "above", value: 1 }] },
      statement: "{reagentCount} reagents.",
      weight: -3,
      per: { fact: "reagentCount", beyond: 1 },
      examples: { fires: [{ reagentCount: 2 }], silent: [{ reagentCount: 1 }] },
    };
    const counting = createRuleRunner(loadRules(planted(rule)));
    const weights = [1, 2, 5, 100].map(async (reagentCount) => {
      const findings = await counting.run("method", { ...neutralFacts("method"), reagentCount });
      return findings.map(({ weight }) => weight);
    });
    expect(await Promise.all(weights)).toEqual([[], [-3], [-12], [-60]]);
  });

  it("agrees with the plain evaluation of every built-in rule on five hundred random sets of facts", async () => {
    const built = createRuleRunner(builtIn);
    const random = lehmer(20261201);
    let fired = 0;
    for (const scope of ["method", "stage", "component"] as const)
      for (let k = 0; k < 170; k += 1) {
        const facts = randomFacts(scope, random);
        const expected = builtIn.byScope[scope].filter((rule) => conditionHolds(rule.when, facts)).map(({ id }) => id);
        const findings = await built.run(scope, facts);
        expect(findings.map(({ rule }) => rule)).toEqual(expected);
        fired += findings.length;
      }
    expect(fired).toBeGreaterThan(1000);
  });
});

describe("OPERATORS", () => {
  it("throw on numbers that are not finite, and compare finite ones", () => {
    for (const operator of OPERATORS.values()) {
      if (!operator.reads.includes("number")) continue;
      const operand = operator.operand === "range" ? [0, 1] : 1;
      for (const bad of [Number.NaN, Number.POSITIVE_INFINITY, "5"])
        expect(() => operator.holds(bad as never, operand as never), operator.name).toThrow(TypeError);
      expect(typeof operator.holds(0.5 as never, operand as never)).toBe("boolean");
    }
  });

  it("draw their borders as they say", () => {
    const at = (name: string, operand: unknown): readonly boolean[] =>
      [0.9, 1, 1.1, 2, 2.1].map((x) => OPERATORS.get(name)!.holds(x as never, operand as never));
    expect(at("below", 1)).toEqual([true, false, false, false, false]);
    expect(at("atMost", 1)).toEqual([true, true, false, false, false]);
    expect(at("above", 1)).toEqual([false, false, true, true, true]);
    expect(at("atLeast", 1)).toEqual([false, true, true, true, true]);
    expect(at("between", [1, 2])).toEqual([false, true, true, true, false]);
    expect(at("aboveUpTo", [1, 2])).toEqual([false, false, true, true, false]);
  });
});

/** Park and Miller's generator, uniform in (0, 1): the same numbers on every machine. */
function lehmer(seed: number): () => number {
  let state = seed % 2147483647;
  return () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
}

/** Facts drawn from the examples of the built-in rules, so that their words occur; numbers that may be absent are absent half the time. */
function randomFacts(scope: "method" | "stage" | "component", random: () => number): Facts {
  const examples = builtIn.byScope[scope].flatMap((rule) => [...rule.examples.fires, ...rule.examples.silent]);
  const drawn = Array.from({ length: 8 }, () => examples[Math.floor(random() * examples.length)] ?? {});
  const optional = [...factsOfScope(scope).values()].filter((fact) => fact.optional && random() < 0.5);
  const numbers = Object.fromEntries(optional.map((fact) => [fact.name, 4 * random() ** 3]));
  return Object.assign({}, neutralFacts(scope), numbers, ...drawn) as Facts;
}
